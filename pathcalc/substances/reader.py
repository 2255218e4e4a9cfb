"""From a card file to a :class:`Card`: strict, and with every finding at its line and column.

The form of a card, all numbers SI:

    substance: my-gas                  # its name
    formula: N2
    cas: 7727-37-9                     # optional
    aliases: [trial gas]               # optional
    hazards: [asphyxiant]              # words of HAZARDS
    remarks: [text, …]                 # optional
    constants:                         # molar_mass is needed; the others as the chosen equation needs them
      molar_mass: {value: 0.0280134, unit: kg/mol, source: lab}     # also: note, u (standard uncertainty)
    ideal_gas:                         # one or more, the first is the default
      - {name: trial, form: constant, T_min: 250, T_max: 400, source: lab, cp_over_R: 3.5}
    van_der_waals: {a: 0.137, b: 3.87e-5, source: lab}              # optional; Pa m6/mol2, m3/mol
    virial: {B: {powers: [[c, t], …], T_min: …, T_max: …, source: lab}, C: …}     # optional; B = sum c T^t
    volume_shift: {value: -4.0e-6, unit: m3/mol, source: lab}       # optional
    sources: {lab: full citation}

`correlations.py` tells the forms of the heat capacity.
"""

from __future__ import annotations

from functools import cache
from pathlib import Path
from typing import Any

from pathcalc.case.yaml_reader import decode, read
from pathcalc.errors import Finding, InvalidCaseError
from pathcalc.substances.card import (
    CONSTANT_UNITS,
    HAZARDS,
    Card,
    Constant,
    Correlation,
    PowerTerm,
    VanDerWaals,
    Virial,
    VirialCorrelation,
)
from pathcalc.substances.catalogue import card_path
from pathcalc.substances.correlations import read_correlation
from pathcalc.substances.fields import Fields
from pathcalc.substances.fields import Path as Place

NEEDED = ("substance", "formula", "hazards", "constants", "ideal_gas", "sources")
OPTIONAL = ("cas", "aliases", "remarks", "van_der_waals", "virial", "volume_shift")


def read_card(name_or_path: str | Path) -> Card:
    """The card of a substance, given by any of its names or by the path of a card file.

    A :class:`pathlib.Path`, and text that ends in ``.yaml`` or ``.yml``, is taken for a path. Only that one
    card is read. Raises :class:`pathcalc.substances.catalogue.UnknownSubstance` for a name nobody bears, and
    :class:`pathcalc.errors.InvalidCaseError` with all findings for a card that is not valid.
    """
    if isinstance(name_or_path, Path) or name_or_path.lower().endswith((".yaml", ".yml")):
        return _read(Path(name_or_path))
    return _read_built_in(card_path(name_or_path))


@cache
def _read_built_in(path: Path) -> Card:
    return _read(path)


def _read(path: Path) -> Card:
    file, findings = str(path), list[Finding]()
    try:
        raw = path.read_bytes()
    except OSError as error:
        text = f"cannot read the card: {error.strerror or error}"
        raise InvalidCaseError([Finding(file, 1, 1, text, "unreadable-file")]) from None
    text_or_none = decode(raw, file, findings)
    if text_or_none is not None and not text_or_none.strip():
        text = "the file is empty; a card begins with `substance:`"
        findings.append(Finding(file, 1, 1, text, "empty-file"))
        text_or_none = None
    node = None if text_or_none is None else read(text_or_none, file, findings)
    if node is None:
        raise InvalidCaseError(findings)
    return build_card(Fields(file, node, findings))


def build_card(fields: Fields) -> Card:
    """The card in YAML nodes; :class:`InvalidCaseError` with every finding."""
    data = fields.data
    fields.mapping(data, (), NEEDED, OPTIONAL)
    sources = _sources(fields, data.get("sources"))
    card = Card(
        name=fields.optional_text(data, "substance", ()) or "",
        file=fields.file,
        formula=fields.optional_text(data, "formula", ()) or "",
        cas=fields.optional_text(data, "cas", ()),
        aliases=fields.texts(data.get("aliases", []), ("aliases",)),
        hazards=_hazards(fields, data.get("hazards", [])),
        remarks=fields.texts(data.get("remarks", []), ("remarks",)),
        constants=_constants(fields, data.get("constants", {})),
        ideal_gas=_ideal_gas(fields, data.get("ideal_gas", [])),
        sources=sources,
        van_der_waals=_van_der_waals(fields, data["van_der_waals"]) if "van_der_waals" in data else None,
        virial=_virial(fields, data["virial"]) if "virial" in data else None,
        volume_shift=_volume_shift(fields, data["volume_shift"]) if "volume_shift" in data else None,
        line_of={key: fields.place((key,)) for key in ("constants", "ideal_gas")},
    )
    _check_sources(fields, sources)
    _check_consistency(fields, card)
    if fields.findings:
        raise InvalidCaseError(sorted(fields.findings, key=lambda f: (f.line, f.column)))
    return card


def _sources(fields: Fields, value: Any) -> dict[str, str]:
    if value is None:
        return {}
    if not isinstance(value, dict):
        fields.wrong(("sources",), "`sources` must be a mapping of id to citation", "wrong-type")
        return {}
    return {str(key): fields.text(text, ("sources", key)) for key, text in value.items()}


def _hazards(fields: Fields, value: Any) -> tuple[str, ...]:
    words = fields.texts(value, ("hazards",))
    for i, word in enumerate(words):
        if word and word not in HAZARDS:
            known = ", ".join(HAZARDS)
            fields.wrong(("hazards", i), f"unknown hazard {word!r}; known: {known}", "bad-value")
    return words


def _one_constant(fields: Fields, value: Any, path: Place, unit: str, **bounds: float) -> Constant | None:
    if not fields.mapping(value, path, ("value", "unit", "source"), ("note", "u")):
        return None
    if value["unit"] != unit:
        text = f"{path[-1]} is given in {unit} on a card, not in {str(value['unit'])!r}"
        fields.wrong((*path, "unit"), text, "wrong-unit")
    return Constant(
        value=fields.number(value["value"], (*path, "value"), **bounds),
        source=fields.text(value["source"], (*path, "source")),
        note=fields.optional_text(value, "note", path),
        u=fields.number(value["u"], (*path, "u"), at_least=0.0) if "u" in value else None,
    )


def _constants(fields: Fields, value: Any) -> dict[str, Constant]:
    optional = [key for key in CONSTANT_UNITS if key != "molar_mass"]
    if not fields.mapping(value, ("constants",), ("molar_mass",), optional) and not isinstance(value, dict):
        return {}
    found: dict[str, Constant] = {}
    for key, unit in CONSTANT_UNITS.items():
        if key in value:
            bounds = {"above": -1.0} if key == "acentric" else {"above": 0.0}
            constant = _one_constant(fields, value[key], ("constants", key), unit, **bounds)
            if constant is not None:
                found[key] = constant
    return found


def _ideal_gas(fields: Fields, value: Any) -> tuple[Correlation, ...]:
    items = fields.sequence(value, ("ideal_gas",))
    if not items and isinstance(value, list):
        fields.wrong(("ideal_gas",), "`ideal_gas` needs at least one correlation", "missing-key")
    read = [read_correlation(fields, item, ("ideal_gas", i)) for i, item in enumerate(items)]
    found = [item for item in read if item is not None]
    seen: set[str] = set()
    for i, item in enumerate(found):
        if item.name in seen:
            fields.wrong(("ideal_gas", i), f"two correlations are called {item.name!r}", "duplicate-name")
        seen.add(item.name)
    return tuple(found)


def _van_der_waals(fields: Fields, value: Any) -> VanDerWaals | None:
    path: Place = ("van_der_waals",)
    if not fields.mapping(value, path, ("a", "b", "source"), ("note",)):
        return None
    return VanDerWaals(
        a=fields.number(value["a"], (*path, "a"), at_least=0.0),
        b=fields.number(value["b"], (*path, "b"), at_least=0.0),
        source=fields.text(value["source"], (*path, "source")),
        note=fields.optional_text(value, "note", path),
    )


def _virial(fields: Fields, value: Any) -> Virial | None:
    if not fields.mapping(value, ("virial",), ("B",), ("C",)):
        return None
    parts = {key: _virial_part(fields, value[key], ("virial", key)) for key in ("B", "C") if key in value}
    return Virial(**parts)


def _virial_part(fields: Fields, value: Any, path: Place) -> VirialCorrelation | None:
    needed = ("powers", "T_min", "T_max", "source")
    if not fields.mapping(value, path, needed, ("note",)):
        return None
    rows = fields.sequence(value["powers"], (*path, "powers"))
    pairs = [fields.row(r, (*path, "powers", i), ("coefficient", "exponent")) for i, r in enumerate(rows)]
    T_min = fields.number(value["T_min"], (*path, "T_min"), above=0.0)
    return VirialCorrelation(
        T_min=T_min,
        T_max=fields.number(value["T_max"], (*path, "T_max"), above=T_min),
        powers=tuple(PowerTerm(*pair) for pair in pairs if pair is not None),
        source=fields.text(value["source"], (*path, "source")),
        note=fields.optional_text(value, "note", path),
    )


def _volume_shift(fields: Fields, value: Any) -> Constant | None:
    return _one_constant(fields, value, ("volume_shift",), "m3/mol")


def _check_sources(fields: Fields, sources: dict[str, str]) -> None:
    """Every ``source`` names a citation, and every citation is used."""
    used: set[str] = set()

    def walk(value: Any, path: Place) -> None:
        if isinstance(value, dict):
            for key, item in value.items():
                if key == "source" and isinstance(item, str):
                    used.add(item)
                    if item not in sources:
                        fields.wrong((*path, key), f"no citation {item!r} under `sources`", "unknown-source")
                elif key != "sources" or path:
                    walk(item, (*path, key))
        elif isinstance(value, list):
            for i, item in enumerate(value):
                walk(item, (*path, i))

    walk(fields.data, ())
    for key in sources:
        if key not in used:
            fields.wrong(("sources", key), f"the citation {key!r} is used by no number", "unused-source")


def _check_consistency(fields: Fields, card: Card) -> None:
    """What no substance can be: a triple point above the critical point, and the like."""
    values = {key: constant.value for key, constant in card.constants.items()}
    for low, high in (("T_triple", "T_nbp"), ("T_triple", "T_c"), ("T_nbp", "T_c"), ("p_triple", "p_c")):
        if low in values and high in values and values[low] >= values[high]:
            text = f"{low} ({values[low]:g}) must be below {high} ({values[high]:g})"
            fields.wrong(("constants", low), text, "bad-value")
    if not 1e-4 < values.get("molar_mass", 0.01) < 10.0:
        text = "molar_mass is in kg/mol: a value outside 0.0001 … 10 is no substance"
        fields.wrong(("constants", "molar_mass"), text, "bad-value")
