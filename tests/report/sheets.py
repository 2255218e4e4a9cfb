"""A printed page read back: which text stands on which sheet."""

from __future__ import annotations

from typing import Any

import pypdfium2

ROWS = """
() => {
  const text = cell => {
    const copy = cell.cloneNode(true);
    copy.querySelectorAll('.pad').forEach(e => e.remove());
    return copy.textContent;
  };
  return [...document.querySelectorAll('table')].map(table => ({
    head: table.tHead ? [...table.tHead.rows[0].cells].filter(c => !c.querySelector('math, var')).map(text) : [],
    rows: [...table.tBodies].flatMap(b => [...b.rows])
      .map(row => [...row.cells].filter(c => !c.querySelector('math')).map(text)),
  }));
}
"""
LEADS = "() => [...document.querySelectorAll('h2 + p, h3 + p')].map(e => e.textContent)"
HEADS = "() => [...document.querySelectorAll('h2, h3, caption')].map(e => e.textContent)"


def squeezed(text: str) -> str:
    """Letters and digits alone: how a PDF breaks lines, hyphens and spaces does not matter."""
    return "".join(c for c in text if c.isalnum()).casefold()


def sheets(data: bytes) -> list[str]:
    """The squeezed text of every sheet, in the order it was drawn."""
    document = pypdfium2.PdfDocument(data)
    return [squeezed(sheet.get_textpage().get_text_range()) for sheet in document]


def sizes(data: bytes) -> set[tuple[int, int]]:
    """Width and height of the sheets, in points."""
    return {(round(w), round(h)) for w, h in (sheet.get_size() for sheet in pypdfium2.PdfDocument(data))}


def drawn(data: bytes) -> list[int]:
    """How many pieces of text, lines and areas every sheet has."""
    return [sum(1 for _ in sheet.get_objects()) for sheet in pypdfium2.PdfDocument(data)]


def cut_rows(tables: list[dict[str, Any]], found: list[str]) -> list[str]:
    """The rows of which no sheet holds every cell whole."""
    cut = []
    for table in tables:
        for row in table["rows"]:
            cells = [squeezed(cell) for cell in row]
            if not any(all(cell in sheet for cell in cells) for sheet in found):
                cut.append(" | ".join(row)[:120])
    return cut


def headless(tables: list[dict[str, Any]], found: list[str]) -> list[str]:
    """Heads missing on a sheet that holds rows of their table; only rows that stand on one sheet alone are asked."""
    missing = []
    for table in tables:
        head = [squeezed(cell) for cell in table["head"]]
        for row in table["rows"]:
            cells = [squeezed(cell) for cell in row]
            on = [sheet for sheet in found if all(cell in sheet for cell in cells)]
            if len(on) == 1 and not all(cell in on[0] for cell in head):
                missing.append(f"{table['head']} over {row}"[:160])
    return missing


def orphans(heads: list[str], found: list[str]) -> list[str]:
    """The headings and captions that a sheet ends with; not in the appendix, whose text is the case's own."""
    listing = next(
        (n for n, sheet in enumerate(found) if n and squeezed("Appendix: the case as written") in sheet), None
    )
    own = found if listing is None else found[: listing + 1]
    if listing is not None and squeezed("pathcalc: 1 title") in own[-1]:
        own = own[:-1]
    return [head for head in heads if any(sheet.endswith(squeezed(head)) for sheet in own if squeezed(head))]
