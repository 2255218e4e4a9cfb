"""From the term tables of a card to term objects: which class reads which form."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

import numpy as np

from pathcalc.equations.helmholtz.double_exponential import DoubleExponentialTerms
from pathcalc.equations.helmholtz.exponential import ExponentialTerms
from pathcalc.equations.helmholtz.gao import GaoTerms
from pathcalc.equations.helmholtz.gaussian import GaussianTerms
from pathcalc.equations.helmholtz.non_analytic import NonAnalyticTerms
from pathcalc.equations.helmholtz.power import PowerTerms
from pathcalc.equations.helmholtz.term import Real, Separable
from pathcalc.substances.reference import Reference

FORMS: Mapping[str, Callable[[Any, Real], Separable | NonAnalyticTerms]] = {
    "power": PowerTerms,
    "exponential": ExponentialTerms,
    "double-exponential": DoubleExponentialTerms,
    "gaussian": GaussianTerms,
    "gao": GaoTerms,
    "non-analytic": NonAnalyticTerms,
}


def forms_of(reference: Reference, dtype: Real = np.float64) -> list[Separable | NonAnalyticTerms]:
    """The terms of an equation, in the order of its card."""
    return [FORMS[table.form](table.rows, dtype) for table in reference.terms]
