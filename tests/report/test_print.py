"""The printed page: sheets, rows, heads and headings, on A4 and Letter."""

from __future__ import annotations

from typing import Any

import pytest
from pages import page
from sheets import HEADS, LEADS, ROWS, cut_rows, drawn, headless, orphans, sheets, sizes, squeezed

SIZES = {"A4": (595, 842), "Letter": (612, 792)}
"""Points: 210 mm x 297 mm (ISO 216), 8.5 in x 11 in (ANSI/ASME Y14.1), at 72 to the inch."""

COUNTS = {"cold-store-chiller": (15, 38), "us-units-booster": (15, 38), "hostile": (9, 26), "index": (2, 8)}


def printed(browser: Any, html: str, paper: str) -> tuple[bytes, list[dict[str, Any]], list[str], list[str]]:
    tab = browser.new_page()
    tab.set_content(html)
    data = tab.pdf(format=paper, prefer_css_page_size=True)
    tables, heads = tab.evaluate(ROWS), tab.evaluate(HEADS)
    leads = tab.evaluate(LEADS)
    tab.close()
    return data, tables, heads, leads


@pytest.mark.parametrize(
    ("name", "paper"),
    [
        ("cold-store-chiller", "A4"),
        ("us-units-booster", "Letter"),
        ("hostile", "A4"),
        ("index", "Letter"),
    ],
)
def test_sheets_are_whole(browser: Any, name: str, paper: str) -> None:
    data, tables, heads, leads = printed(browser, page(name), paper)
    found = sheets(data)
    assert all(abs(w - SIZES[paper][0]) <= 1 and abs(h - SIZES[paper][1]) <= 1 for w, h in sizes(data))
    low, high = COUNTS[name]
    assert low <= len(found) <= high
    for n, sheet in enumerate(found, 1):
        assert f"sheet{n}of{len(found)}" in sheet
    assert min(drawn(data)[:-1]) > 40, "a sheet is all but empty"
    assert sum(len(table["rows"]) for table in tables) > 4
    assert cut_rows(tables, found) == []
    assert headless(tables, found) == []
    assert orphans(heads, found) == []
    assert [lead for lead in leads if not any(squeezed(lead) in sheet for sheet in found)] == []


def test_number_and_revision_run_on_every_sheet(browser: Any) -> None:
    data, *_ = printed(browser, page("cold-store-chiller"), "A4")
    assert all(sheet.startswith("vgw900c13revisionb") for sheet in sheets(data))


LONG = "".join(
    f"<tr><th scope='row'>row {n}</th><td>{' '.join(f'w{n}x{k}' for k in range(150))}</td></tr>" for n in range(40)
)


@pytest.mark.parametrize(("undone", "whole"), [("", True), ("tr { break-inside: auto !important; }", False)])
def test_cut_rows_are_found(browser: Any, undone: str, whole: bool) -> None:
    """What the tests above ask can fail: without the rule that keeps rows whole, some are cut and are found."""
    table = f"<table><thead><tr><th scope='col'>No head</th></tr></thead><tbody>{LONG}</tbody></table>"
    style = page("index").split("<style>")[1].split("</style>")[0]
    html = f"<!doctype html><html lang='en'><title>x</title><style>{style}{undone}</style><main>{table}</main></html>"
    data, tables, *_ = printed(browser, html, "A4")
    assert (cut_rows(tables, sheets(data)) == []) is whole


def test_lost_heads_are_found(browser: Any) -> None:
    table = f"<table><thead><tr><th scope='col'>No head</th></tr></thead><tbody>{LONG}</tbody></table>"
    html = f"<!doctype html><html lang='en'><title>x</title><style>thead {{ display: table-row-group; }}</style>{table}"
    data, tables, *_ = printed(browser, html, "A4")
    assert headless(tables, sheets(data))


@pytest.mark.parametrize("name", ["cold-store-chiller", "us-units-booster"])
def test_tables_and_figures_that_fit_are_whole(browser: Any, name: str) -> None:
    """Every table of up to 24 rows stands with its caption on one sheet; so does every figure's caption."""
    data, *_ = printed(browser, page(name), "A4")
    found = sheets(data)
    tab = browser.new_page()
    tab.set_content(page(name))
    short = tab.evaluate(
        "[...document.querySelectorAll('.short table')].map(t => [t.caption.textContent,"
        " [...t.tBodies[0].rows].map(r => [...r.cells].filter(c => !c.querySelector('math'))"
        ".map(c => { const k = c.cloneNode(true); k.querySelectorAll('.pad').forEach(e => e.remove());"
        " return k.textContent; }))])"
    )
    tall = tab.evaluate(
        "[...document.querySelectorAll('figure')].map(f => f.getBoundingClientRect().height"
        " / f.getBoundingClientRect().width)"
    )
    tab.close()
    assert len(short) > 5
    for caption, rows in short:
        cells = [squeezed(cell) for row in rows for cell in row]
        assert any(squeezed(caption) in sheet and all(c in sheet for c in cells) for sheet in found), caption
    assert tall
    assert max(tall) < 263 / 180  # of the sheet's height to its width, less the margins
