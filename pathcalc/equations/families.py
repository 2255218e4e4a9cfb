"""The built-in equation families: what each takes from a card, and what it says of itself in a report."""

from __future__ import annotations

import math

from pathcalc.equations.alpha import (
    AlphaFunction,
    ConstantAlpha,
    RootAlpha,
    SoaveAlpha,
    peng_robinson_m,
    soave_m,
)
from pathcalc.equations.build import Built, Options
from pathcalc.equations.contract import R_CODATA, EquationInfo, Parameter
from pathcalc.equations.cubic import (
    PENG_ROBINSON_FORM,
    REDLICH_KWONG_FORM,
    VAN_DER_WAALS_FORM,
    Form,
    TwoConstantCubic,
)
from pathcalc.equations.ideal import NoResidual
from pathcalc.equations.virial import Coefficient, VirialGas, orbey_vera_c, tsonopoulos_b
from pathcalc.errors import UsageError
from pathcalc.substances.card import Card, VirialCorrelation
from pathcalc.words import Saying

P_MAX_CUBIC = 1.0e8
"""Pressure (Pa) above which a cubic equation draws a warning (common practice, no source)."""

_VIRIAL_LEAST_TR = 0.6
"""Reduced temperature below which virial correlations draw a warning (common practice, no source)."""

_CODATA_SOURCE = "CODATA 2018, E. Tiesinga et al., Rev. Mod. Phys. 93 (2021) 025010"
_ALPHA = r"\alpha=\left[1+m\left(1-\sqrt{T/T_c}\right)\right]^2"


def _gas_constant() -> Parameter:
    return Parameter("R", R_CODATA, "J/(mol K)", _CODATA_SOURCE)


def _from_card(card: Card, key: str, symbol: str, unit: str) -> Parameter:
    constant = card.constant(key)
    return Parameter(symbol, constant.value, unit, card.sources.get(constant.source, constant.source))


def _optional(card: Card, key: str) -> float:
    return card.constant(key).value if card.has(key) else math.nan


def ideal_gas(card: Card, options: Options) -> Built:
    """p v = R T."""
    info = EquationInfo(
        "ideal-gas",
        Saying("equation.ideal-gas"),
        r"p\,v = R\,T",
        (_gas_constant(),),
        "B. P. E. Clapeyron, J. de l'École Polytechnique 14 (1834) 153",
        Saying("reach.ideal-gas"),
    )
    rho_c = _optional(card, "rho_c")
    return Built(
        residual=NoResidual(),
        info=info,
        T_c=_optional(card, "T_c"),
        p_c=_optional(card, "p_c"),
        v_c=1.0 / rho_c,
        omega=_optional(card, "acentric"),
        has_dome=False,
        p_max=math.inf,
    )


def _shift(card: Card, options: Options) -> tuple[float, str | Saying]:
    if options.volume_shift == "card":
        if card.volume_shift is None:
            raise UsageError(f"the card of {card.name!r} gives no volume_shift; give a molar volume, or 0")
        return card.volume_shift.value, card.sources.get(card.volume_shift.source, card.volume_shift.source)
    if isinstance(options.volume_shift, str):
        raise UsageError(f"volume_shift is a molar volume or 'card', not {options.volume_shift!r}")
    return float(options.volume_shift), Saying("source.case")


def _cubic(
    card: Card,
    options: Options,
    name: str,
    title: str,
    formula: str,
    source: str,
    form: Form,
    alpha: AlphaFunction,
    omega: float,
    extra: tuple[Parameter, ...] = (),
    critical: tuple[float, float] | None = None,
) -> Built:
    shift, shift_source = _shift(card, options)
    T_c, p_c = critical or (card.T_c.value, card.p_c.value)
    residual = TwoConstantCubic(form, alpha, T_c, p_c, shift=shift)
    if shift <= -residual.b * 0.5 or shift >= 0.9 * residual.b:
        raise UsageError(f"volume_shift {shift:g} m3/mol is too large beside b = {residual.b:g} m3/mol")
    derived: str | Saying = Saying("source.critical" if critical is None else "source.card")
    parameters = [
        _gas_constant(),
        *(
            (
                Parameter("T_c", T_c, "K", Saying("source.a-and-b")),
                Parameter("p_c", p_c, "Pa", Saying("source.a-and-b")),
            )
            if critical
            else (_from_card(card, "T_c", "T_c", "K"), _from_card(card, "p_c", "p_c", "Pa"))
        ),
        *extra,
        Parameter("a_c", residual.a_c, "Pa m6/mol2", derived),
        Parameter("b", residual.b, "m3/mol", derived),
    ]
    cited: str | Saying = source
    if shift:
        formula += r"\,,\quad v \to v + c"
        cited = Saying("source.shift", source=source)
        parameters.append(Parameter("c", shift, "m3/mol", shift_source))
    notes: tuple[str, ...] = ()
    text = Saying("reach.cubic")
    if math.isfinite(alpha.T_max):
        text = Saying("reach.cubic.below", T=f"{alpha.T_max:.6g}")
    elif isinstance(alpha, SoaveAlpha) and alpha.m < 0.0:
        notes = (f"m = {alpha.m:.4g} is negative: the attraction grows with temperature; doubtful here",)
    info = EquationInfo(name, title, formula, tuple(parameters), cited, text)
    return Built(
        residual=residual,
        info=info,
        T_c=T_c,
        p_c=p_c,
        v_c=residual.v_c,
        omega=omega,
        has_dome=True,
        p_max=P_MAX_CUBIC,
        T_max=alpha.T_max,
        notes=notes,
    )


def van_der_waals(card: Card, options: Options) -> Built:
    """van der Waals; a and b from T_c and p_c, or those of the card with ``constants="card"``."""
    critical = None
    if options.constants == "card":
        if card.van_der_waals is None:
            raise UsageError(f"the card of {card.name!r} gives no van der Waals a and b; use those from T_c, p_c")
        a, b = card.van_der_waals.a, card.van_der_waals.b
        critical = (8.0 * a / (27.0 * R_CODATA * b), a / (27.0 * b * b))
    elif options.constants != "critical":
        raise UsageError(f"constants is 'critical' or 'card', not {options.constants!r}")
    T_c = critical[0] if critical else card.T_c.value
    return _cubic(
        card,
        options,
        "van-der-waals",
        "van der Waals",
        r"p=\frac{RT}{v-b}-\frac{a_c}{v^2}",
        "J. D. van der Waals, Thesis, Leiden (1873)",
        VAN_DER_WAALS_FORM,
        ConstantAlpha(T_c),
        _optional(card, "acentric"),
        critical=critical,
    )


def redlich_kwong(card: Card, options: Options) -> Built:
    """Redlich–Kwong from T_c and p_c."""
    return _cubic(
        card,
        options,
        "redlich-kwong",
        "Redlich–Kwong",
        r"p=\frac{RT}{v-b}-\frac{a_c\,\sqrt{T_c/T}}{v(v+b)}",
        "O. Redlich, J. N. S. Kwong, Chem. Rev. 44 (1949) 233",
        REDLICH_KWONG_FORM,
        RootAlpha(card.T_c.value),
        _optional(card, "acentric"),
    )


def soave(card: Card, options: Options) -> Built:
    """Soave's modification of Redlich–Kwong from T_c, p_c, ω."""
    omega = card.acentric.value
    m = soave_m(omega)
    source = "G. Soave, Chem. Eng. Sci. 27 (1972) 1197"
    extra = (
        _from_card(card, "acentric", r"\omega", "1"),
        Parameter("m", m, "1", f"0.480 + 1.574 ω − 0.176 ω²; {source}"),
    )
    return _cubic(
        card,
        options,
        "soave",
        "Soave–Redlich–Kwong",
        rf"p=\frac{{RT}}{{v-b}}-\frac{{a_c\,\alpha(T)}}{{v(v+b)}},\quad {_ALPHA}",
        source,
        REDLICH_KWONG_FORM,
        SoaveAlpha(card.T_c.value, m),
        omega,
        extra,
    )


def peng_robinson(card: Card, options: Options) -> Built:
    """Peng–Robinson of 1976 from T_c, p_c, ω."""
    omega = card.acentric.value
    m = peng_robinson_m(omega)
    source = "D.-Y. Peng, D. B. Robinson, Ind. Eng. Chem. Fundam. 15 (1976) 59"
    extra = (
        _from_card(card, "acentric", r"\omega", "1"),
        Parameter("m", m, "1", f"0.37464 + 1.54226 ω − 0.26992 ω²; {source}"),
    )
    return _cubic(
        card,
        options,
        "peng-robinson",
        "Peng–Robinson",
        rf"p=\frac{{RT}}{{v-b}}-\frac{{a_c\,\alpha(T)}}{{v(v+b)+b(v-b)}},\quad {_ALPHA}",
        source,
        PENG_ROBINSON_FORM,
        SoaveAlpha(card.T_c.value, m),
        omega,
        extra,
    )


def _of_card(card: Card, item: VirialCorrelation) -> Coefficient:
    terms = tuple((term.coefficient, -term.exponent) for term in item.powers)
    return Coefficient(1.0, terms, card.sources.get(item.source, item.source))


def virial(card: Card, options: Options) -> Built:
    """Virial equation: coefficients of the case, else of the card, else by corresponding states."""
    T_c, p_c = card.T_c.value, card.p_c.value
    stated = (0.0, math.inf)
    B: Coefficient
    C: Coefficient | None
    if options.virial is not None:
        B, C = options.virial["B"], options.virial.get("C")
    elif card.virial is not None and card.virial.B is not None:
        B, C = _of_card(card, card.virial.B), None
        stated = (card.virial.B.T_min, card.virial.B.T_max)
        if card.virial.C is not None:
            C = _of_card(card, card.virial.C)
            stated = (max(stated[0], card.virial.C.T_min), min(stated[1], card.virial.C.T_max))
    else:
        omega = card.acentric.value
        B, C = tsonopoulos_b(T_c, p_c, omega), orbey_vera_c(T_c, p_c, omega)
        stated = (_VIRIAL_LEAST_TR * T_c, math.inf)
    rho_c = card.rho_c.value if card.has("rho_c") else p_c / (0.29 * R_CODATA * T_c)
    residual = VirialGas(B, C, rho_c)
    source = B.source or Saying("source.case-coefficients")
    if C is not None and C.source:
        source = Saying("source.virial", B=source, C=C.source)
    formula = r"\frac{p\,v}{R\,T}=1+\frac{B(T)}{v}" + (r"+\frac{C(T)}{v^2}" if C is not None else "")
    info = EquationInfo(
        "virial",
        Saying("equation.virial"),
        formula,
        (_gas_constant(), Parameter(r"\rho_\mathrm{max}", residual.rho_max, "mol/m3", Saying("source.range"))),
        source,
        Saying("reach.virial", rho=f"{residual.rho_max:.4g}"),
    )
    return Built(
        residual=residual,
        info=info,
        T_c=T_c,
        p_c=p_c,
        v_c=1.0 / rho_c,
        omega=_optional(card, "acentric"),
        has_dome=False,
        p_max=math.inf,
        T_stated=stated,
    )
