"""The page that leads to the reports of a library: a verdict a case, what needs a look first on top.

Addresses are relative to the page, so a folder of reports can be moved or served whole.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from pathlib import PurePath
from typing import TYPE_CHECKING, Any, Literal
from urllib.parse import quote

from pathcalc.errors import InvalidCaseError, NoSolutionError, UsageError
from pathcalc.path.warnings import NOTES, merged
from pathcalc.report.view import Document, Outcome
from pathcalc.report.words import say

if TYPE_CHECKING:
    from pathcalc.report.company import Company

Status = Literal["internal", "unsolved", "invalid", "unwritten", "missed", "failed", "warned", "met", "unlimited"]

ORDER: tuple[Status, ...] = (
    "internal", "unsolved", "invalid", "unwritten", "failed", "missed", "warned", "met", "unlimited",
)  # fmt: skip
"""Every status, what needs a look first to begin with."""

ALARMING: tuple[Status, ...] = ORDER[: ORDER.index("warned")]
MAX_MESSAGES = 5


@dataclass(frozen=True)
class Entry:
    """One case of the library. ``outcomes`` are those of its report; ``messages`` say why it has none.

    ``files`` are the report's addresses from the folder of the index, by format.
    """

    id: str
    status: Status
    title: str = ""
    number: str = ""
    revision: str = ""
    outcomes: tuple[Outcome, ...] = ()
    messages: tuple[str, ...] = ()
    files: tuple[tuple[str, str], ...] = ()

    @property
    def alarming(self) -> bool:
        """Whether somebody has to look at it."""
        return self.status in ALARMING

    @property
    def tone(self) -> str:
        """The manner in which the status is set."""
        return "bad" if self.alarming else "good" if self.status == "met" else "plain"

    @property
    def words(self) -> str:
        """The status as printed."""
        return say(f"index.status.{self.status}")

    @property
    def links(self) -> list[tuple[str, str]]:
        """Name and percent-encoded address of each file."""
        return [(form, quote(address)) for form, address in self.files]


@dataclass(frozen=True)
class Index:
    """The page, with the fields that the frame of a report has, too; ``entries`` are in the order printed."""

    title: str
    kind: str
    running: str
    facts: tuple[tuple[str, str, bool], ...]
    outcomes: tuple[Outcome, ...]
    evidence: str
    entries: tuple[Entry, ...]
    signatories: tuple[str, ...] = ()
    sections: tuple[Any, ...] = ()
    figures: tuple[Any, ...] = ()


def solved(
    document: Document, result: dict[str, Any], record: Any, files: Iterable[tuple[str, str]], unwritten: bool = False
) -> Entry:
    """The entry of a case that has results; ``unwritten`` where its reports could not be written."""
    return Entry(
        id=str(result["case"]["id"]),
        status="unwritten" if unwritten else _status(result),
        title=document.title,
        number=str(getattr(record, "number", None) or ""),
        revision=str(getattr(record, "revision", None) or ""),
        outcomes=(*_of_report(document), _warnings(_to_act_on(result["warnings"]))),
        messages=(say("index.message.unwritten"),) if unwritten else (),
        files=tuple(files),
    )


def _of_report(document: Document) -> list[Outcome]:
    labels = (say("verdict.limits"), say("verdict.checks"))
    return [next(o for o in document.outcomes if o.label == label) for label in labels]


def _to_act_on(warnings: Sequence[Mapping[str, Any]]) -> int:
    """How many warnings there are, notes not counted."""
    return sum(1 for row in merged(warnings) if row["code"] not in NOTES)


def _warnings(n: int) -> Outcome:
    return Outcome(say("verdict.warnings"), str(n) if n else say("index.nowarnings"), "warning" if n else "plain")


def _status(result: dict[str, Any]) -> Status:
    if not all(check["passed"] for check in result["checks"]):
        return "failed"
    if not all(limit["passed"] for limit in result["limits"]):
        return "missed"
    if _to_act_on(result["warnings"]):
        return "warned"
    return "met" if result["limits"] else "unlimited"


def unsolved(case_id: str, error: Exception, title: str | None = None, record: Any = None) -> Entry:
    """The entry of a case that has no results; messages name files without their folders."""
    status: Status
    if isinstance(error, InvalidCaseError):
        status = "invalid"
        messages = [f"{PurePath(f.file).name}:{f.line}:{f.column}: {f.message} ({f.code})" for f in error.findings]
    elif isinstance(error, NoSolutionError):
        status, messages = "unsolved", [str(error.trouble)]
    elif isinstance(error, UsageError):
        status, messages = "unwritten", [say("index.message.unread")]
    else:
        status, messages = "internal", [say("index.message.internal", kind=type(error).__name__)]
    if len(messages) > MAX_MESSAGES:
        messages = [*messages[:MAX_MESSAGES], say("index.more", n=len(messages) - MAX_MESSAGES)]
    return Entry(
        id=case_id,
        status=status,
        title=title or "",
        number=str(getattr(record, "number", None) or ""),
        revision=str(getattr(record, "revision", None) or ""),
        messages=tuple(messages),
    )


def index(entries: Iterable[Entry]) -> Index:
    """The page over the entries, whatever their order."""
    ordered = sorted(entries, key=lambda e: (ORDER.index(e.status), e.id))
    alarming = [e for e in ordered if e.alarming]
    n = len(ordered)
    if alarming:
        names = ", ".join(e.id for e in alarming[:MAX_MESSAGES])
        if len(alarming) > MAX_MESSAGES:
            names = say("index.others", names=names, n=len(alarming) - MAX_MESSAGES)
        first = Outcome(say("index.cases"), say("index.look", alarming=len(alarming), n=n, names=names), "bad")
    else:
        first = Outcome(say("index.cases"), say("index.well", n=n), "good")
    counts = ", ".join(
        say("index.count", n=sum(e.status == s for e in ordered), status=say(f"index.status.{s}"))
        for s in ORDER
        if any(e.status == s for e in ordered)
    )
    return Index(
        title=say("index.title"),
        kind=say("doc.kind.index"),
        running=say("index.title"),
        facts=(),
        outcomes=(first, Outcome(say("index.statuses"), f"{counts}.", "plain")),
        evidence=say("index.evidence"),
        entries=tuple(ordered),
    )


def render(page: Index, formats: Iterable[str], stem: str, company: Company | None = None) -> dict[str, bytes]:
    """The files of the index: HTML where a format needs a browser to be read, Markdown where asked for."""
    from pathcalc.report import html, markdown

    wanted = set(formats)
    files: dict[str, bytes] = {}
    if wanted & {"html", "pdf"}:
        files[f"{stem}.html"] = html.render_index(page, company).encode()
    if "md" in wanted:
        files[f"{stem}.md"] = markdown.render_index(page, company).encode()
    return files
