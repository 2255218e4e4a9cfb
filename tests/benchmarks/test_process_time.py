"""Whole processes: the commands against the imports they cannot do without. Printed, never asserted in time."""

import subprocess
import sys
import time

import pytest
from five_legs import FIVE_LEGS, SIX_LEGS


def process(*arguments):
    """Shortest of five runs of a Python process, s, and its exit code."""
    found, code = [], 0
    for _ in range(5):
        began = time.perf_counter()
        code = subprocess.run([sys.executable, *arguments], capture_output=True, check=False).returncode
        found.append(time.perf_counter() - began)
    return min(found), code


@pytest.mark.parametrize("command", ["check", "solve", "solve --json", "schema"])
def test_commands(command, tmp_path):
    """`pathcalc <command>` against `import numpy, pydantic, yaml`."""
    file = tmp_path / "five-legs.yaml"
    file.write_text(FIVE_LEGS, encoding="utf-8")
    floor, _ = process("-c", "import numpy, pydantic, yaml")
    empty, _ = process("-c", "pass")
    path = [] if command == "schema" else [str(file)]
    took, code = process("-m", "pathcalc", *command.split(), *path)
    print(f"\n{command}: {took:.3f} s, {took / floor:.2f} times the imports ({floor:.3f} s; bare Python {empty:.3f} s)")
    assert code == 0


def test_report(tmp_path):
    """The reports of a six-leg reference case with three diagrams and two bar charts, as a whole process."""
    file = tmp_path / "six-legs.yaml"
    file.write_text(SIX_LEGS, encoding="utf-8")
    took, code = process("-m", "pathcalc", "solve", str(file), "--report", "html,md", "-o", str(tmp_path / "out"))
    print(f"\nsix legs with reports: {took:.2f} s")
    assert code == 0


def test_imports():
    """Importing the package, and what solving one case imports."""
    floor, _ = process("-c", "import numpy, pydantic, yaml")
    bare, _ = process("-c", "import pathcalc")
    solver, _ = process("-c", "from pathcalc import solve, loads")
    print(f"\nimport pathcalc {bare:.3f} s, with solver {solver:.3f} s, numpy, pydantic, yaml {floor:.3f} s")
    assert solver > 0.0
