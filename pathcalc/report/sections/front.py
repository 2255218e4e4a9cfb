"""The head of the document: what it is, how it came out, what it is for."""

from __future__ import annotations

from typing import Any

from pathcalc.path.checks import name_in_words
from pathcalc.path.warnings import NOTES
from pathcalc.report import numbers
from pathcalc.report.context import Context, pick
from pathcalc.report.sections.basis import inputs
from pathcalc.report.units import kind_of
from pathcalc.report.view import Block, Bullets, Document, Figure, Heading, Outcome, Paragraph, Section
from pathcalc.report.words import SYMBOLS, say


def header(ctx: Context, sections: tuple[Section, ...], figures: tuple[Figure, ...]) -> Document:
    """The document around its sections."""
    record = pick(ctx.case, "record")
    title = str(ctx.result["case"]["title"] or ctx.result["case"]["id"])
    facts = []
    project = pick(record, "project")
    if project is not None:
        facts.append((say("doc.project"), str(project), False))
    for key in ("number", "revision", "date", "author"):
        value = pick(record, key)
        facts.append((say(f"doc.{key}"), say("doc.unset") if value is None else str(value), value is None))
    facts.append((say("doc.case"), str(ctx.result["case"]["id"]), False))
    number, revision = pick(record, "number"), pick(record, "revision")
    if number is None:
        running = say("doc.running.bare", title=title)
    else:
        running = say("doc.running", number=number, revision=revision or say("doc.unset"))
    return Document(
        title=title,
        kind=say("doc.kind"),
        running=running,
        facts=tuple(facts),
        signatories=(pick(record, "author", ""), pick(record, "checker", ""), pick(record, "approver", "")),
        outcomes=(*_result(ctx), limits_outcome(ctx), _checks(ctx), _warnings(ctx), _inputs(ctx), *_unconfirmed(ctx)),
        evidence=say("verdict.evidence"),
        sections=sections,
        figures=figures,
    )


def limits_outcome(ctx: Context) -> Outcome:
    """Limits met or missed, with the tightest margin."""
    label = say("verdict.limits")
    limits = ctx.result["limits"]
    if not limits:
        return Outcome(label, say("verdict.limits.none"), "plain")
    missed = [x for x in limits if not x["passed"]]
    if missed:
        names = ", ".join(_miss(ctx, x) for x in missed)
        text = say("verdict.limits.missed", missed=len(missed), n=len(limits), names=names)
        return Outcome(label, text, "bad")
    text = say("verdict.limits.met", n=len(limits))
    ranked = [x for x in limits if x["margin"] is not None]
    if ranked:
        text += " " + _tightest(ctx, min(ranked, key=_share))
    if any(i.uncertainty for i in inputs(ctx)):
        text += " " + say("verdict.limits.spread")
    return Outcome(label, text, "good")


def _miss(ctx: Context, limit: dict[str, Any]) -> str:
    kind = kind_of(limit["quantity"])
    if limit["value"] is None:
        return say("verdict.limits.undefined", quantity=limit["quantity"])
    side, bound = _binding(limit)
    return say(
        "verdict.limits.miss",
        quantity=limit["quantity"],
        value=ctx.measure(kind, limit["value"]),
        side=say(f"verdict.side.{side}"),
        limit=ctx.measure(kind, bound),
    )


def _share(limit: dict[str, Any]) -> float:
    bound = _binding(limit)[1]
    return float(abs(limit["margin"])) / (abs(bound) or 1.0)


def _binding(limit: dict[str, Any]) -> tuple[str, float]:
    """The bound the value is nearest to."""
    bounds = [(side, float(limit[side])) for side in ("min", "max") if limit[side] is not None]
    return min(bounds, key=lambda b: abs(b[1] - (limit["value"] or 0.0)))


def _tightest(ctx: Context, limit: dict[str, Any]) -> str:
    kind = kind_of(limit["quantity"])
    side, bound = _binding(limit)
    return say(
        "verdict.tightest",
        quantity=limit["quantity"],
        value=ctx.measure(kind, limit["value"]),
        side=say(f"verdict.side.{side}"),
        limit=ctx.measure(kind, bound),
        margin=ctx.measure(ctx.margin(kind), limit["margin"]),
    )


def _checks(ctx: Context) -> Outcome:
    label = say("verdict.checks")
    checks = ctx.result["checks"]
    failed = [c for c in checks if not c["passed"]]
    if failed:
        names = ", ".join(_named(c) for c in failed)
        text = say("verdict.checks.failed", failed=len(failed), n=len(checks), names=names)
        return Outcome(label, text, "bad")
    if not checks:
        return Outcome(label, say("verdict.checks.none"), "plain")
    return Outcome(label, say("verdict.checks.passed", n=len(checks)), "good")


def _named(check: dict[str, Any]) -> str:
    name = name_in_words(str(check["name"]))
    return say("verdict.check", name=name, at=check["at"]) if check["at"] else name


def _result(ctx: Context) -> tuple[Outcome, ...]:
    """The figures of the whole path that a reader looks for first."""
    found = [
        f"{say(f'cycle.{key}')} {numbers.short(value, 5)}"
        for key, value in (ctx.result["cycle"] or {}).items()
        if value is not None
    ]
    totals = ctx.result["totals"] or {}
    idle = not any(totals.get(key) for key in ("heat", "work"))
    for key in () if idle else ("heat", "work", "exergy_destroyed"):
        if totals.get(key) is not None:
            found.append(f"{say(f'col.{key}').lower()} {ctx.measure('total', totals[key])}")
    if not found:
        last = ctx.states[-1]
        ends = ", ".join(f"{SYMBOLS[key]} = {ctx.measure(key, last[key])}" for key in ("T", "p"))
        found = [say("verdict.result.end", name=last["name"], values=ends)]
    return (Outcome(say("verdict.result"), "; ".join(found) + ".", "plain"),)


def _warnings(ctx: Context) -> Outcome:
    notes = sum(1 for w in ctx.warnings if w["code"] in NOTES)
    n = len(ctx.warnings) - notes
    text = say(f"verdict.warnings.{_count(n)}", n=n)
    if notes:
        text += " " + say(f"verdict.notes.{_count(notes)}", n=notes)
    return Outcome(say("verdict.warnings"), text, "warning" if n else "plain")


def _count(n: int) -> str:
    return "none" if n == 0 else "one" if n == 1 else "many"


def _inputs(ctx: Context) -> Outcome:
    found = inputs(ctx)
    bare = sum(1 for i in found if not i.source)
    text = say("verdict.inputs.some" if bare else "verdict.inputs.all", n=len(found), unsourced=bare)
    return Outcome(say("verdict.inputs"), text, "plain")


def _unconfirmed(ctx: Context) -> tuple[Outcome, ...]:
    """Assumptions that are yet to be confirmed, where the case states any."""
    texts = [str(text) for text in pick(pick(ctx.case, "record"), "unconfirmed", [])]
    if not texts:
        return ()
    said = say("verdict.unconfirmed.some", n=len(texts), texts=" ".join(texts))
    return (Outcome(say("verdict.unconfirmed"), said, "warning"),)


def purpose(ctx: Context) -> Section:
    """Purpose, scope and sign convention."""
    stated = pick(pick(ctx.case, "record"), "purpose")
    mode = "flow" if ctx.flow else "closed"
    scope = say(f"purpose.scope.{mode}", n=len(ctx.legs), fluid=ctx.solution.basis.substance)
    notes = pick(pick(ctx.case, "record"), "notes", [])
    blocks: tuple[Block, ...] = (
        Paragraph(str(stated)) if stated else Paragraph(say("purpose.none"), blank=True),
        Paragraph(scope),
        Paragraph(say("purpose.sign") + " " + say(f"purpose.work.{mode}")),
    )
    if pick(pick(ctx.case, "record"), "revision") and not pick(pick(ctx.case, "record"), "revisions"):
        blocks = (*blocks, Paragraph(say("purpose.revisions"), blank=True))
    if notes:
        blocks = (*blocks, Heading(say("purpose.notes")), Bullets(tuple(str(n) for n in notes)))
    return Section("purpose", say("purpose.title"), blocks)
