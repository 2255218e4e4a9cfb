"""Isobars and isotherms for diagrams against an independent library, and what becomes of them at the edges."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest

import pathcalc
from pathcalc.path.isolines import MOST, distinct

CP = pytest.importorskip("CoolProp.CoolProp")

CASE = """
pathcalc: 1
title: t
fluid: {substance: nitrogen, equation: reference}
boundary: flow
start: {T: 95 K, p: 12 bar}
legs:
  - {name: boil, path: isobaric, to: {T: 160 K}}
  - {name: valve, path: throttling, to: {p: 2 bar}}
"""


def test_isolines_agree_with_an_independent_library() -> None:
    """Entropy and enthalpy along every line, counted from the start (nitrogen: Span et al., 2000, in both)."""
    solution = pathcalc.solve(pathcalc.loads(CASE))
    start = solution.states["start"]
    s0, h0 = (CP.PropsSI(k, "T", 95.0, "P", 12e5, "Nitrogen") for k in "SH")
    lines = solution.isolines
    assert [line.value for line in lines if line.key == "p"] == pytest.approx([2e5, 12e5])
    seen = 0
    for line in lines:
        for one, two in pairwise(line.pieces):
            assert all(getattr(one, k)[-1] == getattr(two, k)[0] for k in ("T", "p", "v", "s", "h"))
        for piece in line.pieces:
            assert np.ptp(getattr(piece, line.key)) == 0.0
            if piece.phase == "two-phase":
                assert np.ptp(piece.T) == 0.0
                assert np.ptp(piece.p) == 0.0
                x = {"p": piece.p[0], "T": piece.T[0]}[line.key]
                given = ("P", x) if line.key == "p" else ("T", x)
                want = sorted(CP.PropsSI("S", *given, "Q", q, "Nitrogen") - s0 for q in (0, 1))
                assert sorted(piece.s - start.s) == pytest.approx(want, rel=1e-6)
                continue
            for T, p, s, h in list(zip(piece.T, piece.p, piece.s, piece.h, strict=True))[1:-1:5]:
                assert s - start.s == pytest.approx(
                    CP.PropsSI("S", "T", T, "P", p, "Nitrogen") - s0, rel=1e-6, abs=1e-4
                )
                assert h - start.h == pytest.approx(CP.PropsSI("H", "T", T, "P", p, "Nitrogen") - h0, rel=1e-6, abs=0.1)
                seen += 1
    assert seen > 20
    assert any(piece.phase == "two-phase" for line in lines for piece in line.pieces)


def test_lines_end_where_the_equation_does() -> None:
    """Water from near its triple point: no piece below it, none above the highest temperature."""
    solution = pathcalc.solve(
        pathcalc.loads(
            """
pathcalc: 1
title: t
fluid: {substance: water, equation: reference}
boundary: flow
start: {T: 1 degC, p: 1 bar}
legs: [{name: heat, path: isobaric, to: {T: 1200 K}}]
"""
        )
    )
    model = solution.path.model
    for line in solution.isolines:
        for piece in line.pieces:
            assert piece.T.size > 1
            assert piece.T.min() >= model.T_triple * (1 - 1e-9)
            assert all(np.isfinite(getattr(piece, key)).all() for key in ("T", "p", "v", "s", "h", "u"))


def test_values_that_fall_together_share_a_line() -> None:
    values = np.array([5.0, 1.0, 1.0001, np.nan, 3.0, 5.0])
    assert [values[i] for i in distinct(values, 0.01)] == [1.0, 3.0, 5.0]
    many = np.concatenate([np.arange(20.0), [0.5]])
    kept = many[distinct(many, 0.01)]
    assert len(kept) == MOST
    assert kept[0] == 0.0
    assert kept[-1] == 19.0


def test_ideal_gas_has_one_piece_a_line() -> None:
    text = CASE.replace("reference", "ideal-gas").replace("95 K", "300 K").replace("160 K", "400 K")
    for line in pathcalc.solve(pathcalc.loads(text)).isolines:
        (piece,) = line.pieces
        assert piece.phase == "one-phase"
