"""What the file alone can tell to be wrong beyond its form: pairs, boundaries, dimensions, addresses."""

from __future__ import annotations

from typing import Any

from pathcalc.case import names
from pathcalc.case.leg_model import LegModel, OneOf
from pathcalc.case.sections import Fluid, Limit, Report, Start
from pathcalc.case.substance_check import problem_of
from pathcalc.case.translate import Findings, Path
from pathcalc.quantities.parse import EXAMPLE, nearest, wanted, words
from pathcalc.quantities.values import Quantity

SATURATION_KEYS = ("x", "superheat", "subcooling", "phase")
# which partner each of these keys can stand with: superheat and subcooling are counted from saturation at p
_ALL = ("T", "p", "v", "rho", "u", "h", "s")
PARTNERS = {"superheat": _ALL, "subcooling": _ALL, "phase": _ALL}
DEPENDENT = ({"v", "rho"},)
DEPENDENT_IDEAL = ({"T", "u"}, {"T", "h"}, {"u", "h"})


def check_start(start: Start, equation: str | None, out: Findings) -> None:
    """Do the two properties fix a state, as far as their names tell."""
    keys = list(start.given())
    at: Path = ("start",)
    for key, partners in PARTNERS.items():
        if key in keys:
            (other,) = [k for k in keys if k != key]
            if other not in partners:
                text = f"{key} goes with {words(partners)}, not with {other}"
                out.add((*at, key), text, "dependent-pair", key=True)
                return
    if set(keys) in DEPENDENT:
        out.add(
            (*at, keys[1]),
            f"{keys[0]} and {keys[1]} say the same; give another property",
            "dependent-pair",
            True,
        )
    if equation == "ideal-gas" and set(keys) in DEPENDENT_IDEAL:
        text = f"{keys[0]} and {keys[1]} of an ideal gas both depend on T alone; give p, v or s with one of them"
        out.add((*at, keys[1]), text, "dependent-pair", key=True)
    for key in keys:
        _check_saturation(key, (*at, key), equation, out)


def _check_saturation(key: str, at: Path, equation: str | None, out: Findings) -> None:
    if key in SATURATION_KEYS and equation in names.WITHOUT_SATURATION:
        text = f"the equation {equation} has no saturation, so {key} has no meaning; use {words(names.WITH_SATURATION)}"
        out.add(at, text, "no-saturation", key=True)


def check_substance(fluid: Any, out: Findings) -> None:
    """Is the substance built in; asked even where something else in the section is wrong."""
    name = fluid.get("substance") if isinstance(fluid, dict) else None
    problem = problem_of(name) if isinstance(name, str) and name.strip() else None
    if problem:
        out.add(("fluid", "substance"), problem, "unknown-substance")


def check_fluid(fluid: Fluid, out: Findings) -> None:
    """Substance, card or mixture; what goes with which equation."""
    at: Path = ("fluid",)
    given = [k for k in ("substance", "card", "mixture") if getattr(fluid, k) is not None]
    if len(given) != 1:
        got = f"not {words(given, 'and')}" if given else "none is given"
        out.add(at, f"give one of substance or card; {got}", "one-of", key=True)
    if fluid.mixture is not None:
        _check_mixture(fluid, out)
    elif fluid.basis is not None or fluid.k_ij is not None:
        key = "basis" if fluid.basis is not None else "k_ij"
        out.add((*at, key), f"{key} goes with mixture, which is not given", "one-of", key=True)
    if fluid.volume_shift is not None and fluid.equation not in names.CUBICS:
        text = f"volume_shift goes with the cubic equations {', '.join(names.CUBICS)}, not with {fluid.equation}"
        out.add((*at, "volume_shift"), text, "one-of", key=True)
    if fluid.virial is not None and fluid.equation != "virial":
        out.add(
            (*at, "virial"),
            f"virial goes with the equation virial, not with {fluid.equation}",
            "one-of",
            key=True,
        )
    if fluid.datum in names.SATURATION_DATUMS and fluid.equation in names.WITHOUT_SATURATION:
        text = (
            f"the equation {fluid.equation} has no liquid; use datum ideal-gas-298, or {words(names.WITH_SATURATION)}"
        )
        out.add((*at, "datum"), text, "no-saturation")


def _check_mixture(fluid: Fluid, out: Findings) -> None:
    at: Path = ("fluid", "mixture")
    fractions = fluid.mixture or {}
    total = sum(q.value for q in fractions.values())
    if abs(total - 1.0) > 1e-6:
        out.add(at, f"the fractions sum to {total:.9g}, not to 1", "fractions", key=True)
    for name in fractions:
        problem = problem_of(name)
        if problem:
            out.add((*at, name), problem, "unknown-substance", key=True)
    if not names.MIXTURES:
        text = "a mixture is not available in this version; available are substance and card"
        out.add(at, text, "not-available", key=True)


def check_leg(leg: LegModel, at: Path, boundary: str, amount: bool | None, equation: str | None, out: Findings) -> None:
    """Does a leg go with the boundary, the amount and the equation. ``amount`` None: not known."""
    if boundary not in leg.boundaries:
        other = "closed" if boundary == "flow" else "flow"
        text = f"path {leg.path} is for boundary: {other} only; this case is boundary: {boundary}"
        out.add((*at, "path"), text, "wrong-boundary")
    wrong = leg.closed_only if boundary == "flow" else leg.flow_only
    for key in sorted(wrong):
        if getattr(leg, key) is not None:
            other = "closed" if boundary == "flow" else "flow"
            text = f"{key} is for boundary: {other} only; this case is boundary: {boundary}"
            out.add((*at, key), text, "wrong-boundary", key=True)
    if leg.needs_saturation and equation in names.WITHOUT_SATURATION:
        text = f"the equation {equation} has no saturation; a {leg.path} leg needs {words(names.WITH_SATURATION)}"
        out.add((*at, "path"), text, "no-saturation")
    if leg.needs_amount and amount is False:
        text = f"a {leg.path} leg needs the top-level key 'amount', such as {EXAMPLE['mass-flow']}"
        out.add((*at, "path"), text, "missing-amount")
    targets = getattr(leg, "to", None)
    if not isinstance(targets, OneOf):
        return
    for key, value in targets.given().items():
        here = (*at, "to", key)
        _check_saturation(key, here, equation, out)
        if isinstance(value, Quantity) and value.dimension in ("energy", "power"):
            _check_total(value, key, here, boundary, amount, out)


def _check_total(value: Quantity, key: str, at: Path, boundary: str, amount: bool | None, out: Findings) -> None:
    meant = "power" if boundary == "flow" else "energy"
    if value.dimension != meant:
        total = f"a total {key} with boundary: {boundary} is {_a(meant)} such as {EXAMPLE[meant]}"
        out.add(at, f"{value.unit} is {_a(value.dimension)}; {total}", "wrong-dimension")
    elif amount is False:
        text = f"a total {key} needs the top-level key 'amount'; or write {wanted(('specific-energy',))}"
        out.add(at, text, "missing-amount")


def _a(dimension: str) -> str:
    return f"an {dimension}" if dimension[0] in "ae" else f"a {dimension}"


def check_limit(
    limit: Limit, at: Path, states: list[str], legs: set[str], boundary: str, amount: bool, out: Findings
) -> None:
    """Is the address there, and are the bounds of its dimension and in order."""
    if limit.min is None and limit.max is None:
        out.add(at, "a limit needs min or max", "missing-key")
    place, dot, key = limit.quantity.rpartition(".")
    here = (*at, "quantity")
    if not dot:
        such = f"such as {states[-1]}.T or totals.work"
        text = f"{limit.quantity!r} is no address; write <state or leg>.<key>, {such}"
        out.add(here, text, "unknown-quantity")
        return
    if place != "totals" and place not in states:
        out.add(here, f"no state or leg {place!r}; {nearest(place, [*states, 'totals'])}", "unknown-quantity")
        return
    known = names.TOTAL_KEYS if place == "totals" else names.STATE_KEYS | (names.LEG_KEYS if place in legs else {})
    if key not in known:
        out.add(here, f"{place!r} has no result {key!r}; {nearest(key, known)}", "unknown-quantity")
        return
    if place == "totals" and not amount:
        out.add(here, "totals need the top-level key 'amount', which is not given", "missing-amount")
    dimension = known[key]
    if place == "totals" and boundary == "flow":
        dimension = names.PER_TIME.get(dimension, dimension)
    for bound in ("min", "max"):
        q: Quantity | None = getattr(limit, bound)
        if q is not None and q.dimension != dimension:
            got = q.unit or "a plain number"
            text = f"{got} does not fit {limit.quantity}; write {wanted((dimension,))}"
            out.add((*at, bound), text, "wrong-dimension")
            return
    low, high = limit.min, limit.max
    if low is not None and high is not None and low.per == high.per and low.value > high.value:
        out.add((*at, "min"), f"min {low.text} is above max {high.text}", "out-of-range")


def check_report(report: Report, equation: str | None, out: Findings) -> None:
    """No equation is compared with itself, and nothing is asked twice."""
    for i, name in enumerate(report.compare_with):
        if name == equation:
            text = f"{name} is the case's own equation; name others to compare with"
            out.add(("report", "compare_with", i), text, "same-equation")
        elif name in report.compare_with[:i]:
            out.add(("report", "compare_with", i), f"{name} is there twice", "duplicate-item")
    for i, diagram in enumerate(report.diagrams):
        if diagram in report.diagrams[:i]:
            out.add(("report", "diagrams", i), f"{diagram} is there twice", "duplicate-item")


def read_units(data: Any, out: Findings) -> dict[str, str]:
    """Unit of each kind for the report: the defaults, with what the case gives on top."""
    from pathcalc.quantities.units import UNITS, advice

    units = dict(names.UNITS_DEFAULT)
    if isinstance(data, str):
        if data not in names.UNIT_PRESETS:
            such = "write si or us, or a unit for each kind such as {T: degC, p: bar}"
            text = f"unknown set of units {str(data)!r}; {such}"
            out.add(("units",), text, "unknown-name")
            return units
        return dict(names.UNIT_PRESETS[data])
    if not isinstance(data, dict):
        out.add(("units",), "`units` holds a unit for each kind, such as {T: degC, p: bar}", "wrong-type")
        return units
    for kind, spelling in data.items():
        at: Path = ("units", kind)
        if kind not in names.UNIT_KINDS:
            text = f"unknown kind of unit {kind!r}; {nearest(kind, list(names.UNIT_KINDS))}"
            out.add(at, text, "unknown-key", key=True)
        elif not isinstance(spelling, str):
            out.add(at, f"{kind} holds one unit, such as {names.UNITS_DEFAULT.get(kind, 'kW')}", "wrong-type")
        elif str(spelling) not in UNITS:
            out.add(at, f"unit {str(spelling)!r} is not known; {advice(spelling)}", "bad-unit")
        elif UNITS[spelling].dimension not in names.UNIT_KINDS[kind] or spelling in names.UNIT_KINDS_REFUSED:
            text = f"{spelling!s} is no unit for {kind} here; write one such as {names.UNITS_DEFAULT.get(kind, 'kW')}"
            out.add(at, text, "wrong-dimension")
        else:
            units[kind] = str(spelling)
    return units
