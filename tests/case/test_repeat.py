"""Repeats written out, and what names mean in them."""

from __future__ import annotations

from typing import Any

from pathcalc.case import loads
from pathcalc.quantities import Relative

HEAD = """\
pathcalc: 1
title: Repeats
fluid: {substance: nitrogen, equation: soave}
boundary: flow
start: {T: 300 K, p: 1 bar}
legs:
"""


def legs(text: str) -> list[Any]:
    return list(loads(HEAD + text).legs)


def test_names_are_numbered() -> None:
    got = legs(
        """\
  - repeat: 2
    legs:
      - {name: stage, path: adiabatic, to: {p: {ratio: 2}}}
      - {name: cooler, path: workless, to: {T: {same_as: start}}}
  - {name: last, path: throttling, to: {p: {same_as: stage 1}}}
"""
    )
    assert [leg.name for leg in got] == ["stage 1", "cooler 1", "stage 2", "cooler 2", "last"]
    assert got[0].origin == got[2].origin == (9, 9)
    assert got[4].to.p == Relative("same_as", None, "stage 1", 11, 44)


def test_a_sibling_is_that_of_the_same_time_through() -> None:
    got = legs(
        """\
  - repeat: 3
    legs:
      - {name: a, path: isobaric, to: {T: {rise: 5 K}}}
      - {name: b, path: isobaric, to: {T: {same_as: a}}}
"""
    )
    assert [leg.to.T.state for leg in got if leg.name.startswith("b")] == ["a 1", "a 2", "a 3"]


def test_a_name_outside_is_found_from_within() -> None:
    got = legs(
        """\
  - {name: a, path: isobaric, to: {T: {rise: 5 K}}}
  - repeat: 2
    legs:
      - {name: b, path: isobaric, to: {T: {same_as: a}}}
"""
    )
    assert [leg.to.T.state for leg in got[1:]] == ["a", "a"]


def test_nested_repeats_number_from_the_outside_in() -> None:
    got = legs(
        """\
  - repeat: 2
    legs:
      - {name: a, path: isobaric, to: {T: {rise: 5 K}}}
      - repeat: 2
        legs:
          - {name: b, path: isobaric, to: {T: {same_as: a}}}
          - {name: c, path: isobaric, to: {T: {same_as: b}}}
"""
    )
    assert [leg.name for leg in got] == [
        "a 1", "b 1 1", "c 1 1", "b 1 2", "c 1 2", "a 2", "b 2 1", "c 2 1", "b 2 2", "c 2 2",
    ]  # fmt: skip
    states = {leg.name: leg.to.T.state for leg in got if not leg.name.startswith("a")}
    assert states["b 1 2"] == "a 1"
    assert states["c 2 1"] == "b 2 1"


def test_ten_thousand_legs_are_written_out() -> None:
    got = legs(
        """\
  - repeat: 100
    legs:
      - repeat: 100
        legs:
          - {name: a, path: isobaric, to: {T: {rise: 0.01 K}}}
"""
    )
    assert len(got) == 10_000
    assert got[-1].name == "a 100 100"
