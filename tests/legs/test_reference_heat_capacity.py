"""c_v of reference equations from p(T, v) and the saturation line alone, against the closed form, every substance."""

from __future__ import annotations

import numpy as np
import pytest

from pathcalc.equations.build import build_model
from pathcalc.equations.properties import thermal
from pathcalc.legs.integration.differentials import isochoric_heat_capacity
from pathcalc.substances import names, read_card
from pathcalc.substances.reference_reader import reference_path

NAMES = [name for name in names() if reference_path(read_card(name)).is_file()]


@pytest.mark.parametrize("name", NAMES)
def test_saturated_and_compressed_liquid_vapour_and_hot_fluid(name: str) -> None:
    m = build_model(read_card(name), "reference")
    cold = np.linspace(m.T_limits[0], 0.99 * m.T_c, 24)
    sat = m.residual.coexistence.at_T(cold)
    hot = np.linspace(1.02 * m.T_c, 1.6 * m.T_c, 24)
    for T, v in (
        (cold, sat.v_liquid),
        (cold, 0.97 * sat.v_liquid),
        (cold, sat.v_vapour),
        (hot, np.linspace(0.45, 3.0, 24) * m.v_c),
    ):
        cv, error = isochoric_heat_capacity(m, T, v)
        miss = np.abs(cv - thermal(m, T, v).cv)
        assert np.max(miss / m.R) < 3e-8
        assert (miss <= error + 1e-12 * m.R).all()
        assert np.max(error / m.R) < 2e-5
