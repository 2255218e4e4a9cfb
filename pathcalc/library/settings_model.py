"""Schema of the settings file of a library."""

from __future__ import annotations

from typing import Annotated

from pydantic import Field

from pathcalc.case.fields import QuantityField, Text, WholeField
from pathcalc.case.leg_model import Strict
from pathcalc.case.sections import Tolerance
from pathcalc.quantities.values import Quantity


class LibraryTolerance(Tolerance):
    """How far a result may be from the stored one, other than by default, and why."""

    cases: Text | None = Field(
        default=None,
        description="Cases it is for, by path below this file without the ending; * stands for any characters. "
        "All if left out.",
        examples=["cryogenic/*"],
    )


class SettingsModel(Strict):
    """Settings of a library of cases."""

    library: Annotated[int, WholeField(1, 1)] = Field(description="Version of the settings.", examples=[1])
    title: Text | None = Field(default=None, description="What the library holds.", examples=["Boosters of unit 20"])
    tolerances: list[LibraryTolerance] | None = Field(
        default=None,
        description="Tolerances where the defaults will not do; later ones win, a case's own win over all.",
        examples=[[{"kind": "joule-thomson", "relative": 1e-6, "reason": "many states close to the inversion line"}]],
    )
    time_limit: Annotated[Quantity, QuantityField(("time",), low=0.0, above=True)] | None = Field(
        default=None, description="Time a case may take; 60 s if left out.", examples=["120 s"]
    )
    jobs: Annotated[int, WholeField(1, 1024)] | None = Field(
        default=None, description="Worker processes; one a processor if left out.", examples=[4]
    )
