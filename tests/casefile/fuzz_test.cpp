#include <random>

#include "casefile/case_text.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

const std::string seed_case = R"(format = 1 # remark
title = "a \u00e9 b"
[system]
sites = [3, 8, { x = 1 }]
boundary = { twist = 0.4 }
[parameters]
J1 = { from = 0.5, to = 1.5, count = 3 }
s = { from = 1, to = 5, step = 2 }
[hamiltonian]
family = "xxz"
J = 1.0
Delta = [0.5, -1e-3]
[[hamiltonian.term]]
operators = ["S+", "Sz^2"]
offsets = [0, 1]
coupling = { parameter = "J1", factor = 2 }
[[hamiltonian.term]]
operators = ["S+"]
sites = [2]
coupling = [{ re = 1, im = 2.0 }]
[[hamiltonian.term]]
operators = ["Sz"]
offsets = [0]
coupling = { uniform = [-1, 1], seed = "s" }
[[quantity]]
name = "spin_correlation"
pairs = [[0, 1], [1, 2]]
connected = true
tolerance = { absolute = 1e-9 }
[grid]
combine = "product"
[routes]
use = ["dense"]
)";

/// Every error is complete: words, and a place that exists.
void check_outcome(const std::string& text, const std::vector<Setting>& settings = {}) {
    const Checked<Case> result = parse_case(text, "c.toml", settings);
    if (result) {
        REQUIRE(!result->axes.empty());
        REQUIRE(parse_case(result->effective, "e.toml", {}).has_value());
        return;
    }
    REQUIRE(!result.error().empty());
    for (const Error& error : result.error()) {
        REQUIRE(!error.found.empty());
        REQUIRE(!error.where.source.empty());
        REQUIRE(error.where.line >= 0);
    }
}

std::string valid_case() {
    return changed(", { x = 1 }", "", seed_case);
}

}  // namespace

TEST_CASE("a case cut off at any byte gives a case or errors") {
    case_of(valid_case());
    const std::string text = valid_case();
    for (std::size_t size = 0; size < text.size(); ++size) {
        check_outcome(text.substr(0, size));
    }
}

TEST_CASE("a case with any line left out gives a case or errors") {
    const std::string text = valid_case();
    for (std::size_t start = 0; start < text.size();) {
        const std::size_t end = text.find('\n', start) + 1;
        check_outcome(text.substr(0, start) + text.substr(end));
        start = end;
    }
}

TEST_CASE("a case with changed bytes gives a case or errors") {
    std::mt19937 random(20240607);
    for (const std::string& text : {valid_case(), seed_case}) {
        for (int round = 0; round < 2000; ++round) {
            std::string spoilt = text;
            const auto changes = 1 + random() % 3;
            for (unsigned i = 0; i < changes; ++i) {
                const std::size_t at = random() % spoilt.size();
                if (random() % 2 == 0) {
                    spoilt[at] = static_cast<char>(random() % 256);
                } else {  // a piece from elsewhere, to stay near the grammar
                    spoilt.replace(
                        at, random() % 8, text.substr(random() % text.size(), random() % 12));
                }
            }
            check_outcome(spoilt);
        }
    }
}

TEST_CASE("settings with changed bytes give a case or errors") {
    std::mt19937 random(77);
    const std::vector<Setting> seeds = {{"sites", "[8, 12]"},
                                        {"hamiltonian.Delta", "{ from = 0, to = 1, count = 3 }"},
                                        {"routes.use", "[\"dense\"]"},
                                        {"boundary", "open"}};
    for (int round = 0; round < 2000; ++round) {
        Setting setting = seeds[random() % seeds.size()];
        std::string& spoilt = random() % 3 == 0 ? setting.key : setting.value;
        spoilt[random() % spoilt.size()] = static_cast<char>(random() % 256);
        check_outcome(valid_case(), {setting});
    }
}
