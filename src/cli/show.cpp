#include "chainmark/cli/show.hpp"

#include <array>

#include <nlohmann/json.hpp>

#include "chainmark/base/words.hpp"
#include "chainmark/casefile/case.hpp"
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
        entries.push_back(
            {family.name, {family.formula, family.remark, "parameters: " + join(parameters)}});
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
    }
    return list;
}

std::string routes_text() {
    std::vector<std::pair<std::string, std::vector<std::string>>> entries;
    for (const Route& route : routes()) {
        entries.push_back({to_string(route.id), {std::string(route.sentence)}});
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

/// A topic is a list that the program knows, or something said about an argument.
struct Topic {
    const char* name;
    const char* sentence;
    const char* argument;  ///< nullptr for a list
    std::string (*text)();
    Json (*json)();
    Checked<std::string> (*about)(const std::string& argument);
};

constexpr std::array topics = {
    Topic{"families", "the named Hamiltonians", nullptr, families_text, families_json, nullptr},
    Topic{
        "quantities", "what can be asked for", nullptr, quantities_text, quantities_json, nullptr},
    Topic{"routes", "the independent ways to a number", nullptr, routes_text, routes_json, nullptr},
    Topic{"cases", "the embedded cases", nullptr, cases_text, cases_json, nullptr},
    Topic{"symmetries",
          "the symmetries found in a case",
          "CASE",
          nullptr,
          nullptr,
          symmetries_of_case},
    Topic{"plan",
          "which route does what in a case, and at what cost",
          "CASE",
          nullptr,
          nullptr,
          plan_of_case},
    Topic{"terms", "the operator strings of a case", "CASE", nullptr, nullptr, terms_of_case},
    Topic{"example", "a complete case file for a family", "FAMILY", nullptr, nullptr, example_case},
};

int show_list(const Topic& topic, const std::string& json_path) {
    if (json_path.empty()) {
        return print_output(standard_output, topic.text());
    }
    return print_output(json_path, topic.json().dump(1) + '\n');
}

int show_about(const Topic& topic, const std::string& argument) {
    const Checked<std::string> text = topic.about(argument);
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
            sub->add_option(topic.argument, options.argument)->required();
        } else {
            sub->add_option("--json", options.json, "write it as JSON (-: to stdout)")
                ->type_name("FILE|-");
        }
    }
}

int show(const ShowOptions& options) {
    for (const Topic& topic : topics) {
        if (options.topic == topic.name) {
            return topic.argument == nullptr ? show_list(topic, options.json)
                                             : show_about(topic, options.argument);
        }
    }
    broken_invariant("a topic was parsed", __FILE__, __LINE__);
}

}  // namespace chainmark::cli
