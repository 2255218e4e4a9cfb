"""What a leg works with while it is solved: its inlet, its targets in molar SI, states, and how lanes fail."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, NamedTuple

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equations.properties import thermal
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.points import Points
from pathcalc.equilibrium.reasons import REASONS, limit_text
from pathcalc.errors import Trouble
from pathcalc.legs.integration.segments import BoundaryOf, Integrals, Segment
from pathcalc.quantities.values import Quantity, Relative

if TYPE_CHECKING:
    from pathcalc.case.leg_model import LegModel, OneOf

Mask = NDArray[np.bool_]


class Place(NamedTuple):
    """A state as legs use it, molar SI, arrays (n,): the point and its extensive properties per mole."""

    points: Points
    T: Array
    p: Array
    v: Array
    u: Array
    h: Array
    s: Array


def place_of(model: Model, points: Points) -> Place:
    """The extensive properties of points, coexisting phases weighed by quality."""
    with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
        single = thermal(model, points.T, points.v)
        u, h, s = single.u, single.h, single.s
        mixed = np.flatnonzero(~np.isnan(points.x))
        if mixed.size:
            x, T = points.x[mixed], points.T[mixed]
            liquid = thermal(model, T, points.v_liquid[mixed])
            vapour = thermal(model, T, points.v_vapour[mixed])
            u, h, s = u.copy(), h.copy(), s.copy()
            for total, low, high in ((u, liquid.u, vapour.u), (h, liquid.h, vapour.h), (s, liquid.s, vapour.s)):
                total[mixed] = (1.0 - x) * low + x * high
    return Place(points, points.T, points.p, points.v, u, h, s)


class Exchange(NamedTuple):
    """What a leg exchanges, per mole, into the fluid: J/mol, J/mol and the entropy that comes with the heat,

    the integral of dq/T_b over the boundary, J/(mol K).
    """

    work: Array
    heat: Array
    entropy_in: Array


@dataclass(frozen=True)
class Outcome:
    """A solved leg: where it ends, the way route 1 is integrated along, and what is exchanged.

    ``exchange`` is evaluated once the integrals of the way are known. ``reversible`` says that the fluid passes
    through the states of the way, so that its heat is the integral of T ds. ``ideal`` is the end of the reversible
    leg that an isentropic efficiency refers to. ``moles`` is the amount from this leg on where it changes (phases
    parted, streams joined); then the results of the leg count per amount that goes on, and ``other`` is the stream
    that leaves or joins, ``other_share`` its amount per amount that goes on: negative where it leaves.
    """

    end: Place
    segments: list[Segment]
    exchange: Callable[[Integrals], Exchange]
    reversible: bool
    ideal: Place | None = None
    moles: Array | None = None
    other: Place | None = None
    other_share: Array | None = None

    def carried(self, inlet: Place, key: str) -> Array:
        """What the other stream brings of u, h, s or v, counted from the inlet, per mole that goes on; (n,).

        With n_o moles of the other stream, n y_end − n_in y_in ∓ n_o y_o = n [Δy − carried]: of every extensive
        property the balance over all streams is the change of the leg less what is carried.
        """
        if self.other is None or self.other_share is None:
            return np.zeros(inlet.T.shape)
        here: Array = getattr(inlet, key)
        there: Array = getattr(self.other, key)
        return self.other_share * (there - here)


def nothing(i: Integrals) -> Exchange:
    """Neither heat nor work."""
    zero = np.zeros(i.value.shape[1])
    return Exchange(zero, zero, zero)


def machine_work(ideal: Array, efficiency: Array | None) -> Array:
    """Work of a machine from that of the reversible one: more where work is taken, less where it is given."""
    if efficiency is None:
        return ideal
    return np.where(ideal > 0.0, ideal / efficiency, ideal * efficiency)


class Status:
    """Which lanes still stand, and why the others do not."""

    def __init__(self, lanes: int) -> None:
        self.ok: Mask = np.ones(lanes, dtype=bool)
        self.reason: NDArray[np.intp] = np.full(lanes, -1, dtype=np.intp)
        self.troubles: list[Trouble] = []

    def fail(self, mask: Mask, trouble: Trouble) -> None:
        """Mark the lanes of ``mask``; a lane keeps the first trouble it met."""
        fresh = mask & self.ok
        if not fresh.any():
            return
        if trouble not in self.troubles:
            self.troubles.append(trouble)
        self.reason[fresh] = self.troubles.index(trouble)
        self.ok[fresh] = False

    def trouble_of(self, lane: int) -> Trouble | None:
        """The trouble of a lane, or None."""
        number = int(self.reason[lane])
        return None if number < 0 else self.troubles[number]


@dataclass
class Setting:
    """What all legs of a path share. ``lanes`` maps addresses to arrays (n,) that replace values of the case."""

    model: Model
    n: int
    flow: bool
    T0: Array
    p0: Array
    ambient_shift: Array
    moles: Array | None
    boundary: BoundaryOf
    status: Status
    lanes: Mapping[str, Array]
    used: set[str] = field(default_factory=set)
    places: dict[str, Place] = field(default_factory=dict)

    def override(self, address: str) -> Array | None:
        """Lane values of an address, if given."""
        found = self.lanes.get(address)
        if found is not None:
            self.used.add(address)
        return found

    def molar(self, q: Quantity) -> Array:
        """A quantity of the case in molar SI, (n,)."""
        value = np.full(self.n, q.value)
        if q.gauge:
            value = value + self.ambient_shift
        return self.to_molar(value, q.dimension, per_mole=q.per == "mole")

    def to_molar(self, value: Array, dimension: str, *, per_mole: bool = False) -> Array:
        """SI values of a dimension in molar SI."""
        if per_mole:
            return value
        if dimension in ("specific-volume", "specific-energy", "specific-entropy"):
            return value * self.model.M
        if dimension == "density":
            return value / self.model.M
        return value

    def pair(self, given: Mapping[str, Quantity | str], prefix: str) -> dict[str, Array]:
        """Two given properties of a state in molar SI, lane values at ``<prefix>.<key>`` first."""
        pair: dict[str, Array] = {}
        for key, item in given.items():
            lanes = self.override(f"{prefix}.{key}")
            if not isinstance(item, Quantity):
                pair["x"] = np.full(self.n, 0.0 if item == "saturated-liquid" else 1.0)
                continue
            value = self.molar(item) if lanes is None else self.to_molar(lanes, item.dimension)
            if key == "rho":
                key, value = "v", 1.0 / value
            pair[key] = value
        return pair

    def amount(self, q: Quantity, address: str, v: Array | None = None) -> Array:
        """Amount of substance (mol, or mol/s), lane values (kg, kg/s) first; ``v`` for a vessel's volume."""
        lanes = self.override(address)
        if lanes is not None:
            return lanes / self.model.M
        value = np.full(self.n, q.value)
        if q.dimension.startswith("mass"):
            return value / self.model.M
        return value if v is None or q.dimension.startswith("mole") else value / v

    def place(self, points: Points) -> Place:
        """A point with its properties."""
        return place_of(self.model, points)

    def flash(self, at: str, **pair: Array) -> Points:
        """State of a pair of properties (molar SI); lanes that have none are marked with the reason."""
        points = flash(self.model, {k: np.broadcast_to(v, (self.n,)) for k, v in pair.items()})
        self.note_reasons(at, points, pair)
        return points

    def note_reasons(self, at: str, points: Points, pair: Mapping[str, Array]) -> None:
        """Mark the lanes whose point has a reason, in the words of the table of reasons."""
        for code in np.unique(points.reason[points.reason != 0]):
            mask = points.reason == code
            if not (mask & self.status.ok).any():
                continue
            reason = REASONS[int(code)]
            given = ""
            if self.n == 1:
                given = " (" + ", ".join(_shown(self.model, k, float(v[0])) for k, v in pair.items()) + ")"
            text = reason.text + limit_text(self.model, int(code)) + given
            self.status.fail(mask, Trouble(reason.code, at, text, reason.remedy))


_UNITS = {"T": "K", "p": "Pa", "v": "m3/kg", "rho": "kg/m3", "u": "J/kg", "h": "J/kg", "s": "J/(kg K)", "x": ""}


def _shown(model: Model, key: str, molar: float) -> str:
    value = molar
    if key in ("v", "u", "h", "s"):
        value = molar / model.M
    elif key == "rho":
        value = molar * model.M
    return f"{key} = {value:.6g} {_UNITS.get(key, 'K')}".rstrip()


class LegRun:
    """One leg being solved: values over the lanes of the path."""

    def __init__(
        self, setting: Setting, leg: LegModel, inlet: Place, inlet_name: str, moles: Array | None = None
    ) -> None:
        self.setting = setting
        self.moles = moles
        self.leg = leg
        self.inlet = inlet
        self.inlet_name = inlet_name
        self.model = setting.model
        self.n = setting.n
        self.flow = setting.flow

    def value(self, name: str) -> Array | None:
        """A field of the leg in molar SI, (n,), lane values first; None if it is not given."""
        q: Quantity | None = getattr(self.leg, name, None)
        lanes = self.setting.override(f"{self.leg.name}.{name}")
        if lanes is not None:
            return lanes
        return None if q is None else self.setting.molar(q)

    def targets(self, to: OneOf) -> dict[str, Array]:
        """The targets in molar SI; ``rho`` comes back as ``v``, heat and work per mole."""
        found: dict[str, Array] = {}
        for key, target in to.given().items():
            lanes = self._lane_target(key, target)
            value = lanes if lanes is not None else self._resolve(key, target)
            if key == "rho":
                key, value = "v", 1.0 / value
            found[key] = value
        return found

    def _lane_target(self, key: str, target: Quantity | Relative) -> Array | None:
        for address in (f"{self.leg.name}.to.{key}", f"{self.leg.name}.{key}"):
            lanes = self.setting.override(address)
            if lanes is None:
                continue
            if isinstance(target, Relative) and target.kind != "same_as":
                return self._relative(key, target.kind, lanes)
            return self._lane_molar(key, lanes)
        return None

    def _lane_molar(self, key: str, lanes: Array) -> Array:
        if key in ("v", "u", "h", "s", "heat", "work"):
            return lanes * self.model.M
        return lanes / self.model.M if key == "rho" else lanes

    def _resolve(self, key: str, target: Quantity | Relative) -> Array:
        if isinstance(target, Quantity):
            return self._plain(key, target)
        if target.kind == "same_as":
            assert target.state is not None
            return _of(self.setting.places[target.state], key)
        assert target.amount is not None
        return self._relative(key, target.kind, self.setting.molar(target.amount))

    def _plain(self, key: str, q: Quantity) -> Array:
        if q.dimension in ("energy", "power"):
            assert self.moles is not None
            return q.value / self.moles
        return self.setting.molar(q)

    def _relative(self, key: str, kind: str, amount: Array) -> Array:
        inlet = _of(self.inlet, key)
        if kind == "ratio":
            return inlet * amount
        return inlet + amount if kind == "rise" else inlet - amount

    def flash(self, **pair: Array) -> Points:
        """State of a pair of properties in molar SI at the end of the leg; failed lanes are marked."""
        return self.setting.flash(self.leg.name, **pair)

    def place(self, points: Points) -> Place:
        """A point with its properties."""
        return self.setting.place(points)

    def reach(self, **pair: Array) -> Place:
        """State of a pair of properties with its extensive properties."""
        return self.place(self.flash(**pair))

    def fail(self, mask: Mask, code: str, text: str, remedy: str) -> None:
        """Mark lanes of this leg."""
        self.setting.status.fail(mask, Trouble(code, self.leg.name, text, remedy))

    def heat_boundary(self, integrals: Integrals, heat: Array) -> Array:
        """Integral of dq/T_b: with a reservoir q/T_res, else over the fluid's own temperature (reversible)."""
        reservoir = self.value("reservoir")
        return heat / reservoir if reservoir is not None else integrals["ds"]

    def wrong_side(self, mask: Mask, text: str, remedy: str) -> None:
        """Mark lanes whose target lies where this kind of leg cannot go."""
        self.fail(mask & np.ones(self.n, dtype=bool), "wrong-side", text, remedy)


def _of(place: Place, key: str) -> Array:
    if key == "rho":
        return 1.0 / place.v
    if key == "x":
        return place.points.x
    value: Array = getattr(place, key)
    return value
