"""Includes: what wins, what may not be left, what is digested."""

from __future__ import annotations

from pathlib import Path

import pytest

from pathcalc.case import load
from pathcalc.errors import InvalidCaseError

CASE = """\
pathcalc: 1
title: Main
include: {include}
boundary: flow
start: {{T: 300 K}}
legs:
  - {{name: first, path: adiabatic, to: {{p: 2 bar}}}}
"""


@pytest.fixture
def top(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    (tmp_path / ".git").mkdir()
    (tmp_path / "cases").mkdir()
    (tmp_path / "shared").mkdir()
    monkeypatch.chdir(tmp_path)
    return tmp_path


def write(path: Path, text: str) -> Path:
    path.write_text(text, encoding="utf-8")
    return path


def main(top: Path, include: str) -> Path:
    write(top / "cases" / "main.yaml", CASE.format(include=include))
    return Path("cases/main.yaml")


def refused(path: Path, **more: Path) -> list[str]:
    with pytest.raises(InvalidCaseError) as caught:
        load(path, **more)
    return [str(f) for f in caught.value.findings]


SITE = """\
title: Site
fluid: {substance: nitrogen, equation: soave, datum: liquid-0C}
start: {p: 1 bar}
legs: []
units: {T: degC}
"""


def test_mappings_merge_and_this_file_wins(top: Path) -> None:
    write(top / "shared" / "site.yaml", SITE)
    case = load(main(top, "../shared/site.yaml"))
    assert case.id == "cases/main"
    assert case.title == "Main"
    assert list(case.start) == ["p", "T"] or set(case.start) == {"p", "T"}
    assert [leg.name for leg in case.legs] == ["first"]
    assert case.fluid.datum == "liquid-0C"
    assert case.includes == (("../shared/site.yaml", SITE),)
    assert case.positions["start", "p"].file == "shared/site.yaml"


def test_later_files_of_a_list_win_and_files_include_others(top: Path) -> None:
    write(top / "shared" / "site.yaml", SITE)
    write(top / "shared" / "deep.yaml", "units: {T: degF, p: psi}")
    write(top / "shared" / "more.yaml", "include: deep.yaml\nunits: {p: kPa}")
    case = load(main(top, "[../shared/site.yaml, ../shared/more.yaml]"))
    assert (case.units["T"], case.units["p"]) == ("degF", "kPa")
    assert [name for name, _ in case.includes] == [
        "../shared/site.yaml",
        "../shared/more.yaml",
        "../shared/deep.yaml",
    ]


def test_digest_depends_on_every_file(top: Path) -> None:
    site = write(top / "shared" / "site.yaml", SITE)
    path = main(top, "../shared/site.yaml")
    before = load(path).sha256
    assert load(path).sha256 == before
    write(site, SITE + "# a remark\n")
    assert load(path).sha256 != before


def test_a_finding_is_told_in_the_file_it_is_in(top: Path) -> None:
    write(top / "shared" / "site.yaml", SITE.replace("1 bar", "1 Bar"))
    assert refused(main(top, "../shared/site.yaml")) == [
        "shared/site.yaml:3:12: error: unit 'Bar' is not known; write bar (bad-unit)"
    ]


def test_the_root_may_not_be_left(top: Path) -> None:
    outside = write(top.parent / f"{top.name}-outside.yaml", SITE)
    message = "leads out of the root folder; move the file under it, or set --root (include-outside)"
    (line, *_) = refused(main(top, f"../../{outside.name}"))
    assert line == f"cases/main.yaml:3:10: error: included file '../../{outside.name}' {message}"
    (top / "shared" / "link.yaml").symlink_to(outside)
    (line, *_) = refused(main(top, "../shared/link.yaml"))
    assert line == f"cases/main.yaml:3:10: error: included file '../shared/link.yaml' {message}"


def test_a_given_root_is_the_fence(top: Path) -> None:
    write(top / "shared" / "site.yaml", SITE)
    (line, *_) = refused(main(top, "../shared/site.yaml"), root=top / "cases")
    assert "(include-outside)" in line


def test_without_a_checkout_the_root_is_the_own_folder(top: Path) -> None:
    (top / ".git").rmdir()
    write(top / "shared" / "site.yaml", SITE)
    (line, *_) = refused(main(top, "../shared/site.yaml"))
    assert "(include-outside)" in line


def test_cycles_end(top: Path) -> None:
    write(top / "shared" / "a.yaml", "include: b.yaml")
    write(top / "shared" / "b.yaml", "include: a.yaml")
    (line, *_) = refused(main(top, "../shared/a.yaml"))
    cycle = [s for s in refused(main(top, "../shared/a.yaml")) if "include-cycle" in s]
    assert cycle == ["shared/b.yaml:1:10: error: included file 'a.yaml' includes itself in the end (include-cycle)"]
    assert line


def test_a_fan_of_includes_ends(top: Path) -> None:
    for i in range(30):
        write(top / "shared" / f"{i}.yaml", f"include: [{i + 1}.yaml, {i + 1}.yaml]")
    write(top / "shared" / "30.yaml", "units: {}")
    assert any("include-too-many" in s for s in refused(main(top, "../shared/0.yaml")))


def test_a_folder_and_a_loop_of_links_are_no_files(top: Path) -> None:
    (top / "shared" / "loop.yaml").symlink_to(top / "shared" / "loop.yaml")
    assert "(include-missing)" in refused(main(top, "../shared/loop.yaml"))[0]
    assert "is not a file (include-missing)" in refused(main(top, "../shared"))[0]


def test_a_card_is_fenced_resolved_and_digested(top: Path) -> None:
    card = write(top / "shared" / "gas.yaml", "substance: gas\n")
    text = "pathcalc: 1\ntitle: Card\nboundary: flow\nstart: {T: 300 K, p: 1 bar}\n"
    text += "legs: [{name: a, path: isobaric, to: {T: 310 K}}]\nfluid: {card: CARD, equation: soave}\n"
    path = write(top / "cases" / "card.yaml", text.replace("CARD", "../shared/gas.yaml"))
    case = load(path)
    assert case.fluid.card_path == str(card.resolve())
    assert case.includes == (("../shared/gas.yaml", "substance: gas\n"),)
    write(card, "substance: gas 2\n")
    assert load(path).sha256 != case.sha256
    write(path, text.replace("CARD", "../../gas.yaml"))
    assert "(include-outside)" in refused(path)[0]


def test_an_equation_beside_a_card_is_digested_and_fenced(top: Path) -> None:
    write(top / "shared" / "gas.yaml", "substance: gas\n")
    text = "pathcalc: 1\ntitle: t\nboundary: flow\nstart: {T: 300 K, p: 1 bar}\n"
    text += "legs: [{name: a, path: isobaric, to: {T: 310 K}}]\n"
    text += "fluid: {card: ../shared/gas.yaml, equation: reference}\n"
    path = write(top / "cases" / "card.yaml", text)
    without = load(path, root=top).sha256
    (top / "shared" / "reference").mkdir()
    beside = write(top / "shared" / "reference" / "gas.yaml", "reference: gas\n")
    case = load(path, root=top)
    card, equation = (name for name, _ in case.includes)
    assert card == "../shared/gas.yaml"
    assert equation.rpartition("/") == (card.rpartition("/")[0] + "/reference", "/", "gas.yaml")
    assert case.sha256 != without
    beside.unlink()
    beside.symlink_to(write(top.parent / "outside.yaml", "reference: gas\n"))
    with pytest.raises(InvalidCaseError, match="leads out of the root"):
        load(path, root=top)


def test_a_card_of_an_included_file_is_relative_to_that_file(top: Path) -> None:
    write(top / "shared" / "gas.yaml", "substance: gas\n")
    write(top / "shared" / "site.yaml", SITE.replace("substance: nitrogen", "card: gas.yaml"))
    case = load(main(top, "../shared/site.yaml"))
    assert case.fluid.card_path == str((top / "shared" / "gas.yaml").resolve())
