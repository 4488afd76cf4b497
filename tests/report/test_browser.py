"""The page in a real browser, where one is installed: nothing runs wider than a screen."""

from __future__ import annotations

import re
import shutil
import subprocess
from pathlib import Path

import pytest

CHROMIUM = shutil.which("chromium") or shutil.which("chromium-browser") or shutil.which("google-chrome")
MEASURE = """<script>document.addEventListener("DOMContentLoaded", () => {
  const wide = [...document.body.querySelectorAll("*")].filter(
    (e) => !e.closest(".scroll > *") && e.getBoundingClientRect().right > innerWidth + 1);
  const page = document.documentElement.scrollWidth;
  document.title = `measured ${page} of ${innerWidth}, ${wide.length} too wide`;
});</script></body>"""


@pytest.mark.skipif(CHROMIUM is None, reason="no Chromium is installed")
@pytest.mark.parametrize("width", [500, 1280])
def test_page_never_scrolls_sideways(page_text: str, tmp_path: Path, width: int) -> None:
    """Only tables and drawings scroll inside their own frames; the page itself fits the screen."""
    measured = page_text.replace("default-src 'none'; style-src 'unsafe-inline'", "").replace(
        "</body>", MEASURE
    )
    (tmp_path / "report.html").write_text(measured, encoding="utf-8")
    arguments = [
        "--headless",
        "--no-sandbox",
        "--disable-gpu",
        "--disable-quic",
        "--no-first-run",
        "--disable-background-networking",
        "--disable-component-update",
        "--disable-sync",
        f"--user-data-dir={tmp_path / 'profile'}",
        f"--window-size={width},900",
        "--dump-dom",
        (tmp_path / "report.html").as_uri(),
    ]
    dump = subprocess.run([str(CHROMIUM), *arguments], capture_output=True, timeout=120, check=True).stdout
    found = re.search(rb"<title>measured (\d+) of (\d+), (\d+) too wide", dump)
    assert found is not None
    page_width, screen_width, too_wide = (int(each) for each in found.groups())
    assert page_width <= screen_width
    assert too_wide == 0
