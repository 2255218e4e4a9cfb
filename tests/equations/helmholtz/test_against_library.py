"""Every substance against an independent general-purpose library, over random states of the whole fluid."""

from __future__ import annotations

import warnings

import CoolProp.CoolProp as CP
import numpy as np
import pytest
from fluids import NAMES, library_name, model, reference

from pathcalc.equations.properties import full

GAS_CONSTANT_DIFFERS = {"ammonia"}
"""The library's file has 8.3144598 J/(mol K) for ammonia; the paper's check values need 8.314462618."""

TOLERANCE = {"R-123": 3e-4}
"""The library evaluates c_p0 of R-123 at T 456.82/456.831; elsewhere properties agree to 1e-8."""

CANCELLING = {"R-123": 1e-3, "R-152a": 1e-3}
"""Terms without a power of δ cancel at low density, in both programs only to about 1e-14 of themselves."""

CALLS = (
    ((0, 0), "alphar"),
    ((0, 1), "dalphar_dDelta"),
    ((0, 2), "d2alphar_dDelta2"),
    ((0, 3), "d3alphar_dDelta3"),
    ((1, 0), "dalphar_dTau"),
    ((1, 1), "d2alphar_dDelta_dTau"),
    ((1, 2), "d3alphar_dDelta2_dTau"),
    ((2, 0), "d2alphar_dTau2"),
    ((2, 1), "d3alphar_dDelta_dTau2"),
)


def states(name: str, n: int = 200) -> tuple[np.ndarray, np.ndarray]:
    """Temperatures over the stated range and densities up to the liquid's, many near the critical point."""
    card = reference(name)
    rng = np.random.default_rng(11)
    T = card.valid.T_min * (card.valid.T_max / card.valid.T_min) ** rng.uniform(0.0, 1.0, n)
    rho = card.triple.rho * rng.uniform(0.0, 1.05, n)
    T[:40] = card.summit.T * rng.uniform(0.97, 1.03, 40)
    rho[:40] = card.summit.rho * rng.uniform(0.8, 1.2, 40)
    rho[40:80] = card.summit.rho * 10.0 ** rng.uniform(-8.0, -1.0, 40)
    return T, rho


def library(name: str) -> CP.AbstractState:
    state = CP.AbstractState("HEOS", library_name(name))
    state.specify_phase(CP.iphase_gas)
    return state


def test_there_are_many() -> None:
    wanted = [
        "water",
        "heavy-water",
        "carbon-dioxide",
        "nitrogen",
        "oxygen",
        "argon",
        "neon",
        "krypton",
        "xenon",
        "helium",
        "hydrogen",
        "parahydrogen",
        "carbon-monoxide",
        "hydrogen-sulfide",
        "sulfur-dioxide",
        "nitrous-oxide",
        "ammonia",
        "methane",
        "ethane",
        "ethylene",
        "propane",
        "propylene",
        "butane",
        "isobutane",
        "pentane",
        "isopentane",
        "hexane",
        "heptane",
        "octane",
        "benzene",
        "toluene",
        "methanol",
        "ethanol",
        "R-134a",
        "R-32",
        "R-125",
        "R-1234yf",
        "R-1234ze(E)",
        "sulfur-hexafluoride",
        "air",
    ]
    assert set(wanted) <= set(NAMES)


@pytest.mark.parametrize("name", NAMES)
def test_residual_part(name: str) -> None:
    T, rho = states(name)
    got = model(name).residual.derivatives(T, rho, [order for order, _ in CALLS])
    state = library(name)
    want = np.empty_like(got)
    for lane, (t, q) in enumerate(zip(T, rho, strict=True)):
        state.update(CP.DmolarT_INPUTS, q, t)
        tau, delta = state.tau(), state.delta()
        for k, ((i, j), call) in enumerate(CALLS):
            want[k, lane] = getattr(state, call)() * tau**i * delta**j
    for k, ((i, j), _) in enumerate(CALLS):
        # what cancels within a derivative is of the size of the lower ones in the same direction
        size = np.abs(want[k]) + 1e-2 * np.abs(want[:6]).max(axis=0) + CANCELLING.get(name, 0.0)
        error = np.max(np.abs(got[k] - want[k]) / size)
        assert error < (1e-10 if i + j < 3 else 1e-8), (i, j)


@pytest.mark.parametrize("name", NAMES)
def test_properties(name: str) -> None:
    """p, cp, w and the differences of h and s from the first state, where the state is well conditioned."""
    T, rho = states(name, 120)
    got = full(model(name), T, 1.0 / rho)
    state = library(name)
    want = {key: np.empty_like(T) for key in ("p", "h", "s", "cv", "cp", "w")}
    for lane, (t, q) in enumerate(zip(T, rho, strict=True)):
        state.update(CP.DmolarT_INPUTS, q, t)
        for key, call in (
            ("p", state.p),
            ("h", state.hmolar),
            ("s", state.smolar),
            ("cv", state.cvmolar),
            ("cp", state.cpmolar),
            ("w", state.speed_sound),
        ):
            with warnings.catch_warnings():
                warnings.simplefilter("ignore")
                want[key][lane] = call()
    R, allowed = model(name).R, TOLERANCE.get(name, 1e-8)
    scale = R / CP.AbstractState("HEOS", library_name(name)).gas_constant()
    assert (abs(scale - 1.0) > 1e-12) == (name in GAS_CONSTANT_DIFFERS)
    stiff = 1.0 / (got.compressibility * rho * R * T)
    stable = (stiff > 0.02) & (got.cv > 0.0)
    assert stable.sum() > 50
    size = rho * R * T * (1.0 + np.abs(stiff))
    assert np.max(np.abs(got.p - scale * want["p"]) / size) < 1e-10
    assert np.max((np.abs(got.cv - scale * want["cv"]) / (R + np.abs(got.cv)))[stable]) < allowed
    assert np.max(np.abs(got.cp / (scale * want["cp"]) - 1.0)[stable]) < allowed
    assert np.max(np.abs(got.sound_speed / (scale**0.5 * want["w"]) - 1.0)[stable]) < allowed
    first = int(np.flatnonzero(stable)[0])
    for key, unit in (("h", R * T), ("s", R)):
        mine = getattr(got, key) - getattr(got, key)[first]
        theirs = scale * (want[key] - want[key][first])
        assert np.max((np.abs(mine - theirs) / (unit + np.abs(mine)))[stable]) < allowed, key
