"""Tables and lines for a terminal, or for a file: no digit is ever cut off or wrapped."""

from __future__ import annotations

import io
import sys
from collections.abc import Sequence
from typing import TYPE_CHECKING

from pathcalc.cli.talk import coloured

if TYPE_CHECKING:
    from rich.console import Console

OUTCOME_STYLES = {"pass": "green", "FAIL": "bold red"}
WIDTH_OF_A_FILE = 120


def plain(text: str) -> str:
    """Text of the report's numbers as it can be copied: ASCII minus, no grouping, plain spaces."""
    return text.replace("\u2212", "-").replace("\u202f", "").replace("\u00a0", " ").replace("\u2013", "-")


class Page:
    """Text that grows line by line and table by table."""

    def __init__(self) -> None:
        from rich.console import Console

        colour = coloured(sys.stdout)
        self.buffer = io.StringIO()
        self.console: Console = Console(
            file=self.buffer,
            force_terminal=colour,
            color_system="standard" if colour else None,
            no_color=not colour,
            width=_width(),
            markup=False,
            highlight=False,
            emoji=False,
            legacy_windows=False,
        )

    def line(self, text: str, style: str | None = None) -> None:
        """A line of running text; a terminal wraps it at words, a file keeps it whole."""
        self.console.print(plain(text), style=style, soft_wrap=not sys.stdout.isatty())

    def title(self, text: str) -> None:
        """The first line."""
        self.line(text, style="bold")

    def heading(self, text: str) -> None:
        """A line above a table or a list."""
        self.line(text, style="bold")

    def table(
        self,
        heading: str,
        heads: Sequence[str],
        rows: Sequence[Sequence[str]],
        *,
        words: Sequence[int] = (0,),
        last_apart: bool = False,
    ) -> None:
        """A table; the columns ``words`` are set to the left, all others are numbers lined up at their point."""
        from rich import box
        from rich.measure import Measurement
        from rich.table import Table
        from rich.text import Text

        table = Table(box=box.SIMPLE_HEAD, pad_edge=False, show_edge=False, header_style="bold")
        columns = [[plain(str(row[i])) for row in rows] for i in range(len(heads))]
        for i, head in enumerate(heads):
            left = i in words
            table.add_column(plain(head), justify="left" if left else "right", no_wrap=True, vertical="bottom")
            columns[i] = columns[i] if left else _aligned(columns[i])
        for k, row in enumerate(zip(*columns, strict=True)):
            cells = [Text(cell, style=OUTCOME_STYLES.get(cell.strip(), "")) for cell in row]
            table.add_row(*cells, end_section=last_apart and k == len(rows) - 2)
        self.line("")
        if heading:
            self.heading(heading)
        needed = Measurement.get(self.console, self.console.options.update(width=10_000), table).maximum
        usual = self.console.width
        self.console.width = max(needed, usual)  # a narrow terminal wraps lines; the library would cut digits off
        self.console.print(table, crop=False)
        self.console.width = usual

    def text(self) -> str:
        """All of it, without blanks at line ends."""
        return "".join(f"{line.rstrip()}\n" for line in self.buffer.getvalue().splitlines())


def _width() -> int:
    if not sys.stdout.isatty():
        return WIDTH_OF_A_FILE
    import shutil

    return max(40, shutil.get_terminal_size((WIDTH_OF_A_FILE, 40)).columns)


def _aligned(cells: Sequence[str]) -> list[str]:
    """Numbers of one column lined up at the decimal point, a unit or a power of ten after it."""
    if any(" " in cell or "×" in cell for cell in cells):
        return list(cells)
    tails = [cell[cell.index(".") :] if "." in cell else "" for cell in cells]
    longest = max(map(len, tails), default=0)
    return [cell + " " * (longest - len(tail)) for cell, tail in zip(cells, tails, strict=True)]
