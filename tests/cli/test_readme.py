"""Holds cases/README.md to the built program: usage: test_readme.py PROGRAM [unittest arguments]."""

import json
import os
import pathlib
import re
import subprocess
import sys
import tempfile
import unittest

PROGRAM = os.path.abspath(sys.argv[1])
README = pathlib.Path(__file__).resolve().parents[2] / "cases" / "README.md"


def complete_cases(text):
    """The toml blocks that are whole case files."""
    blocks = re.findall(r"^```toml\n(.*?)^```$", text, re.MULTILINE | re.DOTALL)
    return [block for block in blocks if block.startswith("format = 1\n")]


def shown(topic):
    """What `show TOPIC` lists, as JSON."""
    done = subprocess.run([PROGRAM, "show", topic, "--json", "-"], capture_output=True, text=True,
                          timeout=60, check=True)
    return json.loads(done.stdout)


class Readme(unittest.TestCase):
    def setUp(self):
        self.text = README.read_text(encoding="utf-8")

    def test_every_case_runs(self):
        cases = complete_cases(self.text)
        self.assertGreaterEqual(len(cases), 4)
        with tempfile.TemporaryDirectory() as folder:
            for number, case in enumerate(cases):
                with self.subTest(number=number, case=case):
                    path = pathlib.Path(folder, f"case{number}.toml")
                    path.write_text(case, encoding="utf-8")
                    done = subprocess.run([PROGRAM, "run", path, "--quiet"], capture_output=True,
                                          text=True, timeout=120)
                    self.assertEqual(done.returncode, 0, done.stdout + done.stderr)

    def test_every_name_is_described(self):
        for topic in ["families", "quantities", "routes"]:
            entries = shown(topic)
            self.assertTrue(entries)
            for entry in entries:
                with self.subTest(topic=topic, name=entry["name"]):
                    self.assertIn(f"`{entry['name']}`", self.text)

    def test_every_parameter_and_option_is_described(self):
        names = {p["name"] for family in shown("families") for p in family["parameters"]}
        names |= {option for quantity in shown("quantities") for option in quantity["options"]}
        self.assertTrue(names)
        for name in names:
            with self.subTest(name):
                self.assertIn(f"`{name}`", self.text)


if __name__ == "__main__":
    unittest.main(argv=sys.argv[:1] + sys.argv[2:])
