#pragma once

#include "chainmark/compare/compare.hpp"

namespace chainmark::cli {

/// What the program says to its caller.
enum ExitCode : int {
    exit_agree = 0,  ///< also `single`
    exit_differ = 1,
    exit_wrong_input = 2,
    exit_undecided = 3,
    exit_internal_error = 4,
    exit_interrupted = 130,
};

inline ExitCode exit_code(Verdict verdict) {
    switch (verdict) {
        case Verdict::differ:
            return exit_differ;
        case Verdict::undecided:
            return exit_undecided;
        case Verdict::agree:
        case Verdict::single:
            return exit_agree;
    }
    return exit_internal_error;
}

}  // namespace chainmark::cli
