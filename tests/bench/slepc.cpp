/// bench_slepc RING SITES COUNT, run under mpirun: prints the seconds of the solution and the COUNT
/// lowest levels of the full Sz = 0 sector by SLEPc's default solver (Krylov-Schur) to 1e-12.

#include <stdexcept>
#include <vector>

#include <fmt/format.h>
#include <slepceps.h>

#include "bench/csr.hpp"
#include "bench/timing.hpp"

namespace chainmark::bench {
namespace {

void check(PetscErrorCode code) {
    if (code != 0) {
        throw std::runtime_error(fmt::format("PETSc reports error {}", code));
    }
}

/// The rows of this process. Each process counts its elements first, as PETSc advises.
Mat distributed_matrix(const Ring& ring) {
    const sector::SectorHamiltonian h = hamiltonian_of(ring);
    const sector::HalvesBasis basis = full_sector(ring);
    const auto dim = static_cast<PetscInt>(basis.dim());
    Mat matrix = nullptr;
    check(MatCreate(PETSC_COMM_WORLD, &matrix));
    check(MatSetSizes(matrix, PETSC_DECIDE, PETSC_DECIDE, dim, dim));
    check(MatSetType(matrix, MATAIJ));
    PetscInt first = 0;
    PetscInt last = 0;
    check(MatSetUp(matrix));
    check(MatGetOwnershipRange(matrix, &first, &last));
    const auto for_each_row = [&](auto&& use) {
        basis.for_each_in(0, basis.highs().size(), [&](std::int64_t index, sector::Word word) {
            if (index >= first && index < last) {
                use(static_cast<PetscInt>(index), csr_row(basis, h.packed, word));
            }
        });
    };
    std::vector<PetscInt> own(static_cast<std::size_t>(last - first));
    std::vector<PetscInt> others(own.size());
    for_each_row([&](PetscInt index, const CsrRow& row) {
        const auto at = static_cast<std::size_t>(index - first);
        for (const auto& element : row) {
            ++(element.first >= first && element.first < last ? own : others)[at];
        }
    });
    check(MatSeqAIJSetPreallocation(matrix, 0, own.data()));
    check(MatMPIAIJSetPreallocation(matrix, 0, own.data(), 0, others.data()));
    for_each_row([&](PetscInt index, const CsrRow& row) {
        std::vector<PetscInt> columns;
        std::vector<PetscScalar> values;
        for (const auto& element : row) {
            columns.push_back(element.first);
            values.push_back(element.second);
        }
        const auto count = static_cast<PetscInt>(columns.size());
        check(MatSetValues(matrix, 1, &index, count, columns.data(), values.data(), INSERT_VALUES));
    });
    check(MatAssemblyBegin(matrix, MAT_FINAL_ASSEMBLY));
    check(MatAssemblyEnd(matrix, MAT_FINAL_ASSEMBLY));
    return matrix;
}

void run(const Ring& ring, PetscInt count) {
    Mat matrix = distributed_matrix(ring);
    EPS solver = nullptr;
    check(EPSCreate(PETSC_COMM_WORLD, &solver));
    check(EPSSetOperators(solver, matrix, nullptr));
    check(EPSSetProblemType(solver, EPS_HEP));
    check(EPSSetWhichEigenpairs(solver, EPS_SMALLEST_REAL));
    check(EPSSetDimensions(solver, count, PETSC_DEFAULT, PETSC_DEFAULT));
    check(EPSSetTolerances(solver, 1e-12, PETSC_DEFAULT));
    const double seconds = seconds_of([&] { check(EPSSolve(solver)); });
    PetscInt converged = 0;
    check(EPSGetConverged(solver, &converged));
    if (converged < count) {
        throw std::runtime_error("SLEPc did not converge");
    }
    std::string line = fmt::format("{:.6g}", seconds);
    for (PetscInt i = 0; i < count; ++i) {
        PetscScalar value = 0.0;
        check(EPSGetEigenvalue(solver, i, &value, nullptr));
        line += fmt::format(" {:.17g}", value);
    }
    check(PetscPrintf(PETSC_COMM_WORLD, "%s\n", line.c_str()));
    check(EPSDestroy(&solver));
    check(MatDestroy(&matrix));
}

}  // namespace
}  // namespace chainmark::bench

int main(int argc, char** argv) {
    try {
        if (argc != 4) {
            throw std::invalid_argument("usage: bench_slepc RING SITES COUNT");
        }
        chainmark::bench::check(SlepcInitialize(&argc, &argv, nullptr, nullptr));
        chainmark::bench::run(chainmark::bench::ring_of(argv[1], std::stoi(argv[2])),
                              std::stoi(argv[3]));
        return SlepcFinalize() == 0 ? 0 : 1;
    } catch (const std::exception& error) {
        fmt::print(stderr, "bench_slepc: {}\n", error.what());
        return 1;
    }
}
