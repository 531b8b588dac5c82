#include <exception>

#include <CLI/CLI.hpp>
#include <fmt/format.h>

#include "chainmark/cli/arguments.hpp"
#include "chainmark/cli/exit_codes.hpp"
#include "chainmark/cli/run.hpp"
#include "chainmark/cli/show.hpp"

namespace chainmark::cli {
namespace {

int dispatch(int argc, char** argv) {
    CLI::App app("Reference values with error bounds for quantum spin chains", "chainmark");
    app.set_version_flag("--version", "chainmark " CHAINMARK_VERSION);
    app.require_subcommand(1);
    RunOptions run_options;
    ShowOptions show_options;
    const CLI::App* run_command = add_run(app, run_options);
    add_show(app, show_options);
    try {
        app.parse(argc, argv);
    } catch (const CLI::Success& help) {
        return app.exit(help);
    } catch (const CLI::ParseError& error) {
        fmt::print(stderr,
                   "chainmark: {}\nRun 'chainmark --help' for what there is.\n",
                   explain(app, error));
        return exit_wrong_input;
    }
    return run_command->parsed() ? run(run_options, command_line(argc, argv)) : show(show_options);
}

}  // namespace
}  // namespace chainmark::cli

int main(int argc, char** argv) {
    try {
        return chainmark::cli::dispatch(argc, argv);
    } catch (const std::exception& error) {
        fmt::print(stderr,
                   "chainmark: internal error: {}; this is a mistake in chainmark, please report "
                   "it with the command and the case\n",
                   error.what());
        return chainmark::cli::exit_internal_error;
    }
}
