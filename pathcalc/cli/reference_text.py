"""What ``pathcalc substances NAME`` tells of the published equation of state of a substance."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from pathcalc.substances import Card
    from pathcalc.substances.reference import Reference


def _found(card: Card) -> Reference | None:
    from pathcalc.substances.reference_reader import read_reference, reference_path

    return read_reference(card) if reference_path(card).is_file() else None


def reference_text(card: Card) -> list[str]:
    """The equation in lines of text: why this one, its range, its uncertainties; none where there is none."""
    found = _found(card)
    if found is None:
        return []
    valid, limits, top = found.valid, found.limits, found.summit
    counts = ", ".join(f"{sum(len(t.rows) for t in found.terms if t.form == form)} {form}" for form in _forms(found))
    lines = ["", f"Reference equation: {found.title}", f"  {_cited(found)}", f"  why: {found.why}"]
    lines.append(f"  terms: {counts}; R = {found.gas_constant!r} J/(mol K)")
    lines.append(f"  its own critical point: {top.T:.9g} K, {top.p:.9g} Pa, {top.rho:.9g} mol/m3")
    lines.append(
        f"  stated for {valid.T_min:g} K to {valid.T_max:g} K, up to {valid.p_max:g} Pa and {valid.rho_max:g} mol/m3"
        + (f" ({valid.note})" if valid.note else "")
    )
    lines.append(f"  used to {limits.T_max:g} K and {limits.p_max:g} Pa: {limits.source}")
    lines += [f"  uncertainty of {u.of}, {u.where}: {u.value}" for u in found.uncertainty]
    lines += [f"  melting line: {found.citation(key)}" for key in dict.fromkeys(part.source for part in found.melting)]
    lines += [f"  note: {note}" for note in found.notes]
    return lines


def _cited(found: Reference) -> str:
    return found.citation(found.source) + (f"; coefficients: {found.table}" if found.table else "")


def _forms(found: Reference) -> list[str]:
    return list(dict.fromkeys(table.form for table in found.terms))


def reference_as_dict(card: Card) -> dict[str, Any] | None:
    """The equation as plain values, coefficients and all; None where there is none."""
    from dataclasses import asdict, replace

    found = _found(card)
    if found is None:
        return None
    values = {key: value for key, value in asdict(replace(found, line_of={})).items() if key not in ("file", "line_of")}
    del values["reducing"]["p"]  # no equation has one
    return values
