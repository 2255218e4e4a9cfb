"""The parts a drawing is made of: ticks, cuts, thinning, places for texts, paths. Properties over random inputs."""

from __future__ import annotations

import math

import numpy as np
from drawings import points
from hypothesis import given, settings
from hypothesis import strategies as st

from pathcalc.report.drawing import lines, text
from pathcalc.report.drawing.canvas import Canvas, path_of
from pathcalc.report.drawing.labels import Room, around, beside
from pathcalc.report.drawing.scale import Scale, limits

finite = st.floats(-1e7, 1e7, allow_nan=False).filter(lambda x: x == 0.0 or abs(x) > 1e-7)
paths = st.lists(st.tuples(st.floats(-900, 900), st.floats(-900, 900)), min_size=2, max_size=30).map(np.array)
BOX = (0.0, 0.0, 300.0, 200.0)


def read(label: str) -> float:
    plain = label.replace("−", "-").replace("\u202f", "")
    mantissa, _, power = plain.partition("×10")
    digits = str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹", "-0123456789")
    return float(mantissa) * 10.0 ** (int(power.translate(digits)) if power else 0)


@settings(max_examples=80, deadline=None)
@given(finite, st.floats(1e-5, 1e7), st.integers(3, 9))
def test_linear_ticks_are_few_round_and_true(low: float, span: float, most: int) -> None:
    span = max(span, 1e-4 * abs(low))
    scale = Scale(low, low + span, False, 0.0, 100.0)
    ticks = scale.ticks(most)
    assert 1 <= len(ticks) <= most
    values = [v for v, _ in ticks]
    assert values == sorted(values)
    assert len({label for _, label in ticks}) == len(ticks)
    steps = np.diff(values)
    for value, label in ticks:
        assert low - 1e-6 * span <= value <= low + span * (1 + 1e-6)
        assert math.isclose(read(label) * 10.0**scale.power, value, rel_tol=1e-6, abs_tol=1e-6 * span)
    if len(steps) > 1:
        assert np.allclose(steps, steps[0], rtol=1e-6)


@settings(max_examples=80, deadline=None)
@given(st.floats(-6, 8), st.floats(0.02, 9.0), st.integers(3, 9))
def test_logarithmic_ticks_are_few_and_true(start: float, decades: float, most: int) -> None:
    scale = Scale(10.0**start, 10.0 ** (start + decades), True, 0.0, 100.0)
    ticks = scale.ticks(most)
    assert 1 <= len(ticks) <= most
    places = [float(scale(v)) for v, _ in ticks]
    assert places == sorted(places)
    for value, label in ticks:
        assert -1e-6 <= float(scale(value)) <= 100.0 + 1e-6
        assert math.isclose(read(label) * 10.0**scale.power, value, rel_tol=1e-5)


@settings(max_examples=100, deadline=None)
@given(st.lists(finite, min_size=1, max_size=8).map(np.array))
def test_limits_hold_every_value(values: np.ndarray) -> None:
    low, high = limits(values, False)
    assert low < values.min()
    assert high > values.max()


@settings(max_examples=80, deadline=None)
@given(paths)
def test_a_cut_line_is_what_was_inside(path: np.ndarray) -> None:
    runs = lines.cut(path, BOX)
    for run in runs:
        assert lines.within(run, BOX, 1e-6).all()
    even = lines.dots(path, 1.0, 100_000)
    inside = even[lines.within(even, BOX, -1.0)]
    if len(inside):
        kept = np.concatenate([lines.dots(run, 1.0, 100_000) for run in runs])
        assert max(float(np.hypot(*(kept - spot).T).min()) for spot in inside[:: max(1, len(inside) // 20)]) < 2.0


@settings(max_examples=80, deadline=None)
@given(paths, st.floats(0.05, 20.0))
def test_a_thinned_line_stays_within_the_tolerance(path: np.ndarray, tolerance: float) -> None:
    thin = lines.thinned(path, tolerance)
    assert (thin[0] == path[0]).all()
    assert (thin[-1] == path[-1]).all()
    a, way = thin[:-1], np.diff(thin, axis=0)
    size = np.maximum((way**2).sum(axis=1), 1e-12)
    for spot in path:
        along = np.clip(((spot - a) * way).sum(axis=1) / size, 0.0, 1.0)
        assert np.hypot(*(a + along[:, None] * way - spot).T).min() <= tolerance + 1e-6


@settings(max_examples=80, deadline=None)
@given(paths)
def test_a_written_path_reads_back_to_a_tenth(path: np.ndarray) -> None:
    found = points(path_of(path))
    distinct = [p for i, p in enumerate(np.rint(10 * path)) if i == 0 or (p != np.rint(10 * path)[i - 1]).any()]
    if len(distinct) < 2:
        assert not found.size
        return
    assert len(found) == len(distinct)
    assert np.abs(found - np.array(distinct) / 10).max() < 0.0501


def test_a_path_breaks_at_gaps() -> None:
    gap = [np.nan, np.nan]
    assert path_of(np.array([[0, 0], [1, 1], gap, [5, 5], gap, [2, 2], [3, 2.04]])) == "M0 0l1 1M2 2l1 0"
    assert path_of(np.array([[-0.04, 0.05], [0.5, -0.5]])) == "M0 0l.5-.5"


def test_an_outline_is_cut_to_the_view() -> None:
    huge = np.array([[-1e6, 100.0], [150.0, -1e6], [1e6, 100.0], [150.0, 1e6]])
    inside = lines.polygon_cut(huge, BOX, 10.0)
    assert lines.within(inside, BOX, 10.0 + 1e-6).all()
    corners = [[-10, -10], [310, -10], [310, 210], [-10, 210]]
    assert all(np.hypot(*(inside - corner).T).min() < 1e-6 for corner in corners)
    assert not len(lines.polygon_cut(huge + 1e8, BOX, 10.0))
    ring = np.array([[10.0, 10.0], [90.0, 10.0], [90.0, 90.0], [10.0, 90.0]])
    held = lines.inside_outline(np.array([[50.0, 50.0], [5.0, 50.0], [95.0, 50.0], [50.0, 95.0]]), ring)
    assert held.tolist() == [True, False, False, False]


@settings(max_examples=100, deadline=None)
@given(st.lists(st.tuples(st.floats(30, 270), st.floats(30, 170)), min_size=1, max_size=6))
def test_texts_keep_off_each_other_and_stay_in_the_frame(spots: list[tuple[float, float]]) -> None:
    room = Room(BOX)
    placed = []
    for x, y in spots:
        where = room.settle(beside(x, y, 20.0, 12.0, (5.0, 10.0, 20.0, 40.0, 60.0)), 20.0, 12.0)
        placed.append(around(*where, 20.0, 12.0))
    for i, a in enumerate(placed):
        assert a[0] >= -1e-9
        assert a[1] >= -1e-9
        assert a[2] <= BOX[2] + 1e-9
        assert a[3] <= BOX[3] + 1e-9
        for b in placed[:i]:
            assert min(a[2], b[2]) - max(a[0], b[0]) <= 1e-9 or min(a[3], b[3]) - max(a[1], b[1]) <= 1e-9


def test_a_text_keeps_off_a_line() -> None:
    room = Room(BOX)
    room.ink(lines.dots(np.array([[0.0, 100.0], [300.0, 100.0]])), 2.0)
    _, y = room.settle([(150.0, 100.0, 0.0), (150.0, 80.0, 1.0)], 40.0, 12.0)
    assert y == 80.0


@settings(max_examples=40, deadline=None)
@given(st.text(max_size=40), st.floats(20, 200))
def test_shortened_text_fits(words: str, room: float) -> None:
    assert text.width(text.shortened(words, 13.0, room), 13.0) <= room
    if text.width(words, 13.0) <= room:
        assert text.shortened(words, 13.0, room) == words


def test_attributes_and_texts_are_escaped() -> None:
    canvas = Canvas("d-x", 100.0)
    canvas.text(1, 2, '<b> & "quotes"', data_note='"><script>')
    svg = canvas.render(10.0, "<t>", "a & b")
    assert "&lt;b&gt; &amp; " in svg
    assert "<script>" not in svg
    assert '<title id="d-x-title">&lt;t&gt;</title>' in svg
