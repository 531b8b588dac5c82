#pragma once

#include <limits>
#include <memory>

#include <Eigen/Core>

#include "chainmark/base/context.hpp"
#include "chainmark/sector/halves_basis.hpp"
#include "chainmark/sector/hamiltonian.hpp"
#include "chainmark/sector/lanczos.hpp"

namespace chainmark::sector {

/// The lowest levels of one sector, found one after the other as they are asked for.
///
/// Up to `dense_limit` states the sector is solved completely by LAPACK. Above, levels come one by
/// one from Lanczos searches, each with all found vectors moved away, so every new level is the
/// lowest of what remains: a list is complete up to its last level (tested, not proved).
class Block {
public:
    /// Largest sector that is solved completely without being asked to.
    static constexpr double dense_limit = 400;
    /// Largest sector that is solved completely where all levels are wanted.
    static constexpr double complete_limit = 6000;

    Block() = default;
    Block(const Block&) = delete;
    Block& operator=(const Block&) = delete;
    virtual ~Block() = default;

    virtual double dim() const = 0;

    /// Makes the `count` lowest levels known, or all where there are fewer. Aim::value leaves their
    /// vectors unfit for anything but the energy. Throws std::runtime_error without convergence or
    /// memory, Interrupted on a stop request.
    virtual void extend(std::size_t count, Aim aim, const Context& context) = 0;

    /// Tries to prove that no level is missing below `energy` (within rounding), by counting those
    /// below a shift between it and the last known level. Does nothing where that would take long.
    virtual void count_up_to(double energy, const Context& context) = 0;

    /// All levels at once by LAPACK: O(dim^3).
    virtual void solve_completely(const Context& context) = 0;

    /// Drops the stored matrix.
    virtual void forget_operator() = 0;
    /// Drops basis, matrix and vectors; levels stay known. They are made again if asked for.
    virtual void forget() = 0;

    /// The amplitudes of a level's state over all configurations of the sector's up count (or
    /// parity), unit norm, with the gauge undone. Needs a level known to Aim::vector.
    virtual Eigen::VectorXcd expanded(std::size_t level,
                                      const HalvesBasis& configurations,
                                      const Context& context) const = 0;

    /// <i|A|i> for all known levels; A is Hermitian, commutes with the sector's group and conserves
    /// what the sector conserves (in the gauge of the Hamiltonian). Needs the vectors.
    virtual Eigen::VectorXd expectations(const std::vector<Term>& symmetric,
                                         const Context& context) const = 0;

    /// |<i|A|j>|^2 for all pairs of levels, the same A. Needs a complete solution with its vectors.
    virtual Eigen::MatrixXd squared_elements(const std::vector<Term>& symmetric,
                                             const Context& context) const = 0;

    std::size_t known() const { return energies_.size(); }
    /// Whether it was proved that the list of known levels has no gap below `energy`.
    bool counted_up_to(double energy) const { return energy <= counted_up_to_; }
    bool all_known() const { return static_cast<double>(known()) == dim(); }
    double energy(std::size_t level) const { return energies_[level]; }
    double bound(std::size_t level) const { return bounds_[level]; }
    /// ||H v - E v|| of a level's vector.
    double residual(std::size_t level) const { return residuals_[level]; }

protected:
    std::vector<double> energies_;
    std::vector<double> bounds_;
    std::vector<double> residuals_;
    double counted_up_to_ = -std::numeric_limits<double>::infinity();
};

/// `hamiltonian` must outlive the block.
std::unique_ptr<Block> make_block(const Sector& sector, const SectorHamiltonian& hamiltonian);

/// Bytes that finding the lowest level of a sector takes at least, and its rough duration.
struct BlockCost {
    double bytes = 0.0;
    double seconds = 0.0;
};
BlockCost cost_of_lowest(double dim, const SectorHamiltonian& hamiltonian, bool trivial_group);

}  // namespace chainmark::sector
