// A program outside the project: one case, computed by the library.
#include <cstdio>
#include <memory>

#include <chainmark/plan/plan.hpp>

int main() {
    const auto parsed = chainmark::parse_case(
        "format = 1\n[system]\nsites = 6\n[hamiltonian]\nfamily = \"xx\"\nJ = 1.0\n"
        "[[quantity]]\nname = \"ground_energy\"\n",
        "consumer",
        {});
    if (!parsed) {
        std::puts(chainmark::to_string(parsed.error().front()).c_str());
        return 2;
    }
    const std::vector<chainmark::Case> cases = {*parsed};
    chainmark::Context context;
    context.memory = std::make_shared<chainmark::MemoryBudget>(1e9);
    const auto results = chainmark::Plan::make(cases)->run(context);
    const auto& energy = results.front().points.front().quantities.front();
    std::printf("%.10f %s\n",
                energy.references.front().value.real_at(0),
                chainmark::to_string(energy.comparison.verdict).c_str());
    return 0;
}
