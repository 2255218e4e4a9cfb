"""A state diagram on a sheet: frame, dome, isolines, legs, states, legend."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from pathcalc.report.context import Context
from pathcalc.report.drawing import legend, lines, style, text
from pathcalc.report.drawing.canvas import Canvas
from pathcalc.report.drawing.labels import Room, around, beside, together
from pathcalc.report.drawing.plane import ISOLINES, KINDS, Leg, Plane
from pathcalc.report.drawing.scale import Scale
from pathcalc.report.numbers import short, ten_to
from pathcalc.report.textsafe import clean
from pathcalc.report.words import SYMBOLS, say

Array = NDArray[np.float64]

_TOP, _RIGHT, _HEIGHT = 8.0, 12.0, 300.0
_BELOW = 44.0
_LINE = 17.0
_MOST_NAMED = 18
_SHORTEST_ARROW = 24.0
_OUTSIDE = 12.0


class Diagram:
    """One diagram of a solution, ready to be drawn."""

    def __init__(self, ctx: Context, name: str) -> None:
        self.ctx = ctx
        self.plane = plane = Plane(ctx, name)
        ticks_y = plane.scales[1].ticks(7)
        left = 24.0 + max((text.width(t, style.SMALLEST) for _, t in ticks_y), default=0.0) + 8.0
        self.box: lines.Box = (left, _TOP, style.WIDTH - _RIGHT, _TOP + _HEIGHT)
        self.sx: Scale = plane.scales[0].on(self.box[0], self.box[2])
        self.sy: Scale = plane.scales[1].on(self.box[3], self.box[1])
        self._ticks = (self._ticks_x(), ticks_y)
        self.room = Room(self.box)
        self._arrows: list[Array] = []

    def _ticks_x(self) -> list[tuple[float, str]]:
        """As many ticks as have room beside each other."""
        ticks: list[tuple[float, str]] = []
        for most in range(8, 2, -1):
            ticks = self.sx.ticks(most)
            ends = [
                (self.sx(v) - w / 2, self.sx(v) + w / 2)
                for v, t in ticks
                for w in [text.width(t, style.SMALLEST) + 8.0]
            ]
            if all(float(a[1]) <= float(b[0]) for a, b in pairwise(ends)):
                break
        return ticks

    def _on_sheet(self, values: Array) -> Array:
        return np.column_stack([self.sx(values[:, 0]), self.sy(values[:, 1])])

    def _stroke(self, path: Array, tolerance: float = 0.15, **attributes: str | float) -> None:
        """A line, thinned and cut off a little outside the view."""
        runs = lines.cut(path, self.box, _OUTSIDE)
        self.canvas.line(lines.joined([lines.thinned(run, tolerance) for run in runs]), closed=False, **attributes)

    def _keep_off(self, path: Array, weight: float) -> None:
        for run in lines.cut(path, self.box):
            self.room.ink(lines.dots(run), weight)

    # drawing

    def svg(self, title: str, description: str) -> str:
        """The diagram as an SVG element with a title and a description."""
        self.canvas = canvas = Canvas(f"d-{self.plane.name}", style.WIDTH)
        self._frame()
        canvas.begin(clip_path=canvas.clip(self.box[0], self.box[1], self.box[2] - self.box[0], _HEIGHT))
        self._dome()
        iso = self._isolines()
        legs = [self._on_sheet(leg.line.points) for leg in self.plane.legs]
        self._others()
        for i, (leg, path) in enumerate(zip(self.plane.legs, legs, strict=True)):
            self._leg(i, leg, path)
        canvas.end()
        for i, path in enumerate(legs):
            self._arrow(i, path)
        self._states()
        for i, path in enumerate(legs):
            self._leg_number(i, path)
        self._isoline_values(iso)
        height = self.box[3] + _BELOW
        height += legend.draw(canvas, self._legend(), height)
        return canvas.render(height + 4.0, title, description)

    def _frame(self) -> None:
        x0, y0, x1, y1 = self.box
        canvas, plane = self.canvas, self.plane
        grid = [[[float(self.sx(v)), y0], [float(self.sx(v)), y1], [np.nan, np.nan]] for v, _ in self._ticks[0]]
        grid += [[[x0, float(self.sy(v))], [x1, float(self.sy(v))], [np.nan, np.nan]] for v, _ in self._ticks[1]]
        canvas.line(np.array(grid).reshape(-1, 2), stroke=style.GRID, stroke_width=0.8)
        canvas.line(np.array([[x0, y0], [x0, y1], [x1, y1]]), stroke=style.INK)
        for value, label in self._ticks[0]:
            last = style.WIDTH - 0.5 * text.width(label, style.SMALLEST) - 1.0
            canvas.text(min(float(self.sx(value)), last), y1 + 16.0, label, anchor="middle")
        for value, label in self._ticks[1]:
            canvas.text(x0 - 6.0, float(self.sy(value)) + 4.5, label, anchor="end")
        for key, scale, x, y, turned in (
            (plane.x, self.sx, 0.5 * (x0 + x1), y1 + 36.0, False),
            (plane.y, self.sy, 14.0, 0.5 * (y0 + y1), True),
        ):
            unit = (f"{ten_to(scale.power)}\u00a0" if scale.power else "") + self.unit_of(key)
            canvas.text(x, y, say(f"q.{key}"), anchor="middle", turned=turned, symbol=SYMBOLS[key], unit=unit)

    def unit_of(self, key: str) -> str:
        """The unit a quantity is drawn in; pressure is absolute, which is said where the case's is gauge."""
        unit = self.ctx.units[KINDS[key]].unit
        return say("diagrams.absolute", unit=unit) if key == "p" and self.ctx.units.gauge else unit

    def _dome(self) -> None:
        plane, canvas = self.plane, self.canvas
        if plane.dome is None or plane.critical is None or not plane.dome_shown:
            return
        outline = self._on_sheet(plane.dome)
        self._outline = outline
        inside = lines.thinned(lines.polygon_cut(outline, self.box, _OUTSIDE))
        canvas.line(inside, closed=True, fill=style.DOME, fill_opacity=0.07)
        self._stroke(outline, stroke=style.DOME, stroke_width=1.1)
        self._keep_off(outline, 0.5)
        for quality in plane.qualities:
            self._stroke(self._on_sheet(quality), stroke=style.DOME, stroke_width=0.5, stroke_dasharray="6 4")
        x, y = self._on_sheet(plane.critical[None, :])[0]
        if bool(lines.within(np.array([[x, y]]), self.box)[0]):
            cross = np.array([[x - 5, y], [x + 5, y], [np.nan, np.nan], [x, y - 5], [x, y + 5]])
            canvas.line(cross, stroke=style.DOME, stroke_width=1.3)
            self.room.boxes.append(around(float(x), float(y), 10.0, 10.0))

    def _isolines(self) -> list[tuple[float, Array]]:
        found = []
        for value, points in self.plane.isolines:
            path = self._on_sheet(points)
            self._stroke(path, 0.25, stroke=style.ISO, stroke_width=0.8)
            found.append((value, lines.visible(path, self.box)))
        return [(value, path) for value, path in found if len(path) > 8]

    def _others(self) -> None:
        for k, (_, paths) in enumerate(self.plane.others):
            for points in paths:
                path = self._on_sheet(points)
                dash = style.OTHER_DASHES[k % len(style.OTHER_DASHES)]
                self._stroke(path, 0.25, stroke=style.OTHER, stroke_width=1.0, stroke_dasharray=dash)
                self._keep_off(path, 0.3)

    def _leg(self, i: int, leg: Leg, path: Array) -> None:
        stroke = style.of_leg(i)
        self._keep_off(path, 2.0)
        self.canvas.begin(data_leg=self.way_of(i))
        for stretch in self._in_two_phases(leg, path):
            self._stroke(
                stretch,
                stroke=stroke.colour,
                stroke_width=style.BAND_WIDTH,
                stroke_opacity=style.BAND_OPACITY,
            )
        if leg.way is not None:
            way = self._on_sheet(leg.way)
            self._stroke(way, stroke=stroke.colour, stroke_width=1.1, stroke_dasharray="0.8 3", stroke_linecap="round")
            self._keep_off(way, 0.8)
        if leg.states:
            self._stroke(path, stroke=stroke.colour, stroke_width=style.LEG_WIDTH, stroke_dasharray=stroke.dash)
        else:
            self._stroke(path, stroke=stroke.colour, stroke_width=style.OPEN_WIDTH, stroke_dasharray=stroke.dash)
            self._stroke(path, stroke=style.PAPER, stroke_width=style.OPEN_CORE)
        self.canvas.end()

    def way_of(self, i: int) -> str:
        """The numbers of the states that leg ``i`` joins, as they stand on its line."""
        return f"{self.plane.start_of(i) + 1}–{self.plane.end_of(i) + 1}"

    def _in_two_phases(self, leg: Leg, path: Array) -> list[Array]:
        """The stretches of a leg inside the dome: from its pieces, or for a straight line from the outline."""
        if leg.way is None:
            return [self._on_sheet(part) for part in leg.line.two_phase]
        if self.plane.dome is None or not self.plane.dome_shown or not self.plane.two_phase:
            return []
        even = lines.dots(path, 1.0)
        held = even[lines.inside_outline(even, self._outline)]
        return [held] if len(held) > 2 else []

    def _arrow(self, i: int, path: Array) -> None:
        """An arrowhead about the middle of the leg, away from those of legs on the same line; none on a short leg."""
        seen = lines.visible(path, self.box)
        length = lines.measured(seen)
        if len(seen) < 2 or length[-1] < _SHORTEST_ARROW:
            return
        spots = [part * float(length[-1]) for part in (0.55, 0.4, 0.7, 0.3, 0.8)]
        spot = next((s for s in spots if not self._arrow_there(lines.at(seen, length, s))), spots[0])
        head = lines.arrowhead(seen, length, spot, 12.0)
        leg, colour = self.plane.legs[i], style.of_leg(i).colour
        fill = colour if leg.states else style.PAPER
        self.canvas.line(head, closed=True, data_arrow=self.way_of(i), stroke=colour, stroke_width=1.4, fill=fill)
        place = lines.at(seen, length, spot)
        self._arrows.append(place)
        self.room.boxes.append(around(float(place[0]), float(place[1]), 11.0, 11.0))

    def _arrow_there(self, spot: Array) -> bool:
        return any(float(np.hypot(*(spot - other))) < 16.0 for other in self._arrows)

    def _states(self) -> None:
        spots = self._on_sheet(self.plane.points)
        placed = [(i, spot) for i, spot in enumerate(spots, 1) if np.isfinite(spot).all()]
        for _, (x, y) in placed:
            self.canvas.circle(x, y, 3.2, fill=style.PAPER, stroke=style.INK, stroke_width=1.4)
            self.room.boxes.append(around(x, y, 8.0, 8.0))
        self.canvas.begin(font_size=style.STATE_SIZE, font_weight="bold", text_anchor="middle")
        for numbers, (x, y) in together(placed):
            label = ", ".join(str(n) for n in numbers)
            wide = text.width(label, style.STATE_SIZE, bold=True)
            at = self.room.settle(beside(x, y, wide, 13.0, (6.0, 9.0, 13.0, 18.0, 25.0, 33.0)), wide, 13.0)
            self.canvas.text(at[0], at[1] + 5.0, label, halo=True)
        self.canvas.end()

    def _leg_number(self, i: int, path: Array) -> None:
        """The leg's end states beside its line; a hair line leads to it where it had to move away."""
        seen = lines.visible(path, self.box)
        if not len(seen) or len(self.plane.legs) > _MOST_NAMED:
            return
        label = self.way_of(i)
        wide, high = text.width(label, style.SMALLEST), 12.0
        spots = []
        for k, part in enumerate((0.55, 0.45, 0.65, 0.35, 0.75, 0.25)):
            x, y = seen[min(int(part * len(seen)), len(seen) - 1)]
            spots += [(a, b, own + 1.2 * k) for a, b, own in beside(x, y, wide, high, (6.0, 9.0, 15.0, 24.0, 36.0))]
        x, y = self.room.settle(sorted(spots, key=lambda s: s[2]), wide, high)
        near = seen[int(np.argmin(np.hypot(*(seen - np.array([x, y])).T)))]
        colour = style.of_leg(i).colour
        gap = max(abs(near[0] - x) - 0.5 * wide, abs(near[1] - y) - 0.5 * high)
        if gap > 12.0:
            self.canvas.line(np.array([near, [x, y]]), stroke=colour, stroke_width=0.6)
        self.canvas.text(x, y + 4.5, label, anchor="middle", halo=True, fill=colour)

    def _isoline_values(self, found: list[tuple[float, Array]]) -> None:
        for value, path in found:
            label = short(value, 4)
            wide, high = text.width(label, style.SMALLEST) + 6.0, 13.0
            x, y = self.room.settle(self._along(path, wide, high), wide, high)
            left, top = x - 0.43 * wide, y - 0.5 * high
            self.canvas.rect(left, top, 0.86 * wide, high, fill=style.PAPER, fill_opacity=0.8)
            self.canvas.text(x, y + 4.5, label, anchor="middle", data_isoline=label, fill=style.SOFT)

    def _along(self, path: Array, wide: float, high: float) -> list[tuple[float, float, float]]:
        """Spots on a line for its value, the ends first."""
        spots = []
        for k, part in enumerate((1.0, 0.0, 0.93, 0.07, 0.86, 0.14, 0.78, 0.22, 0.7, 0.3, 0.6, 0.4, 0.5)):
            x, y = path[min(int(part * len(path)), len(path) - 1)]
            x = float(np.clip(x, self.box[0] + 0.5 * wide + 2, self.box[2] - 0.5 * wide - 2))
            y = float(np.clip(y, self.box[1] + 0.5 * high + 2, self.box[3] - 0.5 * high - 2))
            spots.append((x, y, 0.1 * k))
        return spots

    # legend

    def _legend(self) -> list[legend.Entry]:
        plane = self.plane
        entries = []
        for i, leg in enumerate(plane.legs if len(plane.legs) <= _MOST_NAMED else ()):
            way = f"{plane.start_of(i) + 1} → {plane.end_of(i) + 1}"
            kind = "leg" if leg.states else "open"
            entries.append(legend.Entry(kind, f"{way}\u2002{clean(self.ctx.legs[i]['name'])}", style.of_leg(i)))
        plain = style.Stroke(style.INK, "")
        if any(not leg.states for leg in plane.legs):
            entries.append(legend.Entry("open", say("diagrams.nostates"), plain, key=True))
        if any(leg.way is not None for leg in plane.legs):
            entries.append(legend.Entry("way", say("diagrams.way"), plain, key=True))
        if plane.two_phase:
            entries.append(legend.Entry("band", say("diagrams.twophase"), plain, key=True))
        if plane.dome_shown:
            words = say("diagrams.dome.quality" if plane.qualities else "diagrams.dome")
            entries.append(legend.Entry("dome", words, style.Stroke(style.DOME, ""), key=True))
        if plane.isolines:
            key = ISOLINES[plane.name]
            words = say(f"diagrams.iso.{key}", unit=self.unit_of(key))
            entries.append(legend.Entry("thin", words, style.Stroke(style.ISO, ""), key=True))
        for k, (equation, paths) in enumerate(plane.others):
            dash = style.OTHER_DASHES[k % len(style.OTHER_DASHES)]
            seen = any(plane.in_view(path) for path in paths)
            words = say("diagrams.other" if seen else "diagrams.other.unseen", equation=equation)
            entries.append(legend.Entry("thin", words, style.Stroke(style.OTHER, dash), key=True))
        return entries
