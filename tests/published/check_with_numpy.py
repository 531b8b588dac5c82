"""chainmark against Hamiltonians built here from Kronecker products.

usage: check_with_numpy.py PROGRAM

Uses numpy and the conventions of the case format, nothing else: spin operators Sx, Sy, Sz; sites
0 ... L-1; on a ring S+_L = exp(-i twist) S+_0; -h sum Sz; expectation values averaged over the
ground space. Exit code 0 if every route's number for every quantity is within 1e-11 of numpy's.
"""

import functools
import json
import os
import subprocess
import sys
import tempfile

import numpy as np

ALLOWED = 1e-11
GROUND_SPACE = 1e-9  # no level of these cases lies between 1e-12 and 1e-3 above the lowest

UP = np.array([[0, 1], [0, 0]], dtype=complex)  # S+ in the basis (up, down)
SITE = {
    "S+": UP,
    "S-": UP.T,
    "Sx": (UP + UP.T) / 2,
    "Sy": (UP - UP.T) / 2j,
    "Sz": np.diag([0.5, -0.5]).astype(complex),
}

QUANTITIES = """
[[quantity]]
name = "ground_energy"
[[quantity]]
name = "gap"
[[quantity]]
name = "levels"
count = 12
[[quantity]]
name = "spectrum"
[[quantity]]
name = "magnetization"
[[quantity]]
name = "local_magnetization"
[[quantity]]
name = "spin_correlation"
axes = "zz"
pairs = [[0, 1], [1, 4], [2, 3], [0, 5]]
[[quantity]]
name = "spin_correlation"
label = "by_distance"
axes = "zz"
distance = [1, 2]
"""
PAIRS = [(0, 1), (1, 4), (2, 3), (0, 5)]


def product(sites, factors):
    """Product of operators at their sites, identity elsewhere; factors = {site: name}."""
    return functools.reduce(
        np.kron, [SITE[factors[j]] if j in factors else np.eye(2) for j in range(sites)]
    )


def zeros(sites):
    return np.zeros((2**sites, 2**sites), dtype=complex)


def field(sites, h):
    return -sum(h[j] * product(sites, {j: "Sz"}) for j in range(sites))


def bond(sites, i, j, x, y, z):
    return sum(c * product(sites, {i: s, j: s}) for c, s in ((x, "Sx"), (y, "Sy"), (z, "Sz")))


def ring(sites, x, y, z, h):
    terms = sum(bond(sites, j, (j + 1) % sites, x, y, z) for j in range(sites))
    return terms + field(sites, [h] * sites)


def hermitian(matrix):
    return matrix + matrix.conj().T


def xx_ring(sites, j, h):
    text = f"""
[system]
sites = {sites}
boundary = "periodic"
[hamiltonian]
family = "xx"
J = {j}
h = {h}
"""
    return f"XX ring of {sites}, J = {j}, h = {h}", text, ring(sites, j, j, 0.0, h)


def xxz_ring(sites, delta, h):
    text = f"""
[system]
sites = {sites}
boundary = "periodic"
[hamiltonian]
family = "xxz"
J = 0.8
Delta = {delta}
h = {h}
"""
    return f"XXZ ring of {sites}", text, ring(sites, 0.8, 0.8, 0.8 * delta, h)


def xy_ring(sites, gamma, h):
    text = f"""
[system]
sites = {sites}
boundary = "periodic"
[hamiltonian]
family = "xy"
J = 1.0
gamma = {gamma}
h = {h}
"""
    return f"XY ring of {sites}", text, ring(sites, 1 + gamma, 1 - gamma, 0.0, h)


def uneven_open_chain(sites, seed):
    """Own couplings on every bond and an own field on every site, two axes of fields."""
    random = np.random.default_rng(seed)
    flip, z, up_field, across = (
        random.uniform(-1, 1, n).tolist() for n in (sites - 1, sites - 1, sites, sites)
    )
    text = f"""
[system]
sites = {sites}
boundary = "open"
[[hamiltonian.term]]
operators = ["S+", "S-"]
offsets = [0, 1]
coupling = {flip}
add_conjugate = true
[[hamiltonian.term]]
operators = ["Sz", "Sz"]
offsets = [0, 1]
coupling = {z}
[[hamiltonian.term]]
operators = ["Sz"]
offsets = [0]
coupling = {up_field}
[[hamiltonian.term]]
operators = ["Sx"]
offsets = [0]
coupling = {across}
"""
    matrix = zeros(sites)
    for j in range(sites - 1):
        matrix += bond(sites, j, j + 1, 2 * flip[j], 2 * flip[j], z[j])
    for j in range(sites):
        matrix += up_field[j] * product(sites, {j: "Sz"}) + across[j] * product(sites, {j: "Sx"})
    return f"open chain with random couplings, seed {seed}", text, matrix


def uneven_hops(sites, seed):
    """As above without transverse fields and Sz Sz: free fermions."""
    random = np.random.default_rng(seed)
    hops, fields = (random.uniform(-1, 1, n).tolist() for n in (sites, sites))
    text = f"""
[system]
sites = {sites}
boundary = "periodic"
[[hamiltonian.term]]
operators = ["S+", "S-"]
offsets = [0, 1]
coupling = {hops}
add_conjugate = true
[[hamiltonian.term]]
operators = ["Sz"]
offsets = [0]
coupling = {fields}
"""
    matrix = -field(sites, fields)
    for j in range(sites):
        matrix += bond(sites, j, (j + 1) % sites, 2 * hops[j], 2 * hops[j], 0.0)
    return f"ring with random hops, seed {seed}", text, matrix


def twisted_ring(sites, phi, delta, h):
    text = f"""
[system]
sites = {sites}
boundary = {{ twist = {phi} }}
[hamiltonian]
family = "xxz"
J = 1.0
Delta = {delta}
h = {h}
"""
    matrix = field(sites, [h] * sites)
    for j in range(sites - 1):
        matrix += bond(sites, j, j + 1, 1.0, 1.0, delta)
    # wrap bond: S+_{L-1} S-_L = exp(i phi) S+_{L-1} S-_0
    wrap = np.exp(1j * phi) / 2 * product(sites, {sites - 1: "S+", 0: "S-"})
    matrix += hermitian(wrap) + bond(sites, sites - 1, 0, 0.0, 0.0, delta)
    return f"ring of {sites} with twist {phi}, Delta = {delta}", text, matrix


def twisted_complex_ring(sites, phi):
    """Complex hops, so that the sign of the twist matters."""
    title, text, matrix = twisted_ring(sites, phi, 0.0, 0.2)
    text += """
[[hamiltonian.term]]
operators = ["S+", "S-"]
offsets = [0, 2]
coupling = { re = 0.3, im = 0.45 }
add_conjugate = true
"""
    for j in range(sites):
        phase = np.exp(1j * phi) if j + 2 >= sites else 1.0
        factors = {j: "S+", (j + 2) % sites: "S-"}
        matrix = matrix + hermitian((0.3 + 0.45j) * phase * product(sites, factors))
    return title + ", complex hops", text, matrix


def complex_terms(sites):
    """Complex couplings, a three-site term over the wrap, a term on fixed sites."""
    text = f"""
[system]
sites = {sites}
boundary = "periodic"
[[hamiltonian.term]]
operators = ["S+", "S-"]
offsets = [0, 2]
coupling = {{ re = 0.3, im = 0.45 }}
add_conjugate = true
[[hamiltonian.term]]
operators = ["S+", "Sz", "S-"]
offsets = [0, 1, 2]
coupling = {{ re = 0.0, im = -0.7 }}
add_conjugate = true
[[hamiltonian.term]]
operators = ["Sx", "Sy"]
offsets = [0, 1]
coupling = 0.4
[[hamiltonian.term]]
operators = ["Sz", "Sy"]
sites = [1, 4]
coupling = 0.9
"""
    matrix = 0.9 * product(sites, {1: "Sz", 4: "Sy"})
    for j in range(sites):
        k, l = (j + 1) % sites, (j + 2) % sites
        matrix += hermitian((0.3 + 0.45j) * product(sites, {j: "S+", l: "S-"}))
        matrix += hermitian(-0.7j * product(sites, {j: "S+", k: "Sz", l: "S-"}))
        matrix += 0.4 * product(sites, {j: "Sx", k: "Sy"})
    return f"complex written terms on a ring of {sites}", text, matrix


def models():
    return [
        xx_ring(8, 1.0, 0.3),
        xx_ring(7, 1.0, 0.0),  # fourfold ground space
        xx_ring(7, -0.9, 0.25),
        xxz_ring(8, 0.6, 0.2),
        xxz_ring(7, 1.0, 0.0),
        xxz_ring(6, -1.7, 0.0),  # ferromagnet along z: twofold
        xy_ring(7, 0.4, 0.6),
        uneven_open_chain(7, 5),
        uneven_hops(7, 11),
        uneven_hops(8, 12),
        twisted_ring(7, 0.8, 0.5, 0.15),
        twisted_ring(8, -2.3, 0.0, 0.1),
        twisted_complex_ring(7, 0.8),
        complex_terms(7),
    ]


def expected(matrix, boundary_is_ring):
    """What numpy finds, by label."""
    assert np.allclose(matrix, matrix.conj().T)
    sites = matrix.shape[0].bit_length() - 1
    levels, states = np.linalg.eigh(matrix)
    ground = states[:, levels - levels[0] < GROUND_SPACE]
    dimension = ground.shape[1]

    def average(operator):
        return np.trace(ground.conj().T @ operator @ ground).real / dimension

    def zz(i, j):
        return average(product(sites, {i: "Sz", j: "Sz"}))

    def by_distance(r):
        count = sites if boundary_is_ring else sites - r
        return np.mean([zz(j, (j + r) % sites) for j in range(count)])

    local = [average(product(sites, {j: "Sz"})) for j in range(sites)]
    return dimension, {
        "ground_energy": levels[0],
        "gap": levels[dimension] - levels[0],
        "levels": levels[:12],
        "spectrum": levels,
        "magnetization": np.mean(local),
        "local_magnetization": local,
        "spin_correlation": [zz(i, j) for i, j in PAIRS],
        "by_distance": [by_distance(r) for r in (1, 2)],
    }


def answers(program, folder, title, text):
    path = os.path.join(folder, "case.toml")
    with open(path, "w", encoding="utf-8") as file:
        file.write(f'format = 1\ntitle = "{title}"\n{text}{QUANTITIES}')
    done = subprocess.run(
        [program, "run", "--json", "-", path], capture_output=True, text=True, timeout=120
    )
    if done.returncode != 0:
        sys.exit(f"{title}: exit code {done.returncode}\n{done.stdout}{done.stderr}")
    return json.loads(done.stdout)["cases"][0]["points"][0]["quantities"]


def check(program, folder, title, text, matrix, failures):
    """Compares every reference; returns how many and by which routes."""
    dimension, wanted = expected(matrix, "periodic" in text or "twist" in text)
    seen = {}
    for quantity in answers(program, folder, title, text):
        label = quantity["label"]
        for reference in quantity["references"]:
            where = f"{title}: {label} by {reference['route']}"
            found = np.asarray(reference["value"], dtype=float)
            if found.shape != np.shape(wanted[label]):
                failures.append(f"{where}: shape {found.shape}")
                continue
            off = np.max(np.abs(found - wanted[label]))
            if not off <= ALLOWED:
                failures.append(f"{where}: off by {off}")
            if label == "ground_energy" and reference["degeneracy"] != dimension:
                failures.append(f"{where}: degeneracy {reference['degeneracy']}, not {dimension}")
            seen.setdefault(label, []).append(reference["route"])
    for label in wanted:
        if not {"sector", "dense"} <= set(seen.get(label, [])):
            failures.append(f"{title}: {label} answered by {seen.get(label)} alone")
    return seen


def main():
    program = os.path.abspath(sys.argv[1])
    failures = []
    by_fermion = 0
    with tempfile.TemporaryDirectory() as folder:
        for title, text, matrix in models():
            seen = check(program, folder, title, text, matrix, failures)
            by_fermion += "fermion" in seen["spectrum"]
            print(f"{title}: {sum(map(len, seen.values()))} references")
    if by_fermion != 7:
        failures.append(f"fermion answered {by_fermion} of the 7 free-fermion chains")
    print("\n".join(failures))
    return 1 if failures else 0


if __name__ == "__main__":
    sys.exit(main())
