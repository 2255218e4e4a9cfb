"""From the card of a published equation of state to a :class:`Reference`: strict, findings at their places.

The card of the equation stands in the folder ``reference`` beside the substance's own card, under the same
file name; it is read only when the equation is asked for. Its form, all numbers molar SI:

    reference: nitrogen                # the substance
    title: Span et al. (2000)          # short name of the equation
    source: span2000
    table: table 17                    # optional: where in the paper the coefficients stand
    why: text                          # why this equation where several are published
    gas_constant: 8.31451              # the paper's own, J/(mol K)
    molar_mass: 0.02801348             # kg/mol
    acentric: 0.0372                   # optional
    reducing: {T: 126.192, rho: 11183.9}
    critical: {T: …, p: …, rho: …}     # as the paper states it
    summit: {T: …, p: …, rho: …}       # where the equation itself has its critical point
    triple: {T: …, p: …, rho: …}       # of the saturated liquid
    valid: {T_min: …, T_max: …, p_max: …, rho_max: …, note: optional}
    limits: {T_min: …, T_max: …, p_max: …, source: text}
    uncertainty: [{of: density, where: text, value: text}, …]
    ideal_gas: span2000                # the correlation of the substance's card that is the paper's ideal part
    terms: [{form: power, rows: [[n, d, t], …]}, …]         # forms and columns: TERM_COLUMNS
    ancillaries:                       # optional: vapour_pressure, liquid_density, vapour_density
      vapour_pressure: {form: exponential-over-T, T_r: …, value_r: …, rows: [[n, t], …], T_min: …, T_max: …,
                        source: …}
    melting: [{form: simon, T_0: …, p_0: …, rows: [[a, t], …], T_min: …, T_max: …, source: …}]     # optional
    check_values:                      # optional: states a publication prints for this equation, to its own digits
      - {given: {T: 300 K, rho: 996.556 kg/m3}, printed: {p: 0.0992418352 MPa}, source: text}
    notes: [text, …]                   # optional
    sources: {span2000: full citation}
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from pathcalc.case.yaml_reader import decode, read
from pathcalc.errors import Finding, InvalidCaseError
from pathcalc.substances.card import Card
from pathcalc.substances.catalogue import CARDS
from pathcalc.substances.fields import Fields
from pathcalc.substances.fields import Path as Place
from pathcalc.substances.reference import (
    ANCILLARY_FORMS,
    CHECK_GIVEN,
    CHECK_PRINTED,
    MELTING_FORMS,
    QUANTITIES,
    TERM_COLUMNS,
    TERM_DEFAULTS,
    Ancillary,
    CheckValue,
    Limits,
    MeltingPart,
    Point,
    Reference,
    Stated,
    TermTable,
    Uncertainty,
)

NEEDED = (
    "reference", "title", "source", "why", "gas_constant", "molar_mass", "reducing", "critical", "summit", "triple",
    "valid", "limits", "uncertainty", "ideal_gas", "terms", "sources",
)  # fmt: skip
OPTIONAL = ("table", "acentric", "ancillaries", "melting", "notes", "check_values")
ANCILLARIES = ("vapour_pressure", "bubble_pressure", "dew_pressure", "liquid_density", "vapour_density")
FOLDER = "reference"
CANCEL = 1e-12
"""Terms without a power of δ must cancel to this, relative, at zero density."""


def reference_path(card: Card) -> Path:
    """Where the reference equation of a substance's card is looked for; the file need not exist."""
    path = Path(card.file)
    return path.parent / FOLDER / path.name


def read_reference(card: Card) -> Reference:
    """The published equation of state that belongs to ``card``; only that one file is read.

    Raises :class:`pathcalc.errors.InvalidCaseError` where there is none, and with all findings where its
    card is not valid or does not fit the substance's card.
    """
    path = reference_path(card)
    if path.parent.parent != CARDS:
        return _read(path, card)
    if path.name not in _built_in:
        _built_in[path.name] = _read(path, card)
    return _built_in[path.name]


_built_in: dict[str, Reference] = {}


def _read(path: Path, card: Card) -> Reference:
    file, findings = str(path), list[Finding]()
    if not path.is_file():
        text = (
            f"no reference equation is known for {card.name!r}: there is no {FOLDER}/{path.name} beside its card; "
            "choose another equation"
        )
        raise InvalidCaseError([Finding(card.file, 1, 1, text, "no-reference-equation")])
    try:
        raw = path.read_bytes()
    except OSError as error:
        text = f"cannot read the card: {error.strerror or error}"
        raise InvalidCaseError([Finding(file, 1, 1, text, "unreadable-file")]) from None
    text_or_none = decode(raw, file, findings)
    if text_or_none is not None and not text_or_none.strip():
        text = "the file is empty; the card of an equation begins with `reference:`"
        findings.append(Finding(file, 1, 1, text, "empty-file"))
        text_or_none = None
    node = None if text_or_none is None else read(text_or_none, file, findings)
    if node is None:
        raise InvalidCaseError(findings)
    return build_reference(Fields(file, node, findings), card)


def build_reference(fields: Fields, card: Card) -> Reference:
    """The equation in YAML nodes; :class:`InvalidCaseError` with every finding."""
    data = fields.data
    if not fields.mapping(data, (), NEEDED, OPTIONAL):
        raise InvalidCaseError(fields.findings)
    found = Reference(
        substance=fields.text(data["reference"], ("reference",)),
        file=fields.file,
        title=fields.text(data["title"], ("title",)),
        source=fields.text(data["source"], ("source",)),
        table=fields.optional_text(data, "table", ()),
        why=fields.text(data["why"], ("why",)),
        gas_constant=fields.number(data["gas_constant"], ("gas_constant",), above=0.0),
        molar_mass=fields.number(data["molar_mass"], ("molar_mass",), above=0.0),
        acentric=fields.number(data["acentric"], ("acentric",), above=-1.0) if "acentric" in data else None,
        reducing=_point(fields, data, "reducing", ("T", "rho")),
        critical=_point(fields, data, "critical"),
        summit=_point(fields, data, "summit"),
        triple=_point(fields, data, "triple"),
        valid=_valid(fields, data["valid"]),
        limits=_limits(fields, data["limits"]),
        uncertainty=_uncertainty(fields, data["uncertainty"]),
        ideal_gas=fields.text(data["ideal_gas"], ("ideal_gas",)),
        terms=_terms(fields, data["terms"]),
        ancillaries=_ancillaries(fields, data.get("ancillaries", {})),
        melting=_melting(fields, data.get("melting", [])),
        sources=_sources(fields, data["sources"]),
        notes=fields.texts(data.get("notes", []), ("notes",)),
        check_values=_check_values(fields, data.get("check_values", [])),
        line_of={key: fields.place((key,)) for key in data},
    )
    _check(fields, found, card)
    if fields.findings:
        raise InvalidCaseError(sorted(fields.findings, key=lambda f: (f.line, f.column)))
    return found


def _point(fields: Fields, data: dict[str, Any], key: str, keys: tuple[str, ...] = ("T", "p", "rho")) -> Point:
    value = data[key]
    if not fields.mapping(value, (key,), keys):
        return Point(math.nan, math.nan, math.nan)
    numbers = {name: fields.number(value[name], (key, name), above=0.0) for name in keys}
    return Point(numbers["T"], numbers.get("p", math.nan), numbers["rho"])


def _valid(fields: Fields, value: Any) -> Stated:
    path: Place = ("valid",)
    if not fields.mapping(value, path, ("T_min", "T_max", "p_max", "rho_max"), ("note",)):
        return Stated(math.nan, math.nan, math.nan, math.nan)
    T_min = fields.number(value["T_min"], (*path, "T_min"), above=0.0)
    return Stated(
        T_min=T_min,
        T_max=fields.number(value["T_max"], (*path, "T_max"), above=T_min),
        p_max=fields.number(value["p_max"], (*path, "p_max"), above=0.0),
        rho_max=fields.number(value["rho_max"], (*path, "rho_max"), above=0.0),
        note=fields.optional_text(value, "note", path),
    )


def _limits(fields: Fields, value: Any) -> Limits:
    path: Place = ("limits",)
    if not fields.mapping(value, path, ("T_min", "T_max", "p_max", "source")):
        return Limits(math.nan, math.nan, math.nan, "")
    T_min = fields.number(value["T_min"], (*path, "T_min"), above=0.0)
    return Limits(
        T_min=T_min,
        T_max=fields.number(value["T_max"], (*path, "T_max"), above=T_min),
        p_max=fields.number(value["p_max"], (*path, "p_max"), above=0.0),
        source=fields.text(value["source"], (*path, "source")),
    )


def _uncertainty(fields: Fields, value: Any) -> tuple[Uncertainty, ...]:
    found = []
    for i, item in enumerate(fields.sequence(value, ("uncertainty",))):
        path: Place = ("uncertainty", i)
        if not fields.mapping(item, path, ("of", "where", "value")):
            continue
        _one_of(fields, item["of"], (*path, "of"), QUANTITIES)
        found.append(Uncertainty(*(fields.text(item[key], (*path, key)) for key in ("of", "where", "value"))))
    return tuple(found)


def _check_values(fields: Fields, value: Any) -> tuple[CheckValue, ...]:
    found = []
    for i, item in enumerate(fields.sequence(value, ("check_values",)) if value else ()):
        path: Place = ("check_values", i)
        if fields.mapping(item, path, ("given", "printed", "source")):
            given = _quantities(fields, item["given"], (*path, "given"), CHECK_GIVEN)
            if given and not ("T" in given and len(given) == 2):
                fields.wrong((*path, "given"), "a check value gives T and one of p, rho", "bad-value")
            printed = _quantities(fields, item["printed"], (*path, "printed"), CHECK_PRINTED)
            found.append(CheckValue(given, printed, fields.text(item["source"], (*path, "source"))))
    return tuple(found)


def _quantities(fields: Fields, value: Any, path: Place, known: Mapping[str, str]) -> dict[str, str]:
    """Texts of quantities by key; the numbers are kept as printed."""
    from pathcalc.quantities import parse_text
    from pathcalc.quantities.parse import QuantityError

    found: dict[str, str] = {}
    if not fields.mapping(value, path, (), tuple(known)):
        return found
    for key, item in value.items():
        text = fields.text(item, (*path, str(key)))
        try:
            parse_text(text, (known[str(key)],))
        except QuantityError as error:
            fields.wrong((*path, str(key)), str(error), "bad-value")
        else:
            found[str(key)] = text
    return found


def _one_of(fields: Fields, value: Any, path: Place, known: tuple[str, ...]) -> str:
    text = fields.text(value, path)
    if text and text not in known:
        fields.wrong(path, f"unknown {path[-1]} {text!r}; known: {', '.join(known)}", "bad-value")
    return text


def _terms(fields: Fields, value: Any) -> tuple[TermTable, ...]:
    items = fields.sequence(value, ("terms",))
    found = []
    for i, item in enumerate(items):
        path: Place = ("terms", i)
        if not fields.mapping(item, path, ("form", "rows")):
            continue
        form = _one_of(fields, item["form"], (*path, "form"), tuple(TERM_COLUMNS))
        if form in TERM_COLUMNS:
            found.append(TermTable(form, _term_rows(fields, item["rows"], (*path, "rows"), form)))
    if not any(table.form != "non-analytic" and table.rows for table in found):
        fields.wrong(("terms",), "`terms` needs at least one table of power or exponential terms", "missing-key")
    _check_zero_density(fields, found)
    return tuple(found)


def _check_zero_density(fields: Fields, tables: list[TermTable]) -> None:
    """Terms without a power of δ: for each power of τ they must add up to nothing at zero density."""
    left: dict[float, float] = {}
    size: dict[float, float] = {}
    for table in tables:
        for row in table.rows:
            named = dict(zip(TERM_COLUMNS[table.form], row, strict=True))
            if named.get("d") == 0.0:
                n = named["n"] * math.exp(-named.get("eta", 0.0) * named.get("epsilon", 0.0) ** 2)
                left[named["t"]] = left.get(named["t"], 0.0) + n
                size[named["t"]] = size.get(named["t"], 0.0) + abs(named["n"])
    for t, total in left.items():
        if not abs(total) <= CANCEL * size[t]:
            text = f"the terms with d = 0 and t = {t:g} do not cancel at zero density, where a residual part vanishes"
            fields.wrong(("terms",), text, "bad-value")


def _term_rows(fields: Fields, value: Any, path: Place, form: str) -> tuple[tuple[float, ...], ...]:
    wanted, defaults = TERM_COLUMNS[form], TERM_DEFAULTS.get(form, ())
    rows = []
    for i, item in enumerate(fields.sequence(value, path)):
        here = (*path, i)
        given = len(item) if isinstance(item, list) else 0
        left_out = min(max(len(wanted) - given, 0), len(defaults))
        row = fields.row(item, here, wanted[: len(wanted) - left_out])
        if row is None:
            continue
        full = (*row, *defaults[len(defaults) - left_out :])
        named = dict(zip(wanted, full, strict=True))
        if named.get("d", 0.0) < 0.0:
            fields.wrong((*here, 1), "d must not be less than 0", "bad-value")
        if "l" in named and named["l"] <= 0.0:
            text = "l must be greater than 0; a term without the factor is of the form power"
            fields.wrong((*here, wanted.index("l")), text, "bad-value")
        if form == "non-analytic" and not (named["beta"] < 0.334 and named["a"] > 1.5 and named["b"] > 0.5):
            text = "a non-analytic term needs a > 1.5, b > 0.5, beta < 1/3 for finite derivatives"
            fields.wrong(here, text, "bad-value")
        rows.append(full)
    return tuple(rows)


def _pairs(fields: Fields, value: Any, path: Place, names: tuple[str, str]) -> tuple[tuple[float, float], ...]:
    rows = [fields.row(r, (*path, i), names) for i, r in enumerate(fields.sequence(value, path))]
    return tuple((row[0], row[1]) for row in rows if row is not None)


def _ancillaries(fields: Fields, value: Any) -> dict[str, Ancillary]:
    if not fields.mapping(value, ("ancillaries",), (), ANCILLARIES):
        return {}
    found = {}
    for key in ANCILLARIES:
        path: Place = ("ancillaries", key)
        needed = ("form", "T_r", "value_r", "rows", "T_min", "T_max", "source")
        if key not in value or not fields.mapping(value[key], path, needed):
            continue
        item = value[key]
        found[key] = Ancillary(
            form=_one_of(fields, item["form"], (*path, "form"), ANCILLARY_FORMS),
            T_r=fields.number(item["T_r"], (*path, "T_r"), above=0.0),
            value_r=fields.number(item["value_r"], (*path, "value_r"), above=0.0),
            rows=_pairs(fields, item["rows"], (*path, "rows"), ("n", "t")),
            T_min=fields.number(item["T_min"], (*path, "T_min"), above=0.0),
            T_max=fields.number(item["T_max"], (*path, "T_max"), above=0.0),
            source=fields.text(item["source"], (*path, "source")),
        )
    return found


def _melting(fields: Fields, value: Any) -> tuple[MeltingPart, ...]:
    found = []
    for i, item in enumerate(fields.sequence(value, ("melting",))):
        path: Place = ("melting", i)
        if not fields.mapping(item, path, ("form", "T_0", "p_0", "rows", "T_min", "T_max", "source")):
            continue
        found.append(
            MeltingPart(
                form=_one_of(fields, item["form"], (*path, "form"), MELTING_FORMS),
                T_0=fields.number(item["T_0"], (*path, "T_0"), above=0.0),
                p_0=fields.number(item["p_0"], (*path, "p_0")),
                rows=_pairs(fields, item["rows"], (*path, "rows"), ("a", "t")),
                T_min=fields.number(item["T_min"], (*path, "T_min"), above=0.0),
                T_max=fields.number(item["T_max"], (*path, "T_max"), above=0.0),
                source=fields.text(item["source"], (*path, "source")),
            )
        )
    return tuple(found)


def _sources(fields: Fields, value: Any) -> dict[str, str]:
    if not isinstance(value, dict):
        fields.wrong(("sources",), "`sources` must be a mapping of id to citation", "wrong-type")
        return {}
    return {str(key): fields.text(text, ("sources", key)) for key, text in value.items()}


def _check(fields: Fields, found: Reference, card: Card) -> None:
    """What must agree: with the citations, within itself, and with the card of the substance."""
    used: list[tuple[Place, str]] = [(("source",), found.source)]
    used += [(("ancillaries", key, "source"), item.source) for key, item in found.ancillaries.items()]
    used += [(("melting", i, "source"), item.source) for i, item in enumerate(found.melting)]
    for path, key in used:
        if key and key not in found.sources:
            fields.wrong(path, f"no citation {key!r} under `sources`", "unknown-source")
    for key in found.sources:
        if key not in {name for _, name in used}:
            fields.wrong(("sources", key), f"the citation {key!r} is used by no number", "unused-source")
    if found.substance and found.substance != card.name:
        text = f"this is the equation of {found.substance!r}, but the card beside it is of {card.name!r}"
        fields.wrong(("reference",), text, "bad-value")
    if found.ideal_gas and found.ideal_gas not in [item.name for item in card.ideal_gas]:
        known = ", ".join(item.name for item in card.ideal_gas)
        text = f"the card of {card.name!r} has no ideal-gas correlation {found.ideal_gas!r}; it has: {known}"
        fields.wrong(("ideal_gas",), text, "unknown-correlation")
    if abs(found.gas_constant / 8.314462618 - 1.0) > 0.001:
        text = f"gas_constant is the molar one in J/(mol K), near 8.314462618, not {found.gas_constant:g}"
        fields.wrong(("gas_constant",), text, "bad-value")
    if card.has("molar_mass") and abs(found.molar_mass / card.molar_mass.value - 1.0) > 1e-9:
        text = f"molar_mass {found.molar_mass:.10g} differs from {card.molar_mass.value:.10g} kg/mol of the card"
        fields.wrong(("molar_mass",), text, "bad-value")
    for name in ("critical", "summit"):
        point: Point = getattr(found, name)
        if not abs(point.T / found.reducing.T - 1.0) < 0.05 or not abs(point.rho / found.reducing.rho - 1.0) < 0.3:
            text = f"the {name} point is far from the reducing point: check the units (K, Pa, mol/m3)"
            fields.wrong((name,), text, "bad-value")
    if found.triple.T >= found.summit.T:
        fields.wrong(("triple", "T"), "the triple point must lie below the critical one", "bad-value")
