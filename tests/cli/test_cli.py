"""Drives the built program from outside: usage: test_cli.py PROGRAM [unittest arguments]."""

import csv
import decimal
import io
import json
import math
import os
import pathlib
import re
import signal
import subprocess
import sys
import tempfile
import time
import unittest

PROGRAM = os.path.abspath(sys.argv[1])

RING = """format = 1
title = "Ring of a made-up compound"
[system]
sites = [6, 8]
boundary = "periodic"
[hamiltonian]
family = "xx"
J = 1.0
h = [0.1, 0.3]
[[quantity]]
name = "ground_energy"
[[quantity]]
name = "levels"
count = 4
"""

# More work than a test waits for: many sizes and fields, whole spectra.
LONG = """format = 1
title = "Long sweep"
[system]
sites = [4, 6, 8, 10, 11, 12]
boundary = "open"
[parameters]
seed = { from = 1, to = 400, step = 1 }
[hamiltonian]
family = "heisenberg"
J = 1.0
[[hamiltonian.term]]
operators = ["Sz"]
offsets = [0]
coupling = { uniform = [-1, 1], seed = "seed" }
[[quantity]]
name = "spectrum"
"""


class Cli(unittest.TestCase):
    def setUp(self):
        self.folder = tempfile.TemporaryDirectory()
        self.addCleanup(self.folder.cleanup)

    def path(self, name):
        return os.path.join(self.folder.name, name)

    def write(self, name, content):
        mode = "wb" if isinstance(content, bytes) else "w"
        with open(self.path(name), mode) as file:
            file.write(content)
        return self.path(name)

    def call(self, *arguments, code, timeout=120, **extra):
        """Runs the program, checks the exit code and that it was no crash."""
        done = subprocess.run([PROGRAM, *arguments], capture_output=True, text=True,
                              timeout=timeout, **extra)
        self.assertEqual(done.returncode, code, f"{arguments}\n{done.stdout}\n{done.stderr}")
        return done

    def refused(self, *arguments, says):
        """Exit 2, nothing on stdout, and a message with `says`."""
        done = self.call(*arguments, code=2)
        self.assertEqual(done.stdout, "")
        self.assertRegex(done.stderr, says)
        self.assertNotIn("internal error", done.stderr)
        return done.stderr


class CommandLine(Cli):
    def test_version_and_help(self):
        self.assertRegex(self.call("--version", code=0).stdout, r"^chainmark \d+\.\d+\.\d+\n$")
        self.assertIn("run", self.call("--help", code=0).stdout)
        self.assertIn("--json", self.call("run", "--help", code=0).stdout)

    def test_unknown_words_get_the_nearest(self):
        self.refused("rum", says="unknown command 'rum'; did you mean 'run'")
        self.refused("show", "familes", says="did you mean 'families'")
        self.refused("run", "--jsn", "x", "y.toml", says="did you mean '--json'")
        self.refused("show", "example", "heisenbreg", says="did you mean 'heisenberg'")

    def test_missing_words(self):
        self.refused(says="missing after 'chainmark'; there are: run, show")
        self.refused("run", says="CASE is missing; expected a file")
        self.refused("show", says="missing after 'show'; there are: families, ")
        self.refused("show", "plan", says="CASE is missing; expected a file")
        self.refused("show", "example", says="FAMILY is missing; expected a family")

    def test_missing_and_repeated_values_of_options(self):
        ring = self.write("ring.toml", RING)
        for option, form in [("--json", "FILE"), ("--csv", "FILE"), ("--set", "KEY=VALUE"),
                             ("--only", "GLOB"), ("--threads", "N"), ("--memory", "GiB"), ("--digits", "N")]:
            self.refused("run", ring, option, says=f"{option} has no value; expected .*{form}")
            self.refused("run", ring, option, "--quiet", says=f"{option}: '--quiet' (looks|is not)")
        self.refused("run", ring, "--set", "sites=6", "--set", says="--set has no value")
        self.refused("run", ring, "--threads", "1", "--threads", "2", says="--threads is given 2")
        self.refused("show", "plan", ring, "--set", says="--set has no value")

    def test_bad_values_of_options(self):
        ring = self.write("ring.toml", RING)
        for option, value in [("--threads", "0"), ("--threads", "-3"), ("--threads", "many"),
                              ("--memory", "0"), ("--memory", "nan"), ("--memory", "-1"),
                              ("--threads", "010x"), ("--threads", "2.5"), ("--memory", "inf"),
                              ("--memory", "4GB"), ("--set", "sites"), ("--set", "=3"),
                              ("--set", "sites="), ("--set", "nothing=3")]:
            self.refused("run", ring, option, value, says=option)
        self.refused("run", ring, "--threads", "x",
                     says="--threads: 'x' is not a whole number from 1 to 4096")
        self.refused("run", ring, "--digits", "0",
                     says="--digits: '0' is not a whole number from 1 to 1000")
        self.refused("run", ring, "--memory", "x",
                     says="--memory: 'x' is not a number of GiB above 0")
        done = self.call("run", ring, "--threads", "010", "--memory", "0.5", "--json", "-", code=0)
        provenance = json.loads(done.stdout)["provenance"]
        self.assertEqual((provenance["threads"], provenance["memory_gib"]), (10, 0.5))

    def test_an_option_leaves_the_case_alone(self):
        ring = self.write("ring.toml", RING)
        done = self.call("run", "--set", "sites=6", ring, "--json", "-", code=0)
        self.assertEqual([c["case"] for c in json.loads(done.stdout)["cases"]], [ring])
        self.assertIn("ring of 7", self.call("show", "terms", "--set", "sites=7", ring,
                                             code=0).stdout)

    def test_certified_digits(self):
        """-1/sin(pi/8) is -sqrt(4 + 2 sqrt(2)), here by whole numbers."""
        ring = self.write("ring.toml", RING.replace("[0.1, 0.3]", "0.1"))
        routes = json.loads(self.call("show", "routes", "--json", "-", code=0).stdout)
        if any("certified digits" in route.get("lacks", "") for route in routes):
            self.refused("run", ring, "--digits", "40", says="--digits: 40; at most 15")
            return
        done = self.call("run", ring, "--set", "sites=8", "--only", "ground_energy", "--digits", "40",
                         "--json", "-", code=0)
        quantity = json.loads(done.stdout)["cases"][0]["points"][0]["quantities"][0]
        self.assertEqual(quantity["verdict"], "agree")
        fermion = [r for r in quantity["references"] if r["route"] == "fermion"][0]
        self.assertEqual(fermion["basis"], "enclosure")
        scale = 10 ** 60
        root = math.isqrt(4 * scale ** 2 + 2 * scale * math.isqrt(2 * scale ** 2))
        with decimal.localcontext() as context:
            context.prec = 80
            expected = decimal.Decimal(-root) / scale
            error = abs(decimal.Decimal(fermion["enclosure"]["mid"]) - expected)
            radius = decimal.Decimal(fermion["enclosure"]["radius"])
            self.assertLessEqual(error, radius)
            self.assertLess(radius, decimal.Decimal("1e-39"))
        others = [r for r in quantity["references"] if r["route"] != "fermion"]
        self.assertTrue(others)
        self.assertTrue(all("enclosure" not in r for r in others))
        text = self.call("run", ring, "--set", "sites=8", "--only", "ground_energy", "--digits", "40",
                         code=0).stdout
        self.assertIn(f"{fermion['enclosure']['mid']} +- {fermion['enclosure']['radius']}", text)

    def test_only(self):
        ring = self.write("ring.toml", RING)
        for glob, labels in [("levels", {"levels"}), ("ring/ground*", {"ground_energy"}),
                             ("ring", {"ground_energy", "levels"})]:
            out = self.call("run", ring, "--only", glob, "--csv", "-", code=0).stdout
            self.assertEqual({row["quantity"] for row in csv.DictReader(io.StringIO(out))}, labels)
        self.refused("run", ring, "--only", "gap", says="ring/ground_energy, ring/levels")


class Outputs(Cli):
    def test_json(self):
        ring = self.write("ring.toml", RING)
        done = self.call("run", ring, "--json", "-", code=0)
        report = json.loads(done.stdout, parse_constant=self.fail)
        self.assertEqual(list(report), ["chainmark", "format", "command", "verdict", "provenance",
                                        "cases"])
        self.assertEqual(report["verdict"], "agree")
        case = report["cases"][0]
        self.assertEqual(case["case"], ring)
        self.assertEqual([p["parameters"]["sites"] for p in case["points"]], [6, 6, 8, 8])
        quantity = case["points"][0]["quantities"][0]
        self.assertEqual(quantity["label"], "ground_energy")
        self.assertGreaterEqual(len(quantity["references"]), 2)
        for reference in quantity["references"]:
            self.assertLess(reference["bound"], 1e-10)
        self.assertRegex(report["provenance"]["started"], r"^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\dZ$")

    def test_csv_and_json_hold_the_same_doubles(self):
        ring = self.write("ring.toml", RING)
        self.call("run", ring, "--json", self.path("o.json"), "--csv", self.path("o.csv"), code=0)
        with open(self.path("o.csv"), newline="") as file:
            rows = list(csv.DictReader(file))
        found = {}
        for row in rows:
            key = (row["sites"], row["h"], row["quantity"], row["route"], row["index"])
            found[key] = float(row["value"])
        with open(self.path("o.json")) as file:
            report = json.load(file)
        compared = 0
        for point in report["cases"][0]["points"]:
            for quantity in point["quantities"]:
                for reference in quantity["references"]:
                    value = reference["value"]
                    for index, x in (enumerate(value) if isinstance(value, list) else
                                     [("", value)]):
                        key = (str(point["parameters"]["sites"]), repr(point["parameters"]["h"]),
                               quantity["label"], reference["route"], str(index))
                        self.assertEqual(found[key], x)
                        compared += 1
        self.assertGreater(compared, 20)

    def test_terminal_report(self):
        ring = self.write("ring.toml", RING)
        text = self.call("run", ring, code=0).stdout
        self.assertIn("Ring of a made-up compound", text)
        self.assertNotIn("\033", text)
        self.assertLessEqual(max(map(len, text.splitlines())), 120)
        self.assertRegex(text.splitlines()[-1], r"^1 case, 4 points, 8 quantities: 8 agree")
        quiet = self.call("run", ring, "--quiet", code=0).stdout
        self.assertEqual(len(quiet.splitlines()), 1)

    def test_set_reaches_the_effective_case(self):
        ring = self.write("ring.toml", RING)
        out = self.call("run", ring, "--set", "sites=7", "--set", "h=0.25", "--json", "-", code=0)
        report = json.loads(out.stdout)
        points = report["cases"][0]["points"]
        self.assertEqual([p["parameters"] for p in points], [{"sites": 7, "J": 1.0, "h": 0.25}])
        again = self.write("again.toml", report["cases"][0]["effective_case"])
        repeated = json.loads(self.call("run", again, "--json", "-", code=0).stdout)
        self.assertEqual([p["parameters"] for p in repeated["cases"][0]["points"]],
                         [p["parameters"] for p in points])

    def test_outputs_are_checked_before_computing(self):
        case = self.write("long.toml", LONG)
        begin = time.monotonic()
        self.refused("run", case, "--json", self.path("no/x.json"), says="cannot be written")
        self.refused("run", case, "--csv", self.folder.name, says="it is a folder")
        self.refused("run", case, "--json", "-", "--csv", "-", says="--csv")
        self.refused("run", case, "--json", case, says="would replace a case")
        self.assertLess(time.monotonic() - begin, 20)
        self.assertEqual(pathlib.Path(case).read_text(), LONG)

    def test_wrong_input_leaves_no_file(self):
        self.refused("run", self.path("none.toml"), "--json", self.path("new.json"), says="none")
        self.assertFalse(os.path.exists(self.path("new.json")))

    @unittest.skipUnless(os.path.exists("/dev/full"), "needs /dev/full")
    def test_a_full_disk_is_no_success(self):
        ring = self.write("ring.toml", RING)
        with open("/dev/full", "w") as full:
            done = subprocess.run([PROGRAM, "run", ring], stdout=full, stderr=subprocess.PIPE,
                                  text=True, timeout=60)
        self.assertEqual(done.returncode, 2)
        self.assertIn("cannot be written", done.stderr)


class Cases(Cli):
    def test_bad_files(self):
        files = {
            "empty.toml": "",
            "binary.toml": bytes(range(256)) * 8,
            "syntax.toml": "format = = 1\n",
            "twice.toml": RING.replace("J = 1.0", "J = 1.0\nJ = 2.0"),
            "nan.toml": RING.replace("J = 1.0", "J = nan"),
            "inf.toml": RING.replace("J = 1.0", "J = inf"),
            "family.toml": RING.replace('"xx"', '"xxx"'),
            "key.toml": RING.replace("boundary", "boundry"),
            "quantity.toml": RING.replace("ground_energy", "ground_enery"),
            "type.toml": RING.replace("[6, 8]", '"many"'),
            "negative.toml": RING.replace("[6, 8]", "-4"),
            "huge.toml": RING.replace("[6, 8]", "99999999999999999999"),
            "missing.toml": RING.replace("J = 1.0\n", ""),
            "spin.toml": RING.replace("[6, 8]", '[6, 8]\nspin = "1/3"'),
            "cold.toml": RING.replace("[6, 8]", "[6, 8]\ntemperature = 0.0"),
            "warm.toml": RING.replace("[6, 8]", "[6, 8]\ntemperature = 0.5"),
            "sector.toml": RING.replace("count = 4", "count = 4\nsector = { sz = 0.5 }"),
        }
        for name, content in files.items():
            with self.subTest(name):
                self.refused("run", self.write(name, content), says=re.escape(name))

    def test_places_and_suggestions(self):
        case = self.write("key.toml", RING.replace("boundary", "boundry"))
        self.refused("run", case, says=r"key\.toml:5:1: .*boundry.*did you mean 'boundary'")
        ring = self.write("ring.toml", RING)
        self.refused("run", ring, "--set", "temprature=1", says="did you mean 'temperature'")
        sector = self.write("s.toml", RING.replace("count = 4", "count = 4\nsector = { szz = 0 }"))
        self.refused("run", sector, says=r"s\.toml:15:12: .*szz.*did you mean 'sz'")

    def test_ground_state_and_temperature_do_not_meet(self):
        ring = self.write("ring.toml", RING)
        says = r"'ground_energy' belongs to the ground state(.|\n)*'levels' belongs"
        message = self.refused("run", ring, "--set", "temperature=0.5", says=says)
        self.assertIn("free_energy_per_site", message)
        warm = self.write("warm.toml", RING.split("[[quantity]]")[0]
                          + '[[quantity]]\nname = "entropy"\n')
        self.refused("run", warm, says="'entropy' needs a temperature.*temperature = ")
        plan = self.call("show", "plan", warm, "--set", "temperature=[0.5, 1]", code=0).stdout
        self.assertIn("ring of 8 sites, 2 fields, 2 temperatures\n", plan)

    def test_errors_of_all_cases_are_reported(self):
        one = self.write("one.toml", RING.replace('"xx"', '"xxx"'))
        two = self.write("two.toml", RING.replace("ground_energy", "grund_energy"))
        message = self.refused("run", one, two, self.path("three.toml"), says="one")
        self.assertIn("two.toml", message)
        self.assertIn("three.toml", message)

    def test_a_million_points_are_refused_quickly(self):
        one_axis = RING.replace("h = [0.1, 0.3]", "h = { from = 0, to = 1, count = 1000000 }")
        thousand = "{ from = 0.5, to = 1, count = 1000 }"
        product = RING.replace("h = [0.1, 0.3]", "h = " + thousand)
        product = product.replace("J = 1.0", "J = " + thousand)
        begin = time.monotonic()
        self.refused("run", self.write("axis.toml", one_axis), says="axis.toml:9:.*100000")
        self.refused("run", self.write("product.toml", product), says="product.toml.*100000")
        self.assertLess(time.monotonic() - begin, 5)

    def test_missing_file_and_empty_folder(self):
        self.refused("run", self.path("none.toml"), says="neither a file nor a folder")
        self.refused("run", self.folder.name, says="holds no case")

    @unittest.skipIf(os.geteuid() == 0, "root may read everything")
    def test_no_permission(self):
        case = self.write("secret.toml", RING)
        os.chmod(case, 0)
        self.refused("run", case, says="secret.toml")

    def test_folder_and_embedded_names(self):
        os.mkdir(self.path("sub"))
        self.write("b.toml", RING)
        self.write("sub/a.toml", RING)
        report = json.loads(self.call("run", self.folder.name, "--set", "sites=6", "--json", "-",
                                      code=0).stdout)
        self.assertEqual([os.path.relpath(c["case"], self.folder.name) for c in report["cases"]],
                         ["b.toml", "sub/a.toml"])
        for case in json.loads(self.call("show", "cases", "--json", "-", code=0).stdout):
            self.call("show", "plan", case["name"], code=0)
            self.call("show", "plan", case["name"] + ".toml", code=0)


class Show(Cli):
    def test_lists(self):
        for topic in ["families", "quantities", "routes", "cases"]:
            text = self.call("show", topic, code=0).stdout
            for entry in json.loads(self.call("show", topic, "--json", "-", code=0).stdout):
                self.assertIn(entry["name"], text)
        quantities = json.loads(self.call("show", "quantities", "--json", "-", code=0).stdout)
        when = {entry["name"]: entry["when"] for entry in quantities}
        self.assertEqual([when[name] for name in ["gap", "entropy", "magnetization"]],
                         ["ground_state", "thermal", "either"])

    def test_spins_are_named(self):
        ring = self.write("ring.toml", RING)
        terms = self.call("show", "terms", ring, "--set", "spin=3/2", code=0).stdout
        self.assertIn("ring of 6 sites of spin 3/2", terms)

    def test_every_example_runs_as_it_is(self):
        for family in json.loads(self.call("show", "families", "--json", "-", code=0).stdout):
            with self.subTest(family["name"]):
                text = self.call("show", "example", family["name"], code=0).stdout
                case = self.write(family["name"] + ".toml", text)
                done = subprocess.run([PROGRAM, "run", case, "--json", "-"], capture_output=True,
                                      text=True, timeout=60)
                # 3: beside a level crossing a route's honest bound may exceed the tolerance
                self.assertIn(done.returncode, [0, 3], done.stderr)
                points = json.loads(done.stdout)["cases"][0]["points"]
                self.assertEqual(len(points), 5)
                verdicts = [q["verdict"] for point in points for q in point["quantities"]]
                self.assertNotIn("differ", verdicts)
                self.assertGreaterEqual(verdicts.count("agree"), 18)

    def test_what_is_made_of_a_case(self):
        ring = self.write("ring.toml", RING)
        terms = self.call("show", "terms", ring, code=0).stdout
        self.assertIn("ring of 6 sites, J = 1, h = 0.1 (the first of 2 points of this size)\n",
                      terms)
        self.assertRegex(terms, r"0\.5 +S\+_0 S-_1\n")
        self.assertIn("ring of 8 sites", terms)
        self.assertIn("translation", self.call("show", "symmetries", ring, code=0).stdout)
        self.assertIn("sector", self.call("show", "plan", ring, code=0).stdout)
        self.refused("show", "terms", self.path("none.toml"), says="none.toml")

    def test_settings_mean_what_they_mean_in_run(self):
        ring = self.write("ring.toml", RING)
        changes = ["--set", "sites=7", "--set", "h=0.25", "--set", "boundary=open"]
        terms = self.call("show", "terms", ring, *changes, code=0).stdout
        self.assertRegex(terms, r"open chain of 7 sites, J = 1, h = 0\.25\n")
        symmetries = self.call("show", "symmetries", ring, *changes, code=0).stdout
        self.assertRegex(symmetries, r"translation +no +the chain is open")
        self.assertRegex(symmetries, r"h = 0\.25\n")
        self.assertIn("7", self.call("show", "plan", ring, *changes, code=0).stdout)
        for topic in ["plan", "terms", "symmetries"]:
            self.refused("show", topic, ring, "--set", "sites", says="no KEY=VALUE")
            self.refused("show", topic, ring, "--set", "site=7", says="did you mean 'sites'")
        self.refused("show", "example", "xx", "--set", "sites=7", says="unknown option '--set'")


class Interrupts(Cli):
    def interrupted_after(self, seconds, signal_number):
        case = self.write("long.toml", LONG)
        with subprocess.Popen([PROGRAM, "run", case, "--json", self.path("part.json")],
                              stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True) as process:
            try:
                time.sleep(seconds)
                self.assertIsNone(process.poll(), "ended before the signal")
                begin = time.monotonic()
                process.send_signal(signal_number)
                out, err = process.communicate(timeout=20)
                return process.returncode, time.monotonic() - begin, out, err
            finally:
                process.kill()

    def test_finished_points_are_written(self):
        for number in [signal.SIGINT, signal.SIGTERM]:
            with self.subTest(number):
                code, lasted, out, err = self.interrupted_after(3.0, number)
                self.assertEqual(code, 130, out + err)
                self.assertLess(lasted, 2.5)
                with open(self.path("part.json")) as file:
                    report = json.load(file)
                self.assertIs(report["interrupted"], True)
                case = report["cases"][0]
                self.assertEqual(case["points_planned"], 2400)
                self.assertGreater(len(case["points"]), 0)
                self.assertLess(len(case["points"]), 2400)
                for point in case["points"]:
                    self.assertTrue(point["quantities"][0]["references"])
                self.assertIn("interrupted, ", out)


if __name__ == "__main__":
    unittest.main(argv=sys.argv[:1] + sys.argv[2:])
