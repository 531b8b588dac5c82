#include "chainmark/cli/show.hpp"

#include <array>

#include <nlohmann/json.hpp>

#include "chainmark/base/words.hpp"
#include "chainmark/casefile/case.hpp"
#include "chainmark/cli/arguments.hpp"
#include "chainmark/cli/embedded.hpp"
#include "chainmark/cli/example.hpp"
#include "chainmark/cli/exit_codes.hpp"
#include "chainmark/cli/output.hpp"
#include "chainmark/cli/show_case.hpp"
#include "chainmark/formats/files.hpp"
#include "chainmark/plan/plan.hpp"
#include "chainmark/report/text_layout.hpp"
#include "chainmark/report/words.hpp"

namespace chainmark::cli {
namespace {

using Json = nlohmann::ordered_json;

Json families_json() {
    Json list = Json::array();
    for (const Family& family : families()) {
        Json parameters = Json::array();
        for (const FamilyParameter& parameter : family.parameters) {
            parameters.push_back({{"name", parameter.name}, {"sentence", parameter.sentence}});
        }
        list.push_back({{"name", family.name},
                        {"formula", family.formula},
                        {"remark", family.remark},
                        {"needs", family_needs(family)},
                        {"parameters", std::move(parameters)}});
    }
    return list;
}

std::string families_text() {
    std::vector<std::pair<std::string, std::vector<std::string>>> entries;
    for (const Family& family : families()) {
        std::vector<std::string> parameters;
        for (const FamilyParameter& parameter : family.parameters) {
            parameters.push_back(parameter.name + " (" + parameter.sentence + ")");
        }
        std::vector<std::string> lines = {
            family.formula, family.remark, "parameters: " + join(parameters)};
        if (!family_needs(family).empty()) {
            lines.push_back("needs: " + family_needs(family));
        }
        entries.push_back({family.name, std::move(lines)});
    }
    return definition_list(entries) + "All take the uniform field h besides, 0 by default.\n";
}

std::vector<std::string> option_keys(const QuantitySpec& spec) {
    std::vector<std::string> keys;
    for (const OptionId option : spec.options) {
        keys.push_back(to_string(option));
    }
    return keys;
}

Json quantities_json() {
    Json list = Json::array();
    for (const QuantitySpec& spec : quantities()) {
        list.push_back({{"name", spec.name},
                        {"sentence", spec.sentence},
                        {"where", to_string(spec.where)},
                        {"when", to_string(spec.when)},
                        {"options", option_keys(spec)}});
    }
    return list;
}

std::string quantities_text() {
    std::vector<std::pair<std::string, std::vector<std::string>>> entries;
    for (const QuantitySpec& spec : quantities()) {
        std::vector<std::string> lines = {spec.sentence};
        lines.push_back(spec.where == Where::both ? "finite and infinite chains"
                                                  : to_string(spec.where) + " chains");
        lines.back() += spec.when == When::thermal  ? "; needs a temperature"
                        : spec.when == When::either ? "; ground state, or with a temperature"
                                                    : "; ground state";
        if (!spec.options.empty()) {
            lines.back() += "; options: " + join(option_keys(spec));
        }
        entries.push_back({spec.name, lines});
    }
    return definition_list(entries);
}

Json routes_json() {
    Json list = Json::array();
    for (const Route& route : routes()) {
        list.push_back({{"name", to_string(route.id)}, {"sentence", std::string(route.sentence)}});
        if (!route.lacks.empty()) {
            list.back()["lacks"] = std::string(route.lacks);
        }
    }
    return list;
}

std::string routes_text() {
    std::vector<std::pair<std::string, std::vector<std::string>>> entries;
    for (const Route& route : routes()) {
        entries.push_back({to_string(route.id), {std::string(route.sentence)}});
        if (!route.lacks.empty()) {
            entries.back().second.push_back("this build lacks: " + std::string(route.lacks));
        }
    }
    return definition_list(entries);
}

std::string title_of(const EmbeddedCase& embedded) {
    const Checked<Case> parsed = parse_case(embedded.text, embedded.name, {});
    CHAINMARK_EXPECTS(parsed.has_value());
    return parsed->title;
}

Json cases_json() {
    Json list = Json::array();
    for (const EmbeddedCase& embedded : embedded_cases()) {
        list.push_back(
            {{"name", embedded.name}, {"folder", embedded.folder}, {"title", title_of(embedded)}});
    }
    return list;
}

std::string cases_text() {
    TextTable table({{"name"}, {"folder"}, {"title"}});
    for (const EmbeddedCase& embedded : embedded_cases()) {
        table.add_row({{embedded.name}, {embedded.folder}, {title_of(embedded)}});
    }
    return table.text(0);
}

struct Argument {
    const char* name;
    const char* forms;
};

constexpr Argument case_argument = {"CASE", case_forms};
constexpr Argument family_argument = {"FAMILY", "a family of 'chainmark show families'"};

/// A topic is a list that the program knows, or something said about an argument.
struct Topic {
    const char* name;
    const char* sentence;
    std::string (*text)() = nullptr;
    Json (*json)() = nullptr;
    const Argument* argument = nullptr;  ///< nullptr for a list
    Checked<std::string> (*about)(const ShowOptions&) = nullptr;
};

Checked<std::string> about_symmetries(const ShowOptions& options) {
    return symmetries_of_case(options.argument, options.set);
}

Checked<std::string> about_plan(const ShowOptions& options) {
    return plan_of_case(options.argument, options.set);
}

Checked<std::string> about_terms(const ShowOptions& options) {
    return terms_of_case(options.argument, options.set);
}

Checked<std::string> about_example(const ShowOptions& options) {
    return example_case(options.argument);
}

constexpr std::array topics = {
    Topic{"families", "the named Hamiltonians", families_text, families_json},
    Topic{"quantities", "what can be asked for", quantities_text, quantities_json},
    Topic{"routes", "the independent ways to a number", routes_text, routes_json},
    Topic{"cases", "the embedded cases", cases_text, cases_json},
    Topic{.name = "symmetries",
          .sentence = "the symmetries found in a case",
          .argument = &case_argument,
          .about = about_symmetries},
    Topic{.name = "plan",
          .sentence = "which route does what in a case, and at what cost",
          .argument = &case_argument,
          .about = about_plan},
    Topic{.name = "terms",
          .sentence = "the operator strings of a case",
          .argument = &case_argument,
          .about = about_terms},
    Topic{.name = "example",
          .sentence = "a complete case file for a family",
          .argument = &family_argument,
          .about = about_example},
};

int show_list(const Topic& topic, const std::string& json_path) {
    if (json_path.empty()) {
        return print_output(standard_output, topic.text());
    }
    return print_output(json_path, topic.json().dump(1) + '\n');
}

int show_about(const Topic& topic, const ShowOptions& options) {
    const Checked<std::string> text = topic.about(options);
    if (!text) {
        print_errors(text.error());
        return exit_wrong_input;
    }
    return print_output(standard_output, *text);
}

}  // namespace

void add_show(CLI::App& app, ShowOptions& options) {
    CLI::App* command =
        app.add_subcommand("show", "Print what chainmark knows, or makes of a case");
    command->require_subcommand(1);
    for (const Topic& topic : topics) {
        CLI::App* sub = command->add_subcommand(topic.name, topic.sentence);
        sub->callback([&options, &topic] { options.topic = topic.name; });
        if (topic.argument != nullptr) {
            sub->add_option(topic.argument->name, options.argument, topic.argument->forms)
                ->required();
        }
        if (topic.argument == &case_argument) {
            add_set_option(*sub, options.set);
        }
        if (topic.json != nullptr) {
            takes_value(sub->add_option("--json", options.json, "write it as JSON (-: to stdout)"),
                        "FILE|-");
        }
    }
}

int show(const ShowOptions& options) {
    for (const Topic& topic : topics) {
        if (options.topic == topic.name) {
            return topic.argument == nullptr ? show_list(topic, options.json)
                                             : show_about(topic, options);
        }
    }
    broken_invariant("a topic was parsed", __FILE__, __LINE__);
}

}  // namespace chainmark::cli
