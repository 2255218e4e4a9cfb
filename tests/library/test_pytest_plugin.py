"""The plugin of pytest, in a pytest of its own."""

from __future__ import annotations

import subprocess
import sys
import tomllib
from pathlib import Path

from library_cases import GAS, INVALID, ROOT, Here, environment, library


def pytest_run(folder: Path, *arguments: str) -> subprocess.CompletedProcess[str]:
    options = ["-p", "pathcalc.library.pytest_plugin", "-p", "no:cacheprovider", "-q", "--tb=short"]
    code = "import sys; sys.modules['xdist'] = None; import pytest; sys.exit(pytest.main(sys.argv[1:]))"
    return subprocess.run(
        [sys.executable, "-c", code, *options, *arguments],
        capture_output=True, text=True, cwd=folder, env=environment(PYTEST_DISABLE_PLUGIN_AUTOLOAD="1"), timeout=120,
        check=False,
    )  # fmt: skip


def test_cases_are_tests(tmp_path: Path, here: Here) -> None:
    """Good ones pass; failures tell file and line; YAML of others is left alone, unless it is named."""
    library(tmp_path, good=GAS, off=GAS, new=GAS, bad=INVALID, other="name: x\npathcalc: 1\n")
    here("regress", ".", "good", "off", "--accept", "--reason", "x", cwd=tmp_path, code=0)
    (tmp_path / "off.yaml").write_text(GAS.replace("320 K", "321 K"))
    (tmp_path / "test_plain.py").write_text("def test_plain():\n    assert True\n")
    done = pytest_run(tmp_path)
    assert done.returncode == 1, done.stdout + done.stderr
    assert "3 failed, 2 passed" in done.stdout
    assert "bad.yaml:7:12: error: unit 'C' is not known" in done.stdout
    assert "off.yaml:9:5: error: heater.T: stored 320 K, now 321 K" in done.stdout
    assert "new.yaml:1:1: error: there is no stored result new.results.json" in done.stdout
    assert "Traceback" not in done.stdout
    done = pytest_run(tmp_path, "good.yaml", "other.yaml")
    assert "1 failed, 1 passed" in done.stdout
    assert "other.yaml:1:1: error: this is no case: a case begins with the key pathcalc" in done.stdout


def test_the_configuration_restricts_it(tmp_path: Path) -> None:
    library(tmp_path / "cases", a=GAS)
    library(tmp_path / "drafts", b=INVALID)
    (tmp_path / "pytest.ini").write_text("[pytest]\npathcalc_cases = cases\npathcalc_stored = optional\n")
    done = pytest_run(tmp_path)
    assert (done.returncode, "1 passed" in done.stdout) == (0, True), done.stdout + done.stderr


def test_it_is_installed_by_its_entry_point() -> None:
    found = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))
    (module,) = found["project"]["entry-points"]["pytest11"].values()
    assert (ROOT / Path(*module.split("."))).with_suffix(".py").is_file()


def test_importing_it_is_cheap() -> None:
    """It is imported by every pytest of an environment: nothing heavy comes with it."""
    code = (
        "import sys, pathcalc.library.pytest_plugin as p; "
        "print([m for m in ('numpy', 'scipy', 'pydantic', 'yaml') if m in sys.modules])"
    )
    done = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, text=True, env=environment(), timeout=60, check=True
    )
    assert done.stdout == "[]\n"
