"""The browser that prints a page: one of the Chromium family, installed or named, run without a window or a network."""

from __future__ import annotations

import contextlib
import os
import shutil
import signal
import subprocess
import sys
import tempfile
from pathlib import Path

from pathcalc.errors import UsageError

VARIABLE = "PATHCALC_BROWSER"
"""Environment variable that names the browser."""

SECONDS = 120.0
"""How long one page may take; an ordinary one takes about four."""

_NAMES = (
    "chromium",
    "chromium-browser",
    "google-chrome",
    "google-chrome-stable",
    "microsoft-edge",
    "microsoft-edge-stable",
    "chrome",
    "msedge",
    "/Applications/Google Chrome.app/Contents/MacOS/Google Chrome",
    "/Applications/Microsoft Edge.app/Contents/MacOS/Microsoft Edge",
    "/Applications/Chromium.app/Contents/MacOS/Chromium",
    r"C:\Program Files\Google\Chrome\Application\chrome.exe",
    r"C:\Program Files (x86)\Microsoft\Edge\Application\msedge.exe",
)
_OPTIONS = (
    "--headless",
    "--disable-gpu",
    "--disable-extensions",
    "--disable-sync",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-default-apps",
    "--disable-dev-shm-usage",
    "--no-first-run",
    "--no-default-browser-check",
    "--no-pings",
    "--lang=en-US",
    "--force-color-profile=srgb",
    "--host-resolver-rules=MAP * ~NOTFOUND",
    "--no-pdf-header-footer",
    "--print-to-pdf-no-header",
)


def find() -> str:
    """Path of the browser; raises UsageError, with what would do, where there is none."""
    named = os.environ.get(VARIABLE)
    if named:
        path = shutil.which(named)
        if path is None:
            raise UsageError(f"{VARIABLE} names {named!r}, which is no program that can be run")
        return path
    for name in _NAMES:
        path = shutil.which(name)
        if path is not None:
            return path
    raise UsageError(
        "pdf needs a browser of the Chromium family, and none was found; install the package chromium of your system, "
        f"or name a Chromium, Chrome or Edge in {VARIABLE}, or ask for html and print that"
    )


def print_page(browser: str, html: str) -> bytes:
    """The page as PDF. Raises UsageError where the browser fails, gives no PDF, or takes more than ``SECONDS``."""
    with tempfile.TemporaryDirectory(prefix="pathcalc-", ignore_cleanup_errors=True) as name:
        folder = Path(name)
        page = folder / "report.html"
        page.write_bytes(html.encode())
        bare = hasattr(os, "geteuid") and os.geteuid() == 0
        said = _run(browser, page, sandbox=not bare)
        if not _whole(_target(page)) and not bare and "sandbox" in said:
            said = _run(browser, page, sandbox=False)
        data = _whole(_target(page))
        if not data:
            raise UsageError(
                f"the browser {browser} wrote no PDF{said and f' ({said})'}; name another one in {VARIABLE}, or, if it "
                "may not read the temporary folder, set TMPDIR to a folder of your own"
            )
        return data


def _target(page: Path) -> Path:
    return page.with_suffix(".pdf")


def _whole(path: Path) -> bytes:
    """The PDF if it is there to its last line, else nothing."""
    try:
        data = path.read_bytes()
    except OSError:
        return b""
    return data if data.startswith(b"%PDF-") and data[-32:].rstrip().endswith(b"%%EOF") else b""


def _run(browser: str, page: Path, sandbox: bool) -> str:
    """Run the browser on the page once; what it said, as far as it tells why there is no PDF."""
    log = page.with_name("browser.log")
    call = [
        browser,
        *_OPTIONS,
        *([] if sandbox else ["--no-sandbox"]),
        f"--user-data-dir={page.with_name('profile')}",
        f"--print-to-pdf={_target(page)}",
        page.as_uri(),
    ]
    with log.open("wb") as stream:
        try:
            process = subprocess.Popen(
                call,
                stdin=subprocess.DEVNULL,
                stdout=subprocess.DEVNULL,
                stderr=stream,
                cwd=page.parent,
                env=_surroundings(page.parent),
                start_new_session=True,
            )
        except OSError as error:
            raise UsageError(f"the browser {browser} cannot be started: {error.strerror or error}") from None
        try:
            code = process.wait(SECONDS)
        except subprocess.TimeoutExpired:
            raise UsageError(
                f"the browser {browser} took more than {SECONDS:g} s and was ended; name another one in {VARIABLE}"
            ) from None
        finally:
            _end(process)
    text = log.read_text(encoding="utf-8", errors="replace")
    if "sandbox" in text:
        return "it could not set up its sandbox"
    return f"exit code {code}" if code else ""


def _surroundings(folder: Path) -> dict[str, str]:
    """The environment, with the browser's own temporary files where they go with ours.

    The browser makes a socket there, whose path the system limits to about a hundred characters.
    """
    short = folder if len(str(folder)) <= 50 else Path("/tmp")
    return {**os.environ, "TMPDIR": str(short)} if short.is_dir() else dict(os.environ)


def _end(process: subprocess.Popen[bytes]) -> None:
    """End the browser and what it started; nothing happens where it has ended by itself."""
    if sys.platform != "win32":
        with contextlib.suppress(OSError):
            os.killpg(process.pid, signal.SIGKILL)
    elif process.poll() is None:
        process.kill()
    with contextlib.suppress(subprocess.TimeoutExpired):
        process.wait(10.0)
