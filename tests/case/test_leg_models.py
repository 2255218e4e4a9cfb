"""The leg kinds: their fields as the description of the format has them, and how kinds are found."""

from __future__ import annotations

from collections.abc import Iterator
from types import SimpleNamespace
from typing import Any, Literal

import pytest
from pydantic import Field, ValidationError

from pathcalc.case import LegModel, OneOf, leg_registry, loads, substance_check
from pathcalc.case.fields import TargetT
from pathcalc.case.leg_registry import leg_models
from pathcalc.errors import Finding, InvalidCaseError

COMMON = {"name", "path", "to", "note", "source"}
# path: keys of `to`, further keys, boundaries, keys for one boundary only
KINDS = {
    "isothermal": ("p v rho s x", "against efficiency reservoir", "flow closed", "against efficiency"),
    "isobaric": ("T v rho h s x superheat subcooling heat", "reservoir", "flow closed", ""),
    "isochoric": ("T p u s x heat", "reservoir", "flow closed", ""),
    "adiabatic": (
        "p T v rho work",
        "efficiency polytropic_efficiency against",
        "flow closed",
        "against polytropic_efficiency",
    ),
    "throttling": ("p T", "", "flow", ""),
    "free-expansion": ("v rho p", "", "closed", ""),
    "polytropic": ("p T v rho", "exponent reservoir", "flow closed", ""),
    "workless": ("T h x superheat subcooling heat p", "pressure_drop reservoir", "flow", ""),
    "saturation": ("T p", "reservoir", "flow closed", ""),
}
WITHOUT_TARGETS = {"separation": {"keep"}, "mixing": {"other"}}


def test_the_kinds_are_those_of_the_format() -> None:
    assert set(leg_models()) == set(KINDS) | set(WITHOUT_TARGETS)


@pytest.mark.parametrize("path", KINDS)
def test_fields(path: str) -> None:
    to, more, boundaries, one_only = KINDS[path]
    model = leg_models()[path]
    assert set(model.model_fields) == COMMON | set(more.split())
    targets: Any = model.model_fields["to"].annotation
    assert set(targets.model_fields) == set(to.split())
    assert model.boundaries == set(boundaries.split())
    assert model.flow_only | model.closed_only == set(one_only.split())


@pytest.mark.parametrize("path", WITHOUT_TARGETS)
def test_fields_without_targets(path: str) -> None:
    model = leg_models()[path]
    assert set(model.model_fields) == (COMMON - {"to"}) | WITHOUT_TARGETS[path]
    assert model.boundaries == {"flow"}


def test_models_work_without_a_file() -> None:
    leg = leg_models()["adiabatic"].model_validate({"name": "a", "path": "adiabatic", "to": {"p": "2 barg"}})
    assert leg.to.given()["p"].value == 301325.0  # type: ignore[attr-defined]
    assert leg.origin == (0, 0)
    with pytest.raises(ValidationError, match="efficency"):
        leg_models()["adiabatic"].model_validate(
            {"name": "a", "path": "adiabatic", "to": {"p": "2 barg"}, "efficency": 1}
        )


class SwirlTo(OneOf):
    """Where it ends."""

    T: TargetT | None = Field(default=None, description="Temperature at the end.")


class Swirl(LegModel):
    """A kind that somebody else brings."""

    path: Literal["swirl"]
    to: SwirlTo


@pytest.fixture
def foreign(monkeypatch: pytest.MonkeyPatch) -> Iterator[list[Any]]:
    entries: list[Any] = []
    monkeypatch.setattr(leg_registry, "_entry_points", lambda: entries)
    leg_models.cache_clear()
    yield entries
    leg_models.cache_clear()


def entry(value: Any) -> Any:
    return SimpleNamespace(load=lambda: value, value="somewhere:else")


@pytest.mark.parametrize("offered", [Swirl, SimpleNamespace(MODEL=Swirl)], ids=["model", "module"])
def test_others_can_bring_kinds(foreign: list[Any], offered: Any) -> None:
    foreign.append(entry(offered))
    case = loads(
        "pathcalc: 1\ntitle: x\nfluid: {substance: nitrogen, equation: soave}\nboundary: flow\n"
        "start: {T: 300 K, p: 1 bar}\nlegs: [{name: a, path: swirl, to: {T: 310 K}}]\n"
    )
    assert isinstance(case.legs[0], Swirl)


@pytest.mark.parametrize("offered", [int, "text", SimpleNamespace(MODEL=3)], ids=["class", "text", "module"])
def test_what_is_no_kind_is_told(foreign: list[Any], offered: Any) -> None:
    foreign.append(entry(offered))
    with pytest.raises(TypeError, match="somewhere:else: a leg kind is a subclass of LegModel"):
        leg_models()


def test_one_name_is_not_taken_twice(foreign: list[Any]) -> None:
    class Other(Swirl):
        """Another of the same name."""

    foreign.extend([entry(Swirl), entry(Other)])
    with pytest.raises(TypeError, match="the leg kind swirl is there twice"):
        leg_models()


def test_the_substances_are_asked_by_name(monkeypatch: pytest.MonkeyPatch) -> None:
    def resolve(name: str) -> str:
        if name != "gas":
            raise InvalidCaseError([Finding("", 0, 0, "no", "unknown-substance")])
        return name

    stand_in = SimpleNamespace(names=lambda: ("gas", "air"), resolve=resolve)
    monkeypatch.setattr(substance_check, "_substances", lambda: stand_in)
    assert substance_check.substance_names() == ["air", "gas"]
    assert substance_check.problem_of("gas") is None
    assert substance_check.problem_of("gass") == "unknown substance 'gass'; did you mean gas?"
    assert substance_check.problem_of("zzz") == "unknown substance 'zzz'; `pathcalc substances` lists all"
