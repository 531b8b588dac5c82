#include "bench/rings.hpp"

#include <stdexcept>
#include <thread>
#include <vector>

#include "chainmark/operators/hamiltonian.hpp"
#include "chainmark/sector/ground_proofs.hpp"

namespace chainmark::bench {

Ring xx(int sites) {
    return {"XX", 0.0, sites};
}

Ring heisenberg(int sites) {
    return {"Heisenberg", 1.0, sites};
}

Ring xxz(int sites) {
    return {"XXZ", 0.5, sites};
}

Ring ring_of(const std::string& name, int sites) {
    for (const Ring& ring : {xx(sites), heisenberg(sites), xxz(sites)}) {
        if (ring.name == name) {
            return ring;
        }
    }
    throw std::invalid_argument("no ring is called '" + name + "' (XX, Heisenberg, XXZ)");
}

Problem problem_of(const Ring& ring) {
    const Chain chain{.sites = ring.sites};
    const Family& family = *find_family("xxz");
    const double values[] = {1.0, ring.delta};
    const auto terms = family_terms(family, values, chain).value();
    TermList list = build_terms(chain, terms, Coincident::refuse, family.cell).value();
    return {chain, std::make_shared<const TermList>(std::move(list))};
}

sector::SectorHamiltonian hamiltonian_of(const Ring& ring) {
    const Problem problem = problem_of(ring);
    return {problem.chain,
            sector::find_symmetries(problem.chain, *problem.terms),
            problem.terms->terms};
}

sector::HalvesBasis full_sector(const Ring& ring) {
    return {sector::Packing(ring.sites, 1), sector::Conserved::up_count, ring.sites / 2};
}

sector::Sector ground_sector(const sector::SectorHamiltonian& hamiltonian) {
    const int half = hamiltonian.chain.length() / 2;
    for (const sector::Sector& one :
         sector::sectors_of(hamiltonian.chain, hamiltonian.symmetries)) {
        if (one.label.value == half && holds_positive_state(*hamiltonian.sign_rotation, one)) {
            return one;
        }
    }
    throw std::logic_error("no sector holds the positive state");
}

Context all_cores(double bytes) {
    Context context;
    context.threads = static_cast<int>(std::thread::hardware_concurrency());
    context.memory = std::make_shared<MemoryBudget>(bytes);
    return context;
}

}  // namespace chainmark::bench
