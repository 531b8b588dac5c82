#pragma once

#include <memory>
#include <vector>

#include "chainmark/fermion/angles.hpp"

namespace chainmark::fermion {

/// A set of occupied mode labels as the sorted labels at which occupation changes, so that a run of
/// occupied labels [a, b) costs two numbers however long it is.
class Occupation {
public:
    Occupation() = default;

    /// The labels for which `occupied` is true.
    explicit Occupation(const std::vector<bool>& occupied);

    /// Occupied becomes empty and the other way round.
    void flip(int label);

    /// visit(a, b) for every run of occupied labels a ... b-1.
    template <class Visit>
    void each_run(Visit&& visit) const {
        for (std::size_t i = 0; i + 1 < edges_.size(); i += 2) {
            visit(edges_[i], edges_[i + 1]);
        }
    }

    int runs() const { return static_cast<int>(edges_.size() / 2); }
    int particles() const;

private:
    void toggle_edge(int label);

    std::vector<int> edges_;
};

/// The single-particle states v^m_j of one parity class, sites j = 0 ... L-1, m the mode's label.
///   G_ij = <c+_i c_j> = sum over occupied m of conj(v^m_i) v^m_j.
class Orbitals {
public:
    Orbitals() = default;
    Orbitals(const Orbitals&) = delete;
    Orbitals& operator=(const Orbitals&) = delete;
    virtual ~Orbitals() = default;

    /// G_jj.
    virtual Real density(const Occupation& occupied, int site) const = 0;

    /// |G_ij|^2 for i != j.
    virtual Real coherence_squared(const Occupation& occupied, int i, int j) const = 0;

    /// Bound on the error of both, as a sum over the given orbitals.
    virtual Real error(const Occupation& occupied) const = 0;

    /// True where G_ij depends on j - i alone.
    virtual bool homogeneous() const { return false; }
};

/// v^m_j = exp(i k_m j) / sqrt(L), k_m = 2 pi m/L plus the same shift for all m.
std::unique_ptr<Orbitals> plane_waves(int sites);

/// v^m_j = sqrt(2/(L+1)) sin(pi (m+1) (j+1)/(L+1)) up to a phase that depends on j alone.
std::unique_ptr<Orbitals> standing_waves(int sites);

}  // namespace chainmark::fermion
