#pragma once

#include <string>
#include <vector>

namespace chainmark::cli {

/// A case that is part of the program.
struct EmbeddedCase {
    std::string name;
    std::string folder;  ///< below cases/
    std::string text;
};

/// Every file of cases/, sorted by path.
const std::vector<EmbeddedCase>& embedded_cases();

}  // namespace chainmark::cli
