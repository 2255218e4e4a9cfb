"""Where heat capacities of the ideal gas say that they bend, they do, and nowhere else."""

from __future__ import annotations

import numpy as np
import pytest

from pathcalc.equations import ideal_gas
from pathcalc.substances import names, read_card


@pytest.mark.parametrize("name", names()[::6])
def test_slopes_jump_only_at_kinks(name: str) -> None:
    """Second differences of c_p0 at a step of 0.5 K: small everywhere but next to a kink."""
    card = read_card(name)
    for choice in card.ideal_gas:
        heat_capacity = ideal_gas.from_card(card, choice.name)
        T = np.arange(120.25, 1500.0, 0.5)
        bend = np.abs(np.diff(heat_capacity.cp0_R(T), 2))
        near = np.zeros(bend.size, dtype=bool)
        for kink in heat_capacity.kinks:
            near |= np.abs(T[1:-1] - kink) <= 1.0
        assert bend[~near].max() < 2e-4
        assert list(heat_capacity.kinks) == sorted(heat_capacity.kinks)


def test_a_held_polynomial_has_kinks_at_its_ends() -> None:
    card = read_card("R-152a")
    held = [ideal_gas.from_card(card, item.name) for item in card.ideal_gas if item.form == "polynomial"]
    assert held
    for heat_capacity in held:
        assert heat_capacity.kinks == (heat_capacity.T_min, heat_capacity.T_max)
        T = heat_capacity.T_max + np.array([-1.0, 0.0, 1.0])
        below, at, above = heat_capacity.cp0_R(T)
        assert above == at
        assert abs(at - below) > 1e-3
