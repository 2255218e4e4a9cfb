"""Where energy, enthalpy and entropy count from."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from pathcalc.equations.contract import Model
from pathcalc.equations.properties import helmholtz
from pathcalc.equilibrium.points import Saturation
from pathcalc.equilibrium.reasons import REASONS
from pathcalc.equilibrium.saturation import saturation_at_p, saturation_at_T
from pathcalc.errors import NoSolutionError, Trouble, UsageError

DATUMS = ("ideal-gas-298", "triple-liquid", "boiling-liquid", "liquid-0C")

P_NORMAL = 101325.0
T_ICE = 273.15


def with_datum(model: Model, name: str) -> Model:
    """The model with its zero of u, h, s set by ``name``:

    - ``ideal-gas-298``: h = 0, s = 0 of the ideal gas at 298.15 K, 1 bar
    - ``triple-liquid``: u = s = 0 of the liquid at the triple point (as for steam, IAPWS)
    - ``boiling-liquid``: h = s = 0 of saturated liquid at 1.01325 bar
    - ``liquid-0C``: h = 200 kJ/kg, s = 1 kJ/(kg K) of saturated liquid at 0 °C (as for refrigerants, IIR)

    Raises :class:`NoSolutionError` where the equation has no such liquid, :class:`UsageError` for another
    name.
    """
    model = replace(model, h_offset=0.0, s_offset=0.0)
    if name == "ideal-gas-298":
        return model
    if name == "triple-liquid":
        sat = saturation_at_T(model, model.T_triple)
        state = _liquid(model, name, sat, f"the triple point, {model.T_triple:.6g} K")
        return replace(model, h_offset=-state[1], s_offset=-state[2])
    if name == "boiling-liquid":
        sat = saturation_at_p(model, P_NORMAL)
        state = _liquid(model, name, sat, "1.01325 bar")
        return replace(model, h_offset=-state[0], s_offset=-state[2])
    if name == "liquid-0C":
        sat = saturation_at_T(model, T_ICE)
        state = _liquid(model, name, sat, "0 °C")
        return replace(model, h_offset=2.0e5 * model.M - state[0], s_offset=1.0e3 * model.M - state[2])
    raise UsageError(f"unknown datum {name!r}; one of {', '.join(DATUMS)}")


def _liquid(model: Model, name: str, sat: Saturation, where: str) -> tuple[float, float, float]:
    """h, u, s of the saturated liquid."""
    if sat.reason[0] != 0:
        why = REASONS[int(sat.reason[0])].text
        raise NoSolutionError(
            Trouble(
                "no-datum",
                "fluid.datum",
                f"datum {name!r} needs saturated liquid at {where}; {model.equation} of {model.name}: {why}",
                "use the datum ideal-gas-298, or another equation",
            )
        )
    f = helmholtz(model, np.asarray(sat.T), sat.v_liquid)
    h = float(f.u[0] + sat.p[0] * sat.v_liquid[0])
    return h, float(f.u[0]), float(f.s[0])
