#include "chainmark/cli/arguments.hpp"

#include <fmt/format.h>

#include "chainmark/base/words.hpp"

namespace chainmark::cli {
namespace {

/// The innermost command that was recognised.
const CLI::App& innermost(const CLI::App& app) {
    const std::vector<CLI::App*> parsed = app.get_subcommands();
    return parsed.empty() ? app : innermost(*parsed.front());
}

std::vector<std::string> command_names(const CLI::App& app) {
    std::vector<std::string> names;
    for (const CLI::App* command : app.get_subcommands([](const CLI::App*) { return true; })) {
        names.push_back(command->get_name());
    }
    return names;
}

std::vector<std::string> option_names(const CLI::App& app) {
    std::vector<std::string> names;
    for (const CLI::Option* option : app.get_options()) {
        if (!option->get_positional()) {
            names.push_back(option->get_name());
        }
    }
    return names;
}

std::string unknown(const std::string& kind,
                    const std::string& word,
                    const std::vector<std::string>& allowed) {
    return "unknown " + kind + " '" + word + "'; " + suggestion(word, allowed);
}

/// The command that had to follow, or the argument with what it may be.
std::string missing_word(const CLI::App& command, const CLI::ParseError& error) {
    const std::vector<std::string> commands = command_names(command);
    if (!commands.empty()) {
        return fmt::format(
            "a command is missing after '{}'; there are: {}", command.get_name(), join(commands));
    }
    for (const CLI::Option* option : command.get_options()) {
        if (option->get_required() && option->count() == 0) {
            return fmt::format(
                "{} is missing; expected {}", option->get_name(), option->get_description());
        }
    }
    return error.what();
}

/// CLI11 starts its message with the option's name and a colon.
std::string wrong_number_of_values(const CLI::App& command, const CLI::ParseError& error) {
    const std::string_view text = error.what();
    const std::string name(text.substr(0, text.find(':')));
    const CLI::Option* option = command.get_option_no_throw(name);
    if (option == nullptr) {
        return error.what();
    }
    if (option->count() > static_cast<std::size_t>(option->get_expected_max())) {
        return fmt::format("{} is given {} times; expected once", name, option->count());
    }
    return fmt::format("{} has no value; expected {} {}", name, name, option->get_type_name());
}

/// `text` in single quotes where a shell would not take it as one plain word.
std::string shell_word(const std::string& text) {
    const std::string plain =
        "abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789-_./=+:,@%";
    if (!text.empty() && text.find_first_not_of(plain) == std::string::npos) {
        return text;
    }
    std::string quoted = "'";
    for (const char c : text) {
        quoted += c == '\'' ? std::string("'\\''") : std::string(1, c);
    }
    return quoted + "'";
}

}  // namespace

CLI::Option* takes_value(CLI::Option* option, const std::string& form) {
    return option->type_name(form)->check([form](const std::string& text) {
        const bool is_option = text.size() > 1 && text.starts_with('-');
        return is_option ? fmt::format("'{}' looks like an option; expected {}", text, form)
                         : std::string();
    });
}

void add_set_option(CLI::App& command, std::vector<std::string>& settings) {
    const std::string sentence = "replace a value of the cases, e.g. sites=12 (repeatable)";
    takes_value(command.add_option("--set", settings, sentence), "KEY=VALUE")
        ->allow_extra_args(false);
}

std::string explain(const CLI::App& app, const CLI::ParseError& error) {
    const CLI::App& command = innermost(app);
    for (const std::string& word : command.remaining()) {
        if (word.starts_with('-')) {
            return unknown("option", word.substr(0, word.find('=')), option_names(command));
        }
        const std::vector<std::string> commands = command_names(command);
        if (!commands.empty()) {
            return unknown("command", word, commands);
        }
    }
    if (dynamic_cast<const CLI::RequiredError*>(&error) != nullptr) {
        return missing_word(command, error);
    }
    if (dynamic_cast<const CLI::ArgumentMismatch*>(&error) != nullptr) {
        return wrong_number_of_values(command, error);
    }
    return error.what();
}

std::string command_line(int argc, const char* const* argv) {
    std::vector<std::string> words;
    for (int i = 0; i < argc; ++i) {
        words.push_back(shell_word(argv[i]));
    }
    return join(words, " ");
}

}  // namespace chainmark::cli
