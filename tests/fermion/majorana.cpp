#include "chainmark/fermion/majorana.hpp"

#include "fermion/support.hpp"

// Pauli strings as Majorana products, against Kronecker products.

namespace chainmark::test {
namespace {

using fermion::MajoranaString;
using fermion::PauliFactor;
using fermion::PauliString;
using Matrix = Eigen::MatrixXcd;

/// A Pauli matrix of one site in the basis of bits (bit j = site j, 1 = up), by its action.
Matrix pauli(int sites, int site, Axis axis) {
    const int dimension = 1 << sites;
    Matrix matrix = Matrix::Zero(dimension, dimension);
    for (int state = 0; state < dimension; ++state) {
        const bool up = ((state >> site) & 1) != 0;
        const int flipped = state ^ (1 << site);
        switch (axis) {
            case Axis::x:
                matrix(flipped, state) = 1.0;
                break;
            case Axis::y:  // sy = -i (S+ - S-): |down> -> -i |up>, |up> -> i |down>
                matrix(flipped, state) = Complex(0.0, up ? 1.0 : -1.0);
                break;
            default:
                matrix(state, state) = up ? 1.0 : -1.0;
        }
    }
    return matrix;
}

/// g_{2j} = K_j sx_j and g_{2j+1} = K_j sy_j with K_j = prod_{l<j} (-sz_l).
Matrix majorana(int sites, int index) {
    const int site = index / 2;
    Matrix matrix = pauli(sites, site, index % 2 == 0 ? Axis::x : Axis::y);
    for (int l = 0; l < site; ++l) {
        matrix = -pauli(sites, l, Axis::z) * matrix;
    }
    return matrix;
}

Matrix matrix_of(int sites, const MajoranaString& string) {
    const int dimension = 1 << sites;
    Matrix product = string.phase() * Matrix::Identity(dimension, dimension);
    for (const int index : string.indices) {
        product = product * majorana(sites, index);
    }
    return product;
}

TEST_CASE("every Pauli string of four sites is one Majorana product, with and without P") {
    const int sites = 4;
    Matrix parity = Matrix::Identity(1 << sites, 1 << sites);
    for (int j = 0; j < sites; ++j) {
        parity = -pauli(sites, j, Axis::z) * parity;
    }
    for (int code = 0; code < 256; ++code) {
        PauliString string;
        Matrix expected = Matrix::Identity(1 << sites, 1 << sites);
        for (int j = 0; j < sites; ++j) {
            const int letter = (code >> (2 * j)) & 3;
            if (letter < 3) {
                const Axis axis = letter == 0 ? Axis::x : letter == 1 ? Axis::y : Axis::z;
                string.push_back({j, axis});
                expected = expected * pauli(sites, j, axis);
            }
        }
        const MajoranaString plain = fermion::majorana_string(string);
        const MajoranaString turned = fermion::majorana_string_times_parity(string, sites);
        CHECK((matrix_of(sites, plain) - expected).cwiseAbs().maxCoeff() == 0.0);
        CHECK((matrix_of(sites, turned) - expected * parity).cwiseAbs().maxCoeff() == 0.0);
        CHECK(plain.indices.size() + turned.indices.size() == 2 * sites);
        CHECK(std::is_sorted(plain.indices.begin(), plain.indices.end()));
    }
}

TEST_CASE("strings of Sz, S+ and S- as sums of Pauli strings") {
    const int sites = 3;
    const std::vector<SiteOperator> letters = {
        SiteOperator::z, SiteOperator::plus, SiteOperator::minus};
    for (int code = 0; code < 27; ++code) {
        OperatorString string;
        Matrix expected = Matrix::Identity(1 << sites, 1 << sites);
        for (int j = 0, rest = code; j < sites; ++j, rest /= 3) {
            const SiteOperator op = letters[at(rest % 3)];
            string.push_back({j, op});
            const Complex turn(0.0, op == SiteOperator::plus ? 1.0 : -1.0);
            const Matrix ladder = pauli(sites, j, Axis::x) + turn * pauli(sites, j, Axis::y);
            expected = expected * (op == SiteOperator::z ? pauli(sites, j, Axis::z) : ladder) / 2;
        }
        Matrix sum = Matrix::Zero(1 << sites, 1 << sites);
        for (const fermion::PauliTerm& term : fermion::pauli_terms(string)) {
            sum += term.coefficient * matrix_of(sites, fermion::majorana_string(term.string));
        }
        CHECK((sum - expected).cwiseAbs().maxCoeff() == 0.0);
    }
}

}  // namespace
}  // namespace chainmark::test
