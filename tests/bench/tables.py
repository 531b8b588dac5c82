#!/usr/bin/env python3
"""tables.py RESULTS.json [--write FILE]: Markdown tables of a run of `bench`; --write puts them
between the two marks in FILE. Rows that were not measured are left out."""

import json
import sys

MARKS = ("<!-- scripts/bench -->\n", "<!-- end of scripts/bench -->\n")


def seconds(value):
    return f"{value:.3g}"


def number(value):
    return f"{value:,.0f}"


def ratio(value):
    return f"{value:.2f}"


def percent(value):
    return f"{100 * value:.0f} %"


def tiny(value):
    return f"{value:.1e}"


def level(value):
    return f"{value:.12f}"


def gigabytes(value):
    return f"{value / 1e9:.3g} GB"


# A table: the start of the benchmarks' names, its title, and columns of (head, counter, form).
TABLES = [
    ("stream", "Bandwidth, GB/s", [
        ("triad, 1 thread", "triad_1", seconds),
        ("triad, all threads", "triad_all", seconds),
        ("reading, 1 thread", "read_1", seconds),
        ("reading, all threads", "read_all", seconds)]),
    ("product", "One product, full Sz = 0 sector, s. Traffic: the bytes that must be moved at least, "
     "per time, in units of the triad's; the last column: those of CSR per time of `by halves`", [
         ("states", "states", number),
         ("by halves", "halves_s", seconds),
         ("stored", "stored_s", seconds),
         ("Eigen CSR", "csr_s", seconds),
         ("CSR / halves", "csr/halves", ratio),
         ("CSR / stored", "csr/stored", ratio),
         ("CSR bytes", "csr_bytes", gigabytes),
         ("stored bytes", "stored_bytes", gigabytes),
         ("halves bytes", "halves_bytes", gigabytes),
         ("CSR traffic", "csr_traffic", percent),
         ("stored traffic", "stored_traffic", percent),
         ("halves traffic", "halves_traffic", percent),
         ("CSR's bytes / halves", "halves_as_csr", percent)]),
    ("ground_state", "Ground state, full Sz = 0 sector, to 1e-12 (s). Ours: all in, with vector; "
     "from a random vector and from the guess that a ring gets; the others: the solution alone, "
     "`Lanczos` without vector", [
         ("ours", "ours_s", seconds),
         ("residual", "ours_residual", tiny),
         ("from the guess", "guided_s", seconds),
         ("CSR assembly", "assembly_s", seconds),
         ("Lanczos", "lanczos_s", seconds),
         ("Spectra", "spectra_s", seconds),
         ("its residual", "spectra_residual", tiny),
         ("SLEPc", "slepc_s", seconds),
         ("Lanczos / ours", "lanczos/ours", ratio),
         ("Spectra / ours", "spectra/ours", ratio),
         ("SLEPc / ours", "slepc/ours", ratio)]),
    ("four_lowest", "The four lowest levels, Sz = 0: three copies of E1 above E0 are right", [
        ("E1", "E1", level),
        ("ours, s", "ours_s", seconds),
        ("copies of E1", "ours_copies", number),
        ("fourth level", "ours_last", level),
        ("Spectra, s", "spectra_s", seconds),
        ("copies of E1", "spectra_copies", number),
        ("fourth level", "spectra_last", level),
        ("SLEPc, s", "slepc_s", seconds),
        ("copies of E1", "slepc_copies", number)]),
    ("ground_energy", "Ground energy with all symmetries, all in, a process each", [
        ("s", "seconds", seconds),
        ("peak memory", "peak_bytes", gigabytes),
        ("allowed", "allowed_bytes", lambda value: gigabytes(value) if value else "free"),
        ("error (Bethe)", "error", tiny),
        ("bound", "bound", tiny)]),
    ("sector", "Growth: the ground state's sector with all symmetries. Solve: the ground energy from the operator", [
        ("states", "states", number),
        ("elements", "elements", number),
        ("enumerate, s", "enumerate_s", seconds),
        ("store, s", "build_s", seconds),
        ("solve, s", "solve_s", seconds),
        ("stored product, s", "stored_s", seconds),
        ("ns / state", "stored_ns_per_state", ratio),
        ("ns / element", "stored_ns", ratio),
        ("matrix-free, ns / element", "computed_ns", ratio),
        ("basis, bytes / state", "basis_bytes_per_state", ratio),
        ("elements, bytes / state", "stored_bytes_per_state", ratio)]),
    ("spectrum", "Complete spectrum", [
        ("levels", "levels", number),
        ("s", "seconds", seconds),
        ("with thermal averages at 1 temperature", "one_temperature_s", seconds),
        ("at 200", "temperatures_s", seconds)]),
]


def table(name, title, columns, runs):
    rows = [run for run in runs if run["name"].split("/")[0] == name]
    if not rows:
        return ""
    columns = [column for column in columns if any(column[1] in run for run in rows)]
    lines = [title + ":", "", "| | " + " | ".join(head for head, _, _ in columns) + " |",
             "| --- " * (len(columns) + 1) + "|"]
    for run in rows:
        label = " ".join(run["name"].split("/iterations")[0].split("/")[1:])
        cells = [form(run[key]) if key in run else "-" for _, key, form in columns]
        lines.append(f"| {label} | " + " | ".join(cells) + " |")
    return "\n".join(lines) + "\n"


def text_of(results):
    context = results["context"]
    head = (f"{context['date'][:10]}, {context['num_cpus']} cores, load average "
            f"{context['load_avg'][0]:.1f} before the run.\n")
    tables = [table(*one, results["benchmarks"]) for one in TABLES]
    return "\n".join([head] + [one for one in tables if one])


def write(path, text):
    with open(path, encoding="utf-8") as file:
        old = file.read()
    if any(old.count(mark) != 1 for mark in MARKS):
        sys.exit(f"{path}: each of the lines {MARKS[0].strip()} and {MARKS[1].strip()} is needed once")
    start = old.index(MARKS[0]) + len(MARKS[0])
    end = old.index(MARKS[1])
    with open(path, "w", encoding="utf-8") as file:
        file.write(old[:start] + text + old[end:])


def main(arguments):
    if len(arguments) not in (1, 3) or arguments[1:2] not in ([], ["--write"]):
        sys.exit(__doc__)
    with open(arguments[0], encoding="utf-8") as file:
        text = text_of(json.load(file))
    print(text)
    if len(arguments) == 3:
        write(arguments[2], text)


if __name__ == "__main__":
    main(sys.argv[1:])
