#include "chainmark/cli/arguments.hpp"

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
