"""Nodes to a Case: sections through the schema, then what only the whole can tell."""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any, Literal

from pathcalc.case import checks, names
from pathcalc.case.expand import read_legs, settle
from pathcalc.case.fields import QuantityField
from pathcalc.case.files import Files
from pathcalc.case.model import P_SURROUNDINGS, Case, CaseSurroundings
from pathcalc.case.nodes import Mapping, Mark, Scalar, Sequence, mark_of, walk
from pathcalc.case.nodes import place as place_of
from pathcalc.case.sections import AMOUNT_DIMENSIONS, Fluid, Limit, Record, Report, Start, Surroundings
from pathcalc.case.translate import MOST, Findings
from pathcalc.case.translate import Path as NodePath
from pathcalc.errors import Finding
from pathcalc.quantities.parse import QuantityError, nearest, parse
from pathcalc.quantities.values import Quantity


@dataclass(frozen=True)
class Origin:
    """Where a case comes from."""

    id: str
    path: Path | None
    text: str
    data: bytes


def build(tree: Mapping, origin: Origin, files: Files, file: str) -> Case | None:
    """The case in a merged tree; None where ``files.findings`` got any error."""
    out = Findings(file, files.findings)
    user: dict[NodePath, Any] = {}
    data = _stripped(tree, (), user, out)
    out.root = data
    if not _version(data, out):
        return None
    _top_keys(data, out)
    return _Builder(data, out, files).case(origin, user)


def _stripped(node: Any, path: NodePath, user: dict[NodePath, Any], out: Findings) -> Any:
    """The tree without the user's own keys and without keys that have no value, each of which is told."""
    if isinstance(node, Mapping):
        result = Mapping(node.mark)
        for key, value in node.items():
            here = (*path, key)
            if key.startswith("x-"):
                user[here] = plain(value)
            elif isinstance(value, Scalar) and value.null:
                mark = node.keys_at[key]
                text = f"{key!r} has no value; give one, or leave the key out"
                out.found.append(Finding(*mark, text, "empty-value"))
                out.emptied.add(here)
            else:
                result.put(key, node.keys_at[key], _stripped(value, here, user, out))
        return result
    if isinstance(node, Sequence):
        items = Sequence(node.mark)
        for i, value in enumerate(node):
            if isinstance(value, Scalar) and value.null:
                out.found.append(Finding(*value.mark, "an item of the list has no value", "empty-value"))
            else:
                items.append(_stripped(value, (*path, i), user, out))
        return items
    return node


def plain(node: Any) -> Any:
    """Plain texts, dicts and lists of a node; None where nothing is written."""
    if isinstance(node, Scalar):
        return None if node.null else str(node)
    if isinstance(node, dict):
        return {k: plain(v) for k, v in node.items()}
    return [plain(v) for v in node]


def _version(data: Mapping, out: Findings) -> bool:
    if "pathcalc" not in data:
        out.missing((), "pathcalc", "the file needs the key 'pathcalc', as its first line `pathcalc: 1`")
        return True
    if data["pathcalc"] != names.FORMAT_VERSION:
        out.add(("pathcalc",), version_text(plain(data["pathcalc"])), "wrong-version")
        return False
    return True


def version_text(written: Any) -> str:
    """Why a version of the format is not this one, and what would do."""
    current = names.FORMAT_VERSION
    if isinstance(written, str) and written.isascii() and written.isdigit() and len(written) < 7:
        if int(written) > int(current):
            return f"version {written} of the format is newer than this program, which reads {current}; update pathcalc"
        return f"version {written} of the format is older than {current}; pathcalc check --upgrade rewrites the file"
    return f"{written!r} is no version of the format; write {current}"


def _top_keys(data: Mapping, out: Findings) -> None:
    for key in list(data)[:MOST]:
        if key in names.TOP_KEYS_LATER and key not in names.TOP_KEYS:
            known = ", ".join(names.TOP_KEYS)
            text = f"the block {key!r} is not available in this version; available are {known}"
            out.add((key,), text, "not-available", key=True)
        elif key not in names.TOP_KEYS:
            out.add(
                (key,),
                f"unknown key {key!r} in the file; {nearest(key, names.TOP_KEYS)}",
                "unknown-key",
                key=True,
            )
    for key in ("title", "fluid", "boundary", "start", "legs"):
        if key not in data:
            out.missing((), key, f"the file needs the key {key!r}")


class _Builder:
    def __init__(self, data: Mapping, out: Findings, files: Files) -> None:
        self.data, self.out, self.files = data, out, files
        record = data.get("record")
        sources = record.get("sources") if isinstance(record, dict) else None
        known = [str(s) for s in sources] if isinstance(sources, dict) else []
        readable = "record" not in data or (isinstance(record, dict) and isinstance(sources, (dict, type(None))))
        self.context: dict[str, Any] = {
            "sources": known if readable else None,
            "ambient": P_SURROUNDINGS,
        }

    def case(self, origin: Origin, user: dict[NodePath, Any]) -> Case | None:
        data, out = self.data, self.out
        title = self.text("title")
        record = out.validate(Record, data["record"], ("record",), self.context) if "record" in data else Record()
        surroundings = self.surroundings()
        self.context["ambient"] = surroundings.p.value
        fluid = self.section(Fluid, "fluid")
        equation = fluid.equation if fluid else None
        checks.check_substance(data.get("fluid"), out)
        if fluid:
            checks.check_fluid(fluid, out)
            self.card(fluid)
        boundary = self.boundary()
        amount = self.amount(boundary)
        start = self.section(Start, "start")
        if start:
            checks.check_start(start, equation, out)
        legs = self.legs(boundary, equation)
        limits = self.limits([leg.name for leg in legs] if legs is not None else None, boundary)
        cycle = self.cycle()
        units = checks.read_units(data["units"], out) if "units" in data else dict(names.UNITS_DEFAULT)
        report = self.section(Report, "report") if "report" in data else Report()
        if report:
            checks.check_report(report, equation, out)
        if out.found or not (record and fluid and boundary and start and legs and report):
            return None
        return Case(
            id=origin.id,
            title=title,
            path=origin.path,
            sha256=self.files.sha256(origin.data),
            text=origin.text,
            includes=tuple(self.files.texts),
            record=record,
            fluid=fluid,
            boundary=boundary,
            amount=amount,
            surroundings=surroundings,
            start=start.given(),
            legs=legs,
            cycle=cycle,
            limits=limits,
            units=units,
            report=report,
            positions={p: m for p, n in walk(data) if (m := mark_of(n))},
            user=user,
        )

    def section(self, model: Any, key: str) -> Any:
        """Model of a top-level section, or None."""
        if key not in self.data:
            return None
        return self.out.validate(model, self.data[key], (key,), self.context, f"`{key}`")

    def text(self, key: str) -> str:
        value = self.data.get(key, "")
        if not isinstance(value, str):
            self.out.add((key,), f"`{key}` holds a text, not a mapping or a list", "wrong-type")
        elif key in self.data and not value.strip():
            self.out.add((key,), f"`{key}` is empty; write a text", "empty-value")
        return " ".join(str(value).split())

    def surroundings(self) -> CaseSurroundings:
        found = self.section(Surroundings, "surroundings")
        result = CaseSurroundings()
        if found and found.T is not None:
            result = replace(result, T=found.T, T_given=True)
        if found and found.p is not None:
            if found.p.gauge:
                text = (
                    f"{found.p.unit} is gauge, and this pressure is its zero; "
                    "write an absolute pressure such as 1.013 bar"
                )
                self.out.add(("surroundings", "p"), text, "wrong-dimension")
                return result
            result = replace(result, p=found.p, p_given=True)
        return result

    def card(self, fluid: Fluid) -> None:
        if fluid.card is None:
            return
        written = self.data["fluid"]["card"]
        folder = self.files.folders.get(written.mark.file, self.files.folder)
        target = self.files.fenced(written, folder, "card")
        if target is not None:
            import os

            shown = os.path.normpath(os.path.join(os.path.dirname(written.mark.file), str(written)))
            if self.files.take(target, shown, written.mark) is not None:
                fluid._card_path = str(target)
                self._beside_card(target, shown, written.mark)

    def _beside_card(self, card: Path, shown: str, mark: Mark) -> None:
        """A published equation in the folder `reference` beside the card is part of the case too."""
        inside = Path("reference") / card.name
        if (card.parent / inside).is_file():
            target = self.files.fenced(Scalar(inside.as_posix(), mark), card.parent, "reference equation")
            if target is not None:
                self.files.take(target, (Path(shown).parent / inside).as_posix(), mark)

    def boundary(self) -> Literal["flow", "closed"] | None:
        value = self.data.get("boundary")
        if value is None:
            return None
        if value == "flow":
            return "flow"
        if value == "closed":
            return "closed"
        if isinstance(value, str):
            text = f"unknown boundary {str(value)!r}; write flow (steady flow) or closed (a fixed mass)"
            self.out.add(("boundary",), text, "unknown-name")
        else:
            self.out.add(("boundary",), "`boundary` holds flow or closed", "wrong-type")
        return None

    def quantity(self, key: str, field: QuantityField) -> Quantity | None:
        """Quantity of a top-level key, or None with findings."""
        value = self.data[key]
        mark = place_of(self.data, (key,)) or Mark(self.out.file, 1, 1)
        try:
            q = parse(value, field.dimensions, ambient=self.context["ambient"], sources=self.context["sources"])
        except QuantityError as error:
            for p in error.problems:
                self.out.add((key, *p.at), p.message, p.code, p.key)
            return None
        return replace(q, line=mark.line, column=mark.column)

    def amount(self, boundary: str | None) -> Quantity | None:
        if "amount" not in self.data:
            return None
        meant = names.AMOUNTS[boundary] if boundary else AMOUNT_DIMENSIONS
        return self.quantity("amount", QuantityField(meant))

    def legs(self, boundary: str | None, equation: str | None) -> Any:
        if "legs" not in self.data:
            return None
        read = read_legs(self.data["legs"], self.out, self.context)
        if read is None:
            return None
        told: set[NodePath] = set()
        for leg in read:
            if boundary and leg.at not in told:
                told.add(leg.at)
                checks.check_leg(leg.model, leg.at, boundary, "amount" in self.data, equation, self.out)
        return settle(read, self.out)

    def limits(self, legs: list[str] | None, boundary: str | None) -> tuple[Limit, ...]:
        data = self.data.get("limits", [])
        if not isinstance(data, list):
            self.out.add(
                ("limits",),
                "`limits` holds a list, such as [{quantity: totals.work, max: 120 kW}]",
                "wrong-type",
            )
            return ()
        found: list[Limit] = []
        for i, item in enumerate(data):
            limit = self.out.validate(Limit, item, ("limits", i), self.context, "a limit")
            if limit is None:
                continue
            mark = mark_of(item) or Mark("", 0, 0)
            limit._origin = (mark.line, mark.column)
            found.append(limit)
            if legs is not None and boundary:
                states = ["start", *legs]
                has = "amount" in self.data
                checks.check_limit(limit, ("limits", i), states, set(legs), boundary, has, self.out)
        return tuple(found)

    def cycle(self) -> bool:
        if "cycle" not in self.data:
            return False
        value = self.data["cycle"]
        if isinstance(value, Scalar) and value.plain and value.lower() in ("true", "false"):
            return value.lower() == "true"
        shown = repr(str(value)) if isinstance(value, str) else "a mapping or a list"
        self.out.add(("cycle",), f"{shown} is no truth value; write true or false", "bad-boolean")
        return False
