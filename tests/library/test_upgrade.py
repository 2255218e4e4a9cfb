"""Cases of an older version: a precise message, or brought up to date with every comment in its place."""

from __future__ import annotations

import os
from pathlib import Path

import pytest
from library_cases import GAS, Here, library

import pathcalc
from pathcalc.library.migrations import MIGRATIONS, WORDS_OF_VERSION_0
from pathcalc.library.upgrade import CURRENT

DRAFT = """\
# the first line
"pathcalc": 0            # draft
title: isentropic work   # the word stands here, too, and stays
fluid: {substance: air, equation: ideal-gas}   # fluid
boundary: flow

start: {T: 290 K, p: 10 bar}
legs:
  - {name: isentropic, path: 'isentropic', to: {p: 20 bar}}   # up
  - repeat: 2
    legs:
      - name: b
        path: isenthalpic # down
        to: {p: {ratio: 0.9}}
"""


def test_comments_and_layout_stay(tmp_path: Path, here: Here) -> None:
    file = tmp_path / "a.yaml"
    file.write_bytes(DRAFT.replace("\n", "\r\n").encode())
    os.chmod(file, 0o640)
    done = here("check", ".", cwd=tmp_path, code=3)
    assert done.stdout == (
        "a.yaml:2:13: error: version 0 of the format is older than 1; pathcalc check --upgrade rewrites the file "
        "(wrong-version)\n"
    )
    done = here("check", "--upgrade", ".", cwd=tmp_path, code=0)
    assert done.stdout.splitlines() == [
        "a.yaml:2:13: warning: 0 -> 1 (upgraded)",
        "a.yaml:9:30: warning: isentropic -> adiabatic (upgraded)",
        "a.yaml:13:15: warning: isenthalpic -> throttling (upgraded)",
    ]
    wanted = DRAFT.replace('"pathcalc": 0', '"pathcalc": 1').replace("path: 'isentropic'", "path: adiabatic")
    wanted = wanted.replace("path: isenthalpic", "path: throttling")
    assert file.read_bytes() == wanted.replace("\n", "\r\n").encode()
    assert file.stat().st_mode & 0o777 == 0o640
    before = file.stat().st_mtime_ns
    assert here("check", "--upgrade", ".", cwd=tmp_path, code=0).stdout == ""
    assert file.stat().st_mtime_ns == before


@pytest.mark.parametrize(
    ("text", "said"),
    [
        (
            GAS.replace("pathcalc: 1", "pathcalc: 7"),
            "version 7 of the format is newer than this program, which reads 1",
        ),
        (GAS.replace("pathcalc: 1", "pathcalc: 0").replace("290 K", "290 C"), "unit 'C' is not known"),
        (DRAFT.replace("'isentropic'", '"isentro\\x70ic"'), "change it by hand"),
        (DRAFT + "legs: {\n", "not readable as YAML"),
    ],
)
def test_a_file_that_cannot_be_upgraded_stays(text: str, said: str, tmp_path: Path, here: Here) -> None:
    library(tmp_path, a=text)
    done = here("check", "--upgrade", "a.yaml", cwd=tmp_path, code=3)
    assert said in done.stdout
    assert (tmp_path / "a.yaml").read_text() == text


def test_standard_input_is_no_file_to_rewrite(tmp_path: Path, here: Here) -> None:
    assert "--upgrade rewrites files" in here("check", "--upgrade", "-", cwd=tmp_path, code=2).stderr


def test_every_older_version_has_its_way_here() -> None:
    """One step each from 0 on; and the words that are written anew are kinds of legs of today."""
    from pathcalc.case.leg_registry import leg_models

    assert list(MIGRATIONS) == list(range(CURRENT))
    assert set(WORDS_OF_VERSION_0.values()) <= set(leg_models())


def test_the_users_own_keys_stay(tmp_path: Path, here: Here) -> None:
    text = DRAFT.replace("'isentropic'", "isentropic").replace("path: isenthalpic", "path: throttling")
    library(tmp_path, a=text.replace("      - name: b\n", "      - name: b\n        x-mine: isentropic\n"))
    here("check", "--upgrade", "a.yaml", cwd=tmp_path, code=0)
    assert "x-mine: isentropic" in (tmp_path / "a.yaml").read_text()
    assert [leg.path for leg in pathcalc.load(tmp_path / "a.yaml").legs] == ["adiabatic", "throttling", "throttling"]
