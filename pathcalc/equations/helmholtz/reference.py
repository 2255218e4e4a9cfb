"""The family `reference`: the published Helmholtz equation of a substance, from its card to a model."""

from __future__ import annotations

from pathcalc.equations import ideal_gas
from pathcalc.equations.build import Built, Options
from pathcalc.equations.contract import EquationInfo, Parameter
from pathcalc.equations.helmholtz.residual import HelmholtzResidual
from pathcalc.substances.card import Card
from pathcalc.substances.reference import Reference
from pathcalc.substances.reference_reader import read_reference
from pathcalc.words import Saying

FORMULAS = {
    "power": r"\sum n\,\delta^{d}\tau^{t}",
    "exponential": r"\sum n\,\delta^{d}\tau^{t}e^{-g\,\delta^{l}}",
    "double-exponential": r"\sum n\,\delta^{d}\tau^{t}e^{-g\,\delta^{l}-h\,\tau^{m}}",
    "gaussian": r"\sum n\,\delta^{d}\tau^{t}e^{-\eta(\delta-\varepsilon)^2-\beta(\tau-\gamma)^2}",
    "gao": r"\sum n\,\delta^{d}\tau^{t}e^{-\eta(\delta-\varepsilon)^2+1/(\beta(\tau-\gamma)^2+b)}",
    "non-analytic": r"\sum n\,\Delta^{b}\,\delta\,\psi",
}
"""How a report writes each term form (LaTeX)."""


def reference(card: Card, options: Options) -> Built:
    """The published equation that stands beside the substance's card.

    Raises :class:`pathcalc.errors.InvalidCaseError` where there is none or its card is not valid.
    """
    found = read_reference(card)
    residual = HelmholtzResidual.of(found)
    top = found.summit
    return Built(
        residual=residual,
        info=describe(found),
        T_c=top.T,
        p_c=top.p,
        v_c=1.0 / top.rho,
        omega=_acentric(card, found),
        has_dome=True,
        p_max=found.valid.p_max,
        R=found.gas_constant,
        T_min=found.limits.T_min,
        T_max=found.limits.T_max,
        T_stated=(found.valid.T_min, found.valid.T_max),
        T_triple=found.triple.T,
        ideal=ideal_gas.from_card(card, found.ideal_gas, found.gas_constant),
        notes=found.notes,
    )


def _acentric(card: Card, found: Reference) -> float:
    if found.acentric is not None:
        return found.acentric
    return card.acentric.value if card.has("acentric") else float("nan")


def describe(found: Reference) -> EquationInfo:
    """What a report says about the equation."""
    source = found.citation(found.source) + (f"; {found.table}" if found.table else "")
    forms = list(dict.fromkeys(table.form for table in found.terms))
    count = sum(len(table.rows) for table in found.terms)
    formula = (
        r"\frac{a^\mathrm{r}}{RT}=\alpha^\mathrm{r}(\delta,\tau)="
        + "+".join(FORMULAS[form] for form in forms)
        + r"\,,\quad \delta=\rho/\rho_r,\ \tau=T_r/T"
    )
    parameters = (
        Parameter("R", found.gas_constant, "J/(mol K)", source),
        Parameter("T_r", found.reducing.T, "K", source),
        Parameter(r"\rho_r", found.reducing.rho, "mol/m3", source),
        Parameter("T_c", found.summit.T, "K", Saying("source.own-critical")),
        Parameter("p_c", found.summit.p, "Pa", Saying("source.own-critical")),
        Parameter(r"\rho_c", found.summit.rho, "mol/m3", Saying("source.own-critical")),
        Parameter("N", float(count), "1", source),
    )
    valid, limits = found.valid, found.limits
    text = Saying(
        "reach.reference",
        low=f"{valid.T_min:.6g}",
        high=f"{valid.T_max:.6g}",
        p=f"{valid.p_max / 1e6:.6g}",
        rho=f"{valid.rho_max:.6g}",
        T_most=f"{limits.T_max:.6g}",
        p_most=f"{limits.p_max / 1e6:.6g}",
    )
    return EquationInfo(
        name="reference",
        title=found.title,
        formula=formula,
        parameters=parameters,
        source=source,
        range_text=text,
        uncertainty=tuple(f"{item.of}, {item.where}: {item.value}" for item in found.uncertainty),
    )
