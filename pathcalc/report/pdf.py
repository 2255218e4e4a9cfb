"""The HTML page as PDF, printed by a browser; the same page and browser give the same bytes."""

from __future__ import annotations

import hashlib
import re

from pathcalc.report import browser

PAPERS = {"a4": "A4", "letter": "Letter"}
"""Sheets the PDF can have, with their names in a style sheet (CSS Paged Media Module Level 3, section 7)."""

_DATE = re.compile(rb"/(?:CreationDate|ModDate) \(D:[0-9]{4}[^()\\]{0,30}\)")
_ID = re.compile(rb"/ID ?\[ ?<([0-9A-Fa-f]+)> ?<([0-9A-Fa-f]+)> ?\]")
_ELSEWHERE = re.compile(r'(<a\b[^>]*?) href="(?!#|https?:|mailto:)[^"]*"')
_INFO = 8192


def render(html: str, paper: str = "a4", program: str | None = None) -> bytes:
    """The page as PDF, links to files beside it left out. Raises UsageError where no browser can do it."""
    size = f"<style>@page {{ size: {PAPERS[paper]}; }}</style>\n</head>"
    page = _ELSEWHERE.sub(r"\1", html).replace("</head>", size, 1)
    return timeless(browser.print_page(program or browser.find(), page))


def timeless(data: bytes) -> bytes:
    """The PDF without the time it was made and with an identifier that follows from the rest; no byte moves."""
    head = _DATE.sub(lambda found: b" " * len(found[0]), data[:_INFO])
    body, tail = data[_INFO:-_INFO], data[max(_INFO, len(data) - _INFO) :]
    digest = hashlib.sha256(head + body + _ID.sub(b"", tail)).hexdigest().upper().encode()

    def fixed(found: re.Match[bytes]) -> bytes:
        return found[0].replace(found[1], digest[: len(found[1])]).replace(found[2], digest[: len(found[2])])

    return head + body + _ID.sub(fixed, tail)
