"""Draw the README's picture anew: the demonstration's home page. `python tests/browser/renew_picture.py`."""

from __future__ import annotations

import sys
import tempfile
from pathlib import Path

from demonstration import ARGUMENTS, ROOT, build, chromium
from playwright.sync_api import sync_playwright

PICTURE = Path(__file__).parent / "home.png"
WIDTH, HEIGHT = 1280, 1240
MOST_BYTES = 250_000


def renew() -> int:
    """Build, look, write; how many bytes the picture has."""
    path = chromium()
    if path is None:
        sys.exit("There is no Chromium on this machine.")
    with tempfile.TemporaryDirectory() as folder, sync_playwright() as playwright:
        build(ROOT, Path(folder))
        browser = playwright.chromium.launch(executable_path=path, args=list(ARGUMENTS))
        page = browser.new_page(viewport={"width": WIDTH, "height": HEIGHT}, color_scheme="light")
        page.goto((Path(folder) / "index.html").as_uri())
        page.wait_for_function("document.fonts.status === 'loaded'")
        page.screenshot(path=PICTURE)
        browser.close()
    return PICTURE.stat().st_size


if __name__ == "__main__":
    size = renew()
    print(f"{PICTURE.relative_to(ROOT)}: {WIDTH} by {HEIGHT}, {size} bytes")
    if size > MOST_BYTES:
        sys.exit(f"That is more than {MOST_BYTES} bytes.")
