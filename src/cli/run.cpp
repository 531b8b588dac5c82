#include "chainmark/cli/run.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <cstdlib>
#include <filesystem>
#include <thread>

#include <fmt/chrono.h>

#include "chainmark/cli/arguments.hpp"
#include "chainmark/cli/exit_codes.hpp"
#include "chainmark/cli/interrupt.hpp"
#include "chainmark/cli/output.hpp"
#include "chainmark/cli/progress.hpp"
#include "chainmark/cli/selection.hpp"
#include "chainmark/cli/sources.hpp"
#include "chainmark/formats/files.hpp"
#include "chainmark/report/csv.hpp"
#include "chainmark/report/json.hpp"
#include "chainmark/report/terminal.hpp"

namespace chainmark::cli {
namespace {

constexpr double gib = 1024.0 * 1024.0 * 1024.0;
constexpr double memory_share = 0.8;  // of what is free, by default
constexpr int most_threads = 4096;
constexpr int most_digits = 1000;

Error bad_option(const std::string& option, const std::string& found, const std::string& allowed) {
    return {ErrorCode::bad_option, {.source = option}, found, allowed};
}

template <class T>
void append_errors(Errors& errors, const Checked<T>& checked) {
    if (!checked) {
        errors.insert(errors.end(), checked.error().begin(), checked.error().end());
    }
}

bool is_stdout(const std::string& path) {
    return path == standard_output;
}

void check_output_file(const std::string& option, const std::string& path, Errors& errors) {
    if (path.empty() || is_stdout(path)) {
        return;
    }
    const Result<void> writable = check_writable(path);
    if (!writable) {
        Error error = writable.error();
        error.where.source = option + ' ' + path;
        errors.push_back(std::move(error));
    }
}

void check_outputs(const RunOptions& options, Errors& errors) {
    check_output_file("--json", options.json, errors);
    check_output_file("--csv", options.csv, errors);
    const bool encloses = std::any_of(
        routes().begin(), routes().end(), [](const Route& route) { return route.encloses; });
    if (options.digits.value_or(0) > Context{}.digits && !encloses) {
        errors.push_back(bad_option("--digits",
                                    std::to_string(*options.digits),
                                    "at most 15 in this build, which lacks ball arithmetic (Arb)"));
    }
    if (!options.json.empty() && options.json == options.csv) {
        errors.push_back(bad_option("--csv",
                                    "'" + options.csv + "' is where --json goes already",
                                    "send one of them to another file"));
    }
}

/// The number that is the whole of `text`.
template <class Number>
std::optional<Number> number_of(const std::string& text) {
    Number number = 0;
    const char* end = text.data() + text.size();
    const std::from_chars_result parsed = std::from_chars(text.data(), end, number);
    return parsed.ec == std::errc() && parsed.ptr == end ? std::optional(number) : std::nullopt;
}

CLI::ValidationError bad_number(const std::string& option,
                                const std::string& text,
                                const std::string& allowed) {
    return CLI::ValidationError(option, fmt::format("'{}' is not {}", text, allowed));
}

int threads_of(const std::string& text) {
    const auto threads = number_of<int>(text);
    if (!threads || *threads < 1 || *threads > most_threads) {
        throw bad_number(
            "--threads", text, fmt::format("a whole number from 1 to {}", most_threads));
    }
    return *threads;
}

int digits_of(const std::string& text) {
    const auto digits = number_of<int>(text);
    if (!digits || *digits < 1 || *digits > most_digits) {
        throw bad_number("--digits", text, fmt::format("a whole number from 1 to {}", most_digits));
    }
    return *digits;
}

double gib_of(const std::string& text) {
    const auto memory = number_of<double>(text);
    if (!memory || !std::isfinite(*memory) || *memory <= 0.0) {
        throw bad_number("--memory", text, "a number of GiB above 0");
    }
    return *memory;
}

/// An output must not replace a case that was read.
void check_overwriting(const RunOptions& options, const std::vector<Case>& cases, Errors& errors) {
    for (const std::string& path : {options.json, options.csv}) {
        for (const Case& c : cases) {
            std::error_code missing;
            if (!path.empty() && std::filesystem::equivalent(path, c.source, missing)) {
                errors.push_back({ErrorCode::cannot_write,
                                  {.source = path},
                                  "would replace a case of this run",
                                  "name another file"});
            }
        }
    }
}

/// The cases as they are to be run, or everything that is wrong with options and cases.
Checked<std::vector<Case>> prepared_cases(const RunOptions& options) {
    Errors errors;
    check_outputs(options, errors);
    const Checked<std::vector<Setting>> settings = parse_settings(options.set);
    append_errors(errors, settings);
    Checked<std::vector<Case>> cases =
        load_cases(options.cases, settings.value_or(std::vector<Setting>{}));
    append_errors(errors, cases);
    if (cases) {
        check_overwriting(options, *cases, errors);
    }
    if (!errors.empty()) {
        return tl::unexpected(std::move(errors));
    }
    if (options.only.empty()) {
        return cases;
    }
    return select_quantities(std::move(*cases), options.only).map_error([](Error error) {
        return Errors{std::move(error)};
    });
}

int default_threads() {
    return std::max(1, static_cast<int>(std::thread::hardware_concurrency()));
}

Provenance provenance(const RunOptions& options, const std::string& command_line) {
    Provenance made;
    made.version = CHAINMARK_VERSION;
    made.commit = CHAINMARK_COMMIT;
    made.compiler = CHAINMARK_COMPILER;
    made.threads = options.threads.value_or(default_threads());
    made.memory_gib = options.memory_gib.value_or(memory_share * available_memory() / gib);
    made.command_line = command_line;
    made.started = fmt::format("{:%Y-%m-%dT%H:%M:%SZ}", fmt::gmtime(std::time(nullptr)));
    return made;
}

RunReport compute(const Plan& plan,
                  Provenance provenance,
                  int digits,
                  const InterruptWatch& interrupts) {
    Context context;
    context.digits = digits;
    context.threads = provenance.threads;
    context.memory = std::make_shared<MemoryBudget>(provenance.memory_gib * gib);
    context.stop = interrupts.token();
    context.progress = terminal_progress();
    RunReport report;
    const auto begin = std::chrono::steady_clock::now();
    report.cases = plan.run(context);
    const std::chrono::duration<double> lasted = std::chrono::steady_clock::now() - begin;
    report.interrupted = interrupts.requested();
    provenance.wall_seconds = lasted.count();
    report.provenance = std::move(provenance);
    return report;
}

/// Files first: a reader of standard output may close it early. True if all went well.
bool write_reports(const RunReport& report, const RunOptions& options) {
    std::vector<Result<void>> written;
    if (!options.json.empty()) {
        written.push_back(write_output(options.json, run_json(report)));
    }
    if (!options.csv.empty()) {
        written.push_back(write_output(options.csv, run_csv(report)));
    }
    if (!is_stdout(options.json) && !is_stdout(options.csv)) {
        const bool colour = !options.no_color && stdout_shows_colour();
        written.push_back(write_output(
            standard_output, run_text(report, {.colour = colour, .quiet = options.quiet})));
    }
    bool all = true;
    for (const Result<void>& result : written) {
        if (!result) {
            print_errors({result.error()});
            all = false;
        }
    }
    return all;
}

}  // namespace

CLI::App* add_run(CLI::App& app, RunOptions& options) {
    CLI::App* command =
        app.add_subcommand("run", "Compute every case by every route and compare the routes");
    command->add_option("CASE", options.cases, case_forms)->required();
    takes_value(
        command->add_option("--json", options.json, "write everything as JSON (-: to stdout)"),
        "FILE|-");
    takes_value(command->add_option("--csv", options.csv, "write a long table (-: to stdout)"),
                "FILE|-");
    add_set_option(*command, options.set);
    takes_value(
        command->add_option("--only", options.only, "only quantities that match case/label"),
        "GLOB");
    command
        ->add_option_function<std::string>(
            "--threads",
            [&options](const std::string& text) { options.threads = threads_of(text); },
            "how many threads (default: all)")
        ->type_name("N");
    command
        ->add_option_function<std::string>(
            "--memory",
            [&options](const std::string& text) { options.memory_gib = gib_of(text); },
            "limit for big arrays (default: 80 % of free)")
        ->type_name("GiB");
    command
        ->add_option_function<std::string>(
            "--digits",
            [&options](const std::string& text) { options.digits = digits_of(text); },
            "certified digits where a route can enclose (more than 15)")
        ->type_name("N");
    command->add_flag("--quiet", options.quiet, "only what differs or is undecided, and one line");
    command->add_flag("--no-color", options.no_color, "no colours (as with NO_COLOR set)");
    return command;
}

int run(const RunOptions& options, const std::string& command_line) {
    InterruptWatch interrupts;
    const Checked<std::vector<Case>> cases = prepared_cases(options);
    if (!cases) {
        print_errors(cases.error());
        return exit_wrong_input;
    }
    const Checked<Plan> plan = Plan::make(*cases);
    if (!plan) {
        print_errors(plan.error());
        return exit_wrong_input;
    }
    const RunReport report = compute(*plan,
                                     provenance(options, command_line),
                                     options.digits.value_or(Context{}.digits),
                                     interrupts);
    const bool written = write_reports(report, options);
    if (report.interrupted) {
        // Library calls that cannot be stopped may still run on threads of their own.
        std::fflush(nullptr);
        std::_Exit(exit_interrupted);
    }
    return written ? exit_code(overall_verdict(report)) : exit_wrong_input;
}

}  // namespace chainmark::cli
