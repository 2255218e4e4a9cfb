"""The view model: a report as data, before it becomes HTML or Markdown.

A :class:`Document` is a header, an outcome and numbered sections; a :class:`Section` is a list of blocks.
Both templates draw the same blocks, so that one format cannot say more than the other. Text here is plain
and unescaped: each template escapes for its own destination. LaTeX stands in fields named ``latex`` and in
the worked steps alone.

:func:`build` makes the document from a solution:

``solution.to_dict()``
    the results object of one lane, SI, exactly as ``pathcalc solve --json`` writes it;
``solution.case``
    the case: record, fluid, start, legs, limits, units, report block, text, digest;
``solution.explanations``, ``.curves``, ``.dome``, ``.basis``, ``.state_parts``, ``.streams``, ``.verified``
    the records of :mod:`pathcalc.path.steps`.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any, Literal, Protocol

from pathcalc.path.steps import Basis, Curve, Dome, StateParts, Step, Verified


class SolutionLike(Protocol):
    """What a report reads of a solved path."""

    @property
    def case(self) -> Any: ...
    @property
    def explanations(self) -> Mapping[str, Sequence[Step]]: ...
    @property
    def curves(self) -> Sequence[Curve]: ...
    @property
    def dome(self) -> Dome | None: ...
    @property
    def basis(self) -> Basis: ...
    @property
    def verified(self) -> Sequence[Verified]: ...
    @property
    def streams(self) -> Mapping[str, Mapping[str, Any]]: ...
    @property
    def state_parts(self) -> Sequence[StateParts]: ...
    def to_dict(self) -> dict[str, Any]: ...


Role = Literal["text", "number", "code", "good", "bad", "absent"]


@dataclass(frozen=True)
class Cell:
    """One table cell. ``pad`` lines decimals up; ``mark`` is a short remark beside the text (a warning).

    ``link`` is the anchor of the place that shows how the value came about.
    """

    text: str
    role: Role = "text"
    pad: str = ""
    mark: str = ""
    link: str = ""


@dataclass(frozen=True)
class Column:
    """A column head: words, then symbol (``_`` begins a subscript), then unit."""

    words: str
    symbol: str = ""
    unit: str = ""
    numeric: bool = False


@dataclass(frozen=True)
class Table:
    """A captioned table; the cell in column ``head`` names its row."""

    caption: str
    columns: tuple[Column, ...]
    rows: tuple[tuple[Cell, ...], ...]
    head: int = 0
    number: int = 0
    kind: Literal["table"] = "table"


@dataclass(frozen=True)
class Paragraph:
    """Running text; ``blank`` text stands for something the author has not supplied."""

    text: str
    blank: bool = False
    kind: Literal["paragraph"] = "paragraph"


@dataclass(frozen=True)
class Heading:
    """A heading inside a section."""

    text: str
    kind: Literal["heading"] = "heading"


@dataclass(frozen=True)
class Bullets:
    """A list of sentences."""

    items: tuple[str, ...]
    kind: Literal["bullets"] = "bullets"


@dataclass(frozen=True)
class Notice:
    """A warning or a caution: a title and a sentence or two."""

    title: str
    text: str
    tone: Literal["warning", "note", "caution"]
    code: str = ""
    kind: Literal["notice"] = "notice"


@dataclass(frozen=True)
class Formulas:
    """Displayed formulas, each with words beside it."""

    rows: tuple[tuple[str, str], ...]
    kind: Literal["formulas"] = "formulas"


@dataclass(frozen=True)
class Symbols:
    """A table whose rows begin with a symbol in LaTeX; the other cells are text.

    Columns from ``numeric`` on hold numbers; ``anchors`` are those of the columns, empty where a column has none.
    """

    caption: str
    columns: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    number: int = 0
    numeric: int | None = None
    anchors: tuple[str, ...] = ()
    kind: Literal["symbols"] = "symbols"


@dataclass(frozen=True)
class Worked:
    """Worked steps towards one or more quantities; ``anchor`` is where their values link to."""

    title: str
    steps: tuple[Step, ...]
    anchor: str = ""
    kind: Literal["worked"] = "worked"


@dataclass(frozen=True)
class Figure:
    """A diagram: SVG markup without ids that clash, a caption and a description in words."""

    name: str
    caption: str
    alt: str
    svg: str
    number: int = 0
    kind: Literal["figure"] = "figure"


@dataclass(frozen=True)
class Listing:
    """A text file as written."""

    title: str
    text: str
    kind: Literal["listing"] = "listing"


Block = Table | Paragraph | Heading | Bullets | Notice | Formulas | Symbols | Worked | Figure | Listing


@dataclass(frozen=True)
class Section:
    """A numbered section."""

    key: str
    title: str
    blocks: tuple[Block, ...]


@dataclass(frozen=True)
class Outcome:
    """One line of the verdict."""

    label: str
    text: str
    tone: Literal["good", "bad", "plain", "warning"]


@dataclass(frozen=True)
class Document:
    """A whole report."""

    title: str
    kind: str
    running: str
    facts: tuple[tuple[str, str, bool], ...]
    signatories: tuple[str, str, str]
    outcomes: tuple[Outcome, ...]
    evidence: str
    sections: tuple[Section, ...]
    figures: tuple[Figure, ...] = field(default=())

    def section(self, key: str) -> Section | None:
        """The section of that key, or None where this report has none."""
        return next((s for s in self.sections if s.key == key), None)


def build(solution: SolutionLike, changes: Mapping[str, Any] | None = None) -> Document:
    """The document for one solved case.

    ``changes`` is what differs from an earlier revision, as ``Comparison.to_dict()`` of
    :mod:`pathcalc.library.compare` gives it.
    """
    from pathcalc.report.sections import document

    return document(solution, changes)
