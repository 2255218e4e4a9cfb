"""Libraries that mean harm: refused or handled with a plain message, in bounded time and memory."""

from __future__ import annotations

import json
import os
import xml.etree.ElementTree as ET
from pathlib import Path

import pytest
from library_cases import GAS, Here, as_json, library, status_of

NAMES = [
    "two words",
    "new\nline",
    "$(touch owned)",
    "-rf",
    "semi;colon",
    'quo"te',
    "per%cent::x",
    "a,b",
    "ünïcode",
    "\x1b[31m",
]


def refused(tmp_path: Path, here: Here) -> dict[str, list[str]]:
    """Codes of the findings of every case of a run, by file name."""
    done = here("regress", ".", "--format", "json", cwd=tmp_path)
    return {Path(row["file"]).name: [f["code"] for f in row["findings"]] for row in as_json(done)["cases"]}


def test_texts_that_mean_harm(tmp_path: Path, here: Here) -> None:
    bomb = "".join(f"x-{i}: &{i} [{', '.join([f'*{i - 1}'] * 9 if i else ['1'] * 9)}]\n" for i in range(9))
    library(
        tmp_path,
        bomb=GAS + bomb,
        deep=GAS + f"x-deep: {'[' * 100}{']' * 100}\n",
        tag=GAS + "x-run: !!python/object/apply:os.system [touch owned]\n",
        control=GAS.replace("title: Air warmed, then let down", 'title: "\\e[31mAir"'),
        merge=GAS + "<<: {title: other}\n",
        good=GAS,
    )
    found = refused(tmp_path, here)
    assert found["good.yaml"] == ["no-stored-result"]
    expected = {"bomb": "yaml-alias", "deep": "too-deep", "tag": "yaml-tag", "control": "control-character",
                "merge": "merge-key"}  # fmt: skip
    for name, code in expected.items():
        assert found[f"{name}.yaml"] == [code], name
    assert not (tmp_path / "owned").exists()
    assert "\x1b" not in here("regress", ".", cwd=tmp_path).stdout


def test_a_file_of_100_megabytes(tmp_path: Path, here: Here) -> None:
    """Read as far as a case can be long, and no further; as a stored result and as an included file as well."""
    import tracemalloc

    library(tmp_path, good=GAS, including=GAS.replace("shared/site.yaml", "huge.yaml"))
    for name in ("huge.yaml", "good.results.json"):
        with (tmp_path / name).open("wb") as stream:
            stream.write(b"pathcalc: 1\n#")
            stream.truncate(100_000_000)
    tracemalloc.start()
    found = refused(tmp_path, here)
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    assert found == {
        "good.yaml": ["stored-result-damaged"],
        "huge.yaml": ["file-too-large"],
        "including.yaml": ["file-too-large"],
    }
    assert peak < 150e6


def test_links(tmp_path: Path, here: Here) -> None:
    """Loops end, what leads out is told and left alone, whichever kind of link it is."""
    outside = tmp_path / "outside"
    library(outside, secret=GAS)
    inside = library(tmp_path / "inside", good=GAS)
    (inside / "loop").symlink_to(inside)
    (inside / "self.yaml").symlink_to("self.yaml")
    (inside / "away").symlink_to(outside)
    (inside / "away.yaml").symlink_to(outside / "secret.yaml")
    (inside / "shared" / "out.yaml").symlink_to(outside / "shared" / "site.yaml")
    (inside / "through.yaml").write_text(GAS.replace("shared/site.yaml", "shared/out.yaml"))
    (inside / "up.yaml").write_text(GAS.replace("shared/site.yaml", "../outside/shared/site.yaml"))
    (inside / "card.yaml").write_text(GAS.replace("substance: air", "card: ../outside/secret.yaml"))
    (inside / "null.yaml").write_text(GAS.replace("shared/site.yaml", "/dev/zero"))
    os.mkfifo(inside / "pipe.yaml")
    done = here("regress", ".", "--format", "json", cwd=inside)
    rows = {Path(row["file"]).name: [f["code"] for f in row["findings"]] for row in as_json(done)["cases"]}
    assert rows == {
        "away": ["link-outside"],
        "away.yaml": ["link-outside"],
        "card.yaml": ["include-outside"],
        "good.yaml": ["no-stored-result"],
        "null.yaml": ["include-path"],
        "through.yaml": ["include-outside"],
        "up.yaml": ["include-outside"],
    }
    assert not list(outside.glob("*.json"))
    checked = here("check", ".", cwd=inside, code=3)
    assert "away:1:1: error: this link leads out of the root folder and is not followed" in checked.stderr
    assert "1 of 5 cases valid" in checked.stderr


def test_accepting_writes_over_a_link_and_not_through_it(tmp_path: Path, here: Here) -> None:
    inside = library(tmp_path / "inside", good=GAS)
    victim = tmp_path / "victim.txt"
    victim.write_text("mine")
    (inside / "good.results.json").symlink_to(victim)
    here("regress", ".", "--accept", "--reason", "x", cwd=inside, code=0)
    assert victim.read_text() == "mine"
    assert not (inside / "good.results.json").is_symlink()


def test_names_of_any_characters(tmp_path: Path, here: Here) -> None:
    """Accepted, compared and reported under their own names; nothing runs, no output breaks."""
    library(tmp_path, **dict.fromkeys(NAMES, GAS))
    here("regress", ".", "--accept", "--reason", "x", cwd=tmp_path, code=0)
    assert {p.name.removesuffix(".results.json") for p in tmp_path.glob("*.results.json")} == set(NAMES)
    (tmp_path / "new\nline.yaml").write_text(GAS.replace("320 K", "321 K"))
    done = here("regress", ".", "--format", "json", "--junit", "out.xml", cwd=tmp_path, code=1)
    assert status_of(done)["new\nline.yaml"] == "differs"
    found = {case.get("name") for case in ET.parse(tmp_path / "out.xml").iter("testcase")}
    assert {f"{n}.yaml" for n in NAMES if n.isprintable()} < found
    text = here("regress", ".", cwd=tmp_path, code=1)
    assert "new\\x0aline.yaml:9:5: error: heater.T" in text.stdout
    assert "\x1b" not in text.stdout + text.stderr
    marks = here("regress", ".", "--format", "github", cwd=tmp_path, code=1).stdout
    assert all(line.startswith("::error file=new%0Aline.yaml,line=") for line in marks.splitlines())
    here("regress", ".", "new\nline", "--accept", "--reason", "x", cwd=tmp_path, code=0)
    assert "nothing differs" in here("compare", "--", "-rf.yaml", "a,b.yaml", cwd=tmp_path, code=0).stdout
    assert not (tmp_path / "owned").exists()


def test_a_name_that_is_not_unicode(tmp_path: Path, here: Here) -> None:
    library(tmp_path, good=GAS)
    try:
        os.rename(tmp_path / "good.yaml", os.fsencode(tmp_path) + b"/\xff.yaml")
    except OSError:
        pytest.skip("the file system takes no such name")
    here("regress", ".", "--accept", "--reason", "x", cwd=tmp_path, code=0)
    done = here("regress", ".", "--format", "json", "--junit", "out.xml", cwd=tmp_path, code=0)
    assert [row["status"] for row in json.loads(done.stdout)["cases"]] == ["passed"]
    assert b"\xff.results.json" in os.listdir(os.fsencode(tmp_path))
    ET.parse(tmp_path / "out.xml")


def test_a_reason_of_any_characters(tmp_path: Path, here: Here) -> None:
    library(tmp_path, good=GAS)
    here("regress", ".", "--accept", "--reason", 'a\x1b[31m "b"\n$(c) é', cwd=tmp_path, code=0)
    stored = json.loads((tmp_path / "good.results.json").read_text())
    assert stored["accepted"]["reason"] == 'a [31m "b" $(c) é'
    assert "longer than" in here("regress", ".", "--accept", "--reason", "x" * 501, cwd=tmp_path, code=2).stderr


def test_numbers_in_a_stored_result_that_overflow(tmp_path: Path, here: Here) -> None:
    library(tmp_path, good=GAS)
    here("regress", ".", "--accept", "--reason", "x", cwd=tmp_path, code=0)
    place = tmp_path / "good.results.json"
    for number, status in (
        ("1e400", "stored result damaged"),
        ("1" * 5000, "stored result damaged"),
        ("-0.0", "differs"),
    ):
        text = place.read_text()
        place.write_text(text.replace('"T": 320.0', f'"T": {number}', 1))
        assert status_of(here("regress", ".", "--format", "json", cwd=tmp_path, code=1))["good.yaml"] == status
        place.write_text(text)
