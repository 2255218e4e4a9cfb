"""PDF through a browser: the same bytes, or one plain sentence and nothing written."""

from __future__ import annotations

import os
import subprocess
import sys
import textwrap
import time
from pathlib import Path

import pytest
from builders import throttled
from sheets import sizes

from pathcalc.errors import UsageError
from pathcalc.report import browser, pdf, render_html, render_pdf, write_reports

ROOT = Path(__file__).resolve().parents[2]
HERE = Path(__file__).resolve().parent


@pytest.fixture(autouse=True)
def named(monkeypatch: pytest.MonkeyPatch) -> None:
    """The browser of the tests is the browser of the program."""
    path = os.environ.get("PATHCALC_TEST_BROWSER")
    if path:
        monkeypatch.setenv(browser.VARIABLE, path)


def program(tmp_path: Path, body: str) -> str:
    """A program that stands for a browser; ``$target`` is where the PDF is wanted."""
    path = tmp_path / "browser"
    lines = 'for a in "$@"; do case "$a" in --print-to-pdf=*) target="${a#*=}";; esac; done\n'
    path.write_text(f"#!/bin/sh\n{lines}{textwrap.dedent(body)}\n")
    path.chmod(0o755)
    return str(path)


def test_same_bytes_in_another_folder_locale_and_process(tmp_path: Path) -> None:
    code = (
        "import sys; sys.path[:0] = sys.argv[1:]; import builders, pathcalc.report as r; "
        "sys.stdout.buffer.write(r.render_pdf(builders.throttled()))"
    )
    elsewhere = tmp_path / "an other folder"
    elsewhere.mkdir()
    change = {"PYTHONHASHSEED": "7", "LC_ALL": "C", "TZ": "Asia/Tokyo", "TMPDIR": str(elsewhere)}
    done = subprocess.run(
        [sys.executable, "-c", code, str(ROOT), str(HERE)],
        capture_output=True,
        check=True,
        cwd=elsewhere,
        env={**os.environ, **change},
    )
    first = render_pdf(throttled())
    assert done.stdout == first
    assert b"/CreationDate" not in first
    assert b"/ModDate" not in first
    assert str(elsewhere).encode() not in done.stdout
    assert b"file:" not in first
    assert list(elsewhere.iterdir()) == []
    assert sizes(first) == {(595, 842)}


def test_letter_and_links_to_files_beside_it() -> None:
    html = render_html(throttled()).replace("<main>", '<main><p><a class="x" href="other.html">beside</a></p>')
    data = pdf.render(html, "letter")
    assert sizes(data) == {(612, 792)}
    assert b"other.html" not in data


def test_times_and_identifiers_go_and_no_byte_moves() -> None:
    def made(date: bytes, mark: bytes) -> bytes:
        body = b"x" * 20_000 + b"/CreationDate (D:20200101000000Z)" + b"y" * 20_000
        head = (
            b"%PDF-1.4\n/Title (a /ModDate \\(D:2020\\))\n/CreationDate (D:" + date + b")\n/ModDate (D:" + date + b")\n"
        )
        return head + body + b"trailer /ID [<" + mark + b"> <" + mark + b">]\n%%EOF\n"

    one = made(b"20260302101112+00'00'", b"00112233445566778899AABBCCDDEEFF")
    two = made(b"20270403111213+00'00'", b"FF112233445566778899AABBCCDDEE00")
    assert pdf.timeless(one) == pdf.timeless(two)
    assert len(pdf.timeless(one)) == len(one)
    assert pdf.timeless(one).count(b"/CreationDate (D:20200101000000Z)") == 1
    assert b"/Title (a /ModDate \\(D:2020\\))" in pdf.timeless(one)
    assert pdf.timeless(one.replace(b"yy", b"zz", 1)) != pdf.timeless(one)
    for length in (0, 10, 8_192, 10_000, 16_384, 16_400):
        assert len(pdf.timeless(b"a" * length)) == length


def test_no_browser(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    monkeypatch.delenv(browser.VARIABLE, raising=False)
    monkeypatch.setattr(browser, "_NAMES", ("no-such-browser-here",))
    with pytest.raises(UsageError, match=f"none was found; install .* or name a .* in {browser.VARIABLE}"):
        write_reports(throttled(), {"html", "pdf"}, tmp_path / "out", "r")
    assert not (tmp_path / "out").exists()
    monkeypatch.setenv(browser.VARIABLE, "/no/such/program")
    with pytest.raises(UsageError, match="'/no/such/program', which is no program that can be run"):
        browser.find()


@pytest.mark.parametrize(
    ("body", "message"),
    [
        ("exit 3", "wrote no PDF.*exit code 3"),
        ("printf '%%PDF-1.4 half' > \"$target\"", "wrote no PDF"),
        ("echo 'No usable sandbox!' >&2; exit 1", "wrote no PDF.*could not set up its sandbox"),
    ],
)
def test_browser_that_fails(monkeypatch: pytest.MonkeyPatch, tmp_path: Path, body: str, message: str) -> None:
    monkeypatch.setenv(browser.VARIABLE, program(tmp_path, body))
    out = tmp_path / "out"
    with pytest.raises(UsageError, match=message):
        write_reports(throttled(), {"html", "pdf"}, out, "r")
    assert not out.exists()


def test_browser_that_never_ends(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    """It is ended with all it started."""
    mark = tmp_path / "still-here"
    monkeypatch.setattr(browser, "SECONDS", 0.5)
    path = program(tmp_path, f"(sleep 2; touch '{mark}') & sleep 60")
    begun = time.monotonic()
    with pytest.raises(UsageError, match=r"took more than 0\.5 s and was ended"):
        browser.print_page(path, "<p>x</p>")
    assert time.monotonic() - begun < 10
    time.sleep(2.2)
    assert not mark.exists()


def test_browser_gets_no_network_and_no_profile_of_the_user(tmp_path: Path) -> None:
    log = tmp_path / "log"
    path = program(tmp_path, f'printf "%s\\n" "$@" > "{log}"; printf "%%PDF-1.4\\n%%%%EOF\\n" > "$target"')
    assert browser.print_page(path, "<p>x</p>").startswith(b"%PDF-1.4")
    words = log.read_text().splitlines()
    assert "--headless" in words
    assert "--host-resolver-rules=MAP * ~NOTFOUND" in words
    assert words[-1].startswith("file:///")
    assert any(word.startswith("--user-data-dir=") and "pathcalc-" in word for word in words)
