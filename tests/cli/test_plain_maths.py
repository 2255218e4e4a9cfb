"""Formulas as text; expected texts are written by hand from the formulas."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from pathcalc.cli.plain_maths import plain_maths, readable


@pytest.mark.parametrize(
    ("latex", "text"),
    [
        (r"w=\frac{w_s}{\eta}", "w = w_s/η"),
        (r"\frac{a+b}{c}", "(a + b)/c"),
        (r"\frac{a}{b\,c}", "a/(b c)"),
        (r"\frac{RT}{v-b}", "RT/(v - b)"),
        (r"\left(\frac{\partial p}{\partial T}\right)_v", "(∂p/∂T)_v"),
        (r"\Delta s=s_2-s_1", "Δs = s₂ - s₁"),
        (r"h_{2s}", "h_2s"),
        (r"\sqrt{T/T_c}", "√(T/T_c)"),
        (r"c_p^\circ", "c_p°"),
        (r"1.2\times 10^{-3}", "1.2 × 10⁻³"),
        (r"x^{n-1}", "x^(n - 1)"),
        (r"v^2", "v²"),
        (r"-97.2\ \mathrm{kJ/(kg\,K)}", "-97.2 kJ/(kg K)"),
        (r"\int_{T_1}^{T_2} c_p\,\mathrm{d}T", "∫[T₁ → T₂] c_p dT"),
        (r"\dot m\sum_i w_i", "ṁ Σ_i w_i"),
        (r"\ln\frac{p_2}{p_1}", "ln(p₂/p₁)"),
        (r"0.35\times\left(117.3+0\right)", "0.35 × (117.3 + 0)"),
        (r"78.1-(-11.05)", "78.1 - (-11.05)"),
        (r"q\quad(\text{integration error}\le 2)", "q  (integration error ≤ 2)"),
        (r"\unheard x", "unheard x"),
        ("", ""),
    ],
)
def test_formula(latex: str, text: str) -> None:
    assert plain_maths(latex) == text


def test_result_may_be_plain_or_mixed() -> None:
    assert readable("gas") == "gas"
    assert readable("at $T_c$ alone") == "at T_c alone"
    assert readable(r"5\ \mathrm{K}") == "5 K"


@given(st.text(alphabet=r"\{}_^ab12+-=frac()sqrt,. ", max_size=40))
def test_whatever_it_is_given_it_answers_with_one_line(latex: str) -> None:
    text = plain_maths(latex)
    assert "\n" not in text
    assert [c for c in latex if c in "12"] == [] or any(c in text for c in "12¹²₁₂")
