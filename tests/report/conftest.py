"""A headless browser for the report tests, and the made-up solutions as pages."""

from __future__ import annotations

import os
import shutil
from collections.abc import Iterator
from typing import Any

import pytest


@pytest.fixture(scope="session")
def browser() -> Iterator[Any]:
    """The system's Chromium; a missing browser fails the test that asked for it."""
    from playwright.sync_api import sync_playwright

    path = os.environ.get("PATHCALC_TEST_BROWSER") or shutil.which("chromium") or shutil.which("chromium-browser")
    assert path, "the report tests need Chromium: install it, or name it in PATHCALC_TEST_BROWSER"
    with sync_playwright() as play:
        found = play.chromium.launch(executable_path=path, args=["--no-sandbox", "--disable-gpu"])
        yield found
        found.close()
