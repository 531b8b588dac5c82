"""Route `dense` against matrices built here, for spins 1/2, 1 and 3/2, fields, twists, temperatures.

usage: check_with_numpy.py PROGRAM

Uses numpy and the conventions of the case format, nothing else: spin operators; on a ring
S+_L = exp(-i twist) S+_0; averages over the ground space, or thermal. Site 0 is the first Kronecker
factor here and states run from the highest m, unlike in the program. Exit code 0 if every number is
within 1e-11 of numpy's (5e-9 for the susceptibility, which is a difference quotient here) and within
that and its own bound.
"""

import functools
import itertools
import json
import os
import subprocess
import sys
import tempfile

import numpy as np

ALLOWED = 1e-11
ALLOWED_DIFFERENCES = 5e-9
GROUND_SPACE = 1e-9


def spin_matrices(two_s):
    s = two_s / 2
    m = s - np.arange(two_s + 1)
    plus = np.diag(np.sqrt(s * (s + 1) - m[1:] * (m[1:] + 1)), 1).astype(complex)
    return {
        "S+": plus,
        "S-": plus.conj().T,
        "Sx": (plus + plus.conj().T) / 2,
        "Sy": (plus - plus.conj().T) / 2j,
        "Sz": np.diag(m).astype(complex),
    }


class Chain:
    def __init__(self, length, two_s, ring, twist):
        self.length, self.two_s, self.ring, self.twist = length, two_s, ring, twist
        self.site = spin_matrices(two_s)

    def rotated(self, matrix, times):
        """exp(i a Sz) matrix exp(-i a Sz) with S+ -> exp(-i twist times) S+."""
        turn = np.exp(-1j * self.twist * times * np.diag(self.site["Sz"]))
        return turn[:, None] * matrix * turn.conj()[None, :]

    def product(self, factors):
        """Product of (site, matrix); sites past the end of a ring are brought back."""
        matrices = [np.eye(self.two_s + 1, dtype=complex) for _ in range(self.length)]
        for site, matrix in factors:
            place = site % self.length
            matrices[place] = matrices[place] @ self.rotated(matrix, site // self.length)
        return functools.reduce(np.kron, matrices)

    def total(self, name):
        return sum(self.product([(j, self.site[name])]) for j in range(self.length))

    def pairs(self, distance):
        last = self.length if self.ring else self.length - distance
        return [(i, i + distance) for i in range(last)]


def exp_i_pi(matrix):
    values, vectors = np.linalg.eigh(matrix)
    return vectors @ np.diag(np.exp(1j * np.pi * values)) @ vectors.conj().T


PARTS = {
    "xx": [("Sx", "Sx")],
    "yy": [("Sy", "Sy")],
    "zz": [("Sz", "Sz")],
    "+-": [("S+", "S-")],
    "dot": [("Sx", "Sx"), ("Sy", "Sy"), ("Sz", "Sz")],
}


class Numbers:
    """What numpy says of one Hamiltonian; `state` is a density matrix."""

    def __init__(self, chain, h, temperature):
        self.chain, self.h, self.temperature = chain, h, temperature
        self.levels, self.vectors = np.linalg.eigh(h)
        if temperature is None:
            weights = (self.levels < self.levels[0] + GROUND_SPACE).astype(float)
        else:
            weights = np.exp(-(self.levels - self.levels[0]) / temperature)
        self.partition = weights.sum()
        self.weights = weights / self.partition
        self.state = (self.vectors * self.weights) @ self.vectors.conj().T

    def average(self, matrix):
        return np.sum(self.state * matrix.T)

    def pair(self, axes, i, j, connected):
        total = 0
        for a, b in PARTS[axes]:
            left = self.chain.product([(i, self.chain.site[a])])
            right = self.chain.product([(j, self.chain.site[b])])
            total += self.average(left @ right)
            if connected:
                total -= self.average(left) * self.average(right)
        return total

    def structure_factor(self, axes, connected):
        n = self.chain.length
        table = np.array([[self.pair(axes, i, j, connected) for j in range(n)] for i in range(n)])
        sites = np.arange(n)
        result = []
        for k in range(n):
            phase = np.exp(-2j * np.pi * k * (sites[:, None] - sites[None, :]) / n)
            result.append(np.sum(phase * table) / n)
        return np.array(result)

    def string(self, axis, i, j):
        end = self.chain.site["S" + axis]
        between = 2 * end if self.chain.two_s == 1 else exp_i_pi(end)
        factors = [(i, end)] + [(k, between) for k in range(i + 1, j)] + [(j, end)]
        return self.average(self.chain.product(factors))

    def entropy(self, block, order, psi):
        dim = self.chain.two_s + 1
        rest = [j for j in range(self.chain.length) if j not in block]
        tensor = psi.reshape([dim] * self.chain.length).transpose(list(block) + rest)
        p = np.linalg.svd(tensor.reshape(dim ** len(block), -1), compute_uv=False) ** 2
        p = p[p > 1e-30]
        return -np.sum(p * np.log(p)) if order == 1 else np.log(np.sum(p**order)) / (1 - order)

    def thermal(self):
        t, excitation = self.temperature, self.weights @ (self.levels - self.levels[0])
        energy = self.levels[0] + excitation
        return {
            "free_energy": self.levels[0] - t * np.log(self.partition),
            "energy": energy,
            "entropy": np.log(self.partition) + excitation / t,
            "specific_heat": self.weights @ (self.levels - energy) ** 2 / t**2,
        }


def susceptibility(chain, h, temperature, m):
    """dm/dh' by central differences of the average of M, three steps, two extrapolations."""

    def slope(step):
        up = Numbers(chain, h - step * m, temperature).average(m).real
        down = Numbers(chain, h + step * m, temperature).average(m).real
        return (up - down) / (2 * step) / chain.length

    a, b, c = slope(0.02), slope(0.01), slope(0.005)
    first, second = (4 * b - a) / 3, (4 * c - b) / 3
    return (16 * second - first) / 15


def random_terms(rng, chain, conserving):
    """Terms as (offsets, operators, couplings, add_conjugate), one coupling a placement."""
    kinds = [([0, 1], ["S+", "S-"], True), ([0, 1], ["Sz", "Sz"], False), ([0], ["Sz"], False)]
    if not conserving:
        kinds += [([0, 1], ["S+", "S+"], True), ([0], ["Sx"], False)]
    if chain.two_s > 1:
        kinds += [([0], ["Sz^2"], False)]
    terms = []
    for offsets, operators, conjugate in kinds:
        count = chain.length if chain.ring else chain.length - offsets[-1]
        values = rng.uniform(-1, 1, count) + (1j * rng.uniform(-1, 1, count) if conjugate else 0)
        terms.append((offsets, operators, values, conjugate))
    return terms


def hamiltonian(chain, terms, field):
    h = -field * chain.total("Sz")
    site = dict(chain.site, **{"Sz^2": chain.site["Sz"] @ chain.site["Sz"]})
    for offsets, operators, values, conjugate in terms:
        for start, value in enumerate(values):
            matrix = value * chain.product(
                [(start + o, site[name]) for o, name in zip(offsets, operators)]
            )
            h = h + matrix + (matrix.conj().T if conjugate else 0)
    return h


def toml_value(value):
    if isinstance(value, complex) or np.iscomplexobj(value):
        return "{ re = %.17g, im = %.17g }" % (value.real, value.imag)
    return "%.17g" % value


def case_text(chain, terms, field, temperature, quantities):
    boundary = "{ twist = %.17g }" % chain.twist if chain.twist else '"periodic"'
    spin = "%d/2" % chain.two_s if chain.two_s % 2 else str(chain.two_s // 2)
    lines = [
        "format = 1",
        'title = "numpy"',
        "[system]",
        "sites = %d" % chain.length,
        "boundary = %s" % (boundary if chain.ring else '"open"'),
        'spin = "%s"' % spin,
    ]
    if temperature is not None:
        lines.append("temperature = %.17g" % temperature)
    everywhere = list(terms)
    everywhere.append(([0], ["Sz"], -field * np.ones(chain.length), False))
    lines.append("[hamiltonian]")
    for offsets, operators, values, conjugate in everywhere:
        lines += [
            "[[hamiltonian.term]]",
            "operators = %s" % json.dumps(operators),
            "offsets = %s" % json.dumps(offsets),
            "coupling = [%s]" % ", ".join(toml_value(v) for v in values),
            "add_conjugate = %s" % ("true" if conjugate else "false"),
        ]
    for label, (name, options) in quantities.items():
        lines += ["[[quantity]]", 'name = "%s"' % name, 'label = "%s"' % label]
        lines += ["%s = %s" % (key, json.dumps(value)) for key, value in options.items()]
    return "\n".join(lines + ["[routes]", 'use = ["dense"]', ""])


def expected_numbers(chain, h, temperature):
    """label -> ((quantity, options), numpy's value, allowed difference)"""
    found = {}
    numbers = Numbers(chain, h, temperature)
    m = chain.total("Sz")

    def put(label, name, options, value, allowed=ALLOWED):
        found[label] = ((name, options), np.atleast_1d(value), allowed)

    pairs = [(0, 1), (1, 3), (2, 0)]
    for axes, connected in itertools.product(PARTS, [False, True]):
        options = {"axes": axes, "connected": connected}
        tag = "%s_%d" % ({"+-": "pm"}.get(axes, axes), connected)
        by_pair = [numbers.pair(axes, i, j, connected) for i, j in pairs]
        put("pairs_" + tag, "spin_correlation", dict(options, pairs=pairs), by_pair)
        means = [
            np.mean([numbers.pair(axes, i, j, connected) for i, j in chain.pairs(r)])
            for r in (0, 1, 2)
        ]
        put("mean_" + tag, "spin_correlation", dict(options, distance=[0, 1, 2]), means)
        if temperature is None:
            factor = numbers.structure_factor(axes, connected)
            put("factor_" + tag, "structure_factor", options, factor)
    put("magnetization", "magnetization", {}, numbers.average(m).real / chain.length)
    if temperature is not None:
        for name, value in numbers.thermal().items():
            put(name, name, {}, value)
        chi = susceptibility(chain, h, temperature, m)
        put("susceptibility", "susceptibility", {}, chi, ALLOWED_DIFFERENCES)
        return found
    if np.abs(h @ m - m @ h).max() > 1e-9:
        chi = susceptibility(chain, h, None, m)
        put("susceptibility", "susceptibility", {}, chi, ALLOWED_DIFFERENCES)
    for axis in "xyz":
        local = [numbers.average(chain.product([(j, chain.site["S" + axis])])) for j in
                 range(chain.length)]
        put("local_" + axis, "local_magnetization", {"axis": axis}, local)
        if chain.two_s <= 2:
            strings = [np.mean([numbers.string(axis, i, j) for i, j in chain.pairs(r)])
                       for r in (1, 2, 3)]
            options = {"axis": axis, "distance": [1, 2, 3]}
            put("string_" + axis, "string_order", options, strings)
    if numbers.levels[1] - numbers.levels[0] > GROUND_SPACE:
        for block, order in itertools.product([[0], [0, 1], [1, 3]], [1, 2, 3]):
            label = "entropy_%s_%d" % ("".join(map(str, block)), order)
            value = numbers.entropy(block, order, numbers.vectors[:, 0])
            put(label, "entanglement_entropy", {"block": block, "order": order}, value)
    return found


def as_numbers(reference):
    value = reference["value"]
    if isinstance(value, (int, float)):
        value = [value]
    if reference.get("complex"):
        return np.array([complex(re, im) for re, im in value])
    return np.array(value, dtype=float)


def run(program, text):
    with tempfile.TemporaryDirectory() as folder:
        path = os.path.join(folder, "case.toml")
        with open(path, "w", encoding="utf-8") as file:
            file.write(text)
        done = subprocess.run(
            [program, "run", path, "--json", "-"], capture_output=True, text=True, check=False
        )
    if done.returncode not in (0, 3):
        sys.exit("%s\n%s" % (done.stderr, text))
    return json.loads(done.stdout)["cases"][0]["points"][0]["quantities"]


def check(program, chain, terms, field, temperature):
    """Prints what differs; returns how many numbers were compared, how many differ, the worst."""
    h = hamiltonian(chain, terms, field)
    expected = expected_numbers(chain, h, temperature)
    quantities = {label: entry[0] for label, entry in expected.items()}
    compared, wrong, worst = 0, 0, 0.0
    for quantity in run(program, case_text(chain, terms, field, temperature, quantities)):
        label = quantity["label"]
        _, value, allowed = expected[label]
        references = quantity["references"]
        if not references or references[0]["value"] is None:
            print("no reference for", label, json.dumps(quantity)[:400])
            wrong += 1
            continue
        found = as_numbers(references[0])
        bound = np.atleast_1d(references[0]["bound"])
        difference = np.abs(found - value)
        compared += len(found)
        if allowed == ALLOWED:
            worst = max(worst, difference.max())
        if len(found) != len(value) or (difference > allowed).any() or (bound > 1e-9).any():
            print("%s: found %s, numpy %s, bound %s" % (label, found, value, bound))
            wrong += 1
    return compared, wrong, worst


def main():
    program = sys.argv[1]
    rng = np.random.default_rng(7)
    compared, wrong, worst = 0, 0, 0.0
    for two_s, length in ((1, 5), (2, 4), (3, 4)):
        for ring, twist, conserving in (
            (False, 0.0, True),
            (False, 0.0, False),
            (True, 0.0, False),
            (True, 0.7, True),
            (True, np.pi, False),
        ):
            chain = Chain(length, two_s, ring, twist)
            if twist == np.pi and not conserving:
                terms = [t for t in random_terms(rng, chain, False) if t[1] != ["Sx"]]
            else:
                terms = random_terms(rng, chain, conserving)
            for temperature in (None, 0.3, 2.0):
                numbers = check(program, chain, terms, 0.25, temperature)
                compared += numbers[0]
                wrong += numbers[1]
                worst = max(worst, numbers[2])
    print("%d numbers compared, %d quantities wrong, largest difference %.1e" %
          (compared, wrong, worst))
    sys.exit(1 if wrong or not compared else 0)


if __name__ == "__main__":
    main()
