"""One browser for all tests here, and the demonstration with one more entry, which has faults and long lines in it."""

from __future__ import annotations

import shutil
from collections.abc import Iterator
from pathlib import Path
from typing import TYPE_CHECKING

import pytest
from demonstration import ARGUMENTS, ROOT, build, chromium

if TYPE_CHECKING:
    from playwright import sync_api as api

FAULTY = """---
title: An entry with faults in it
date: 2026-12-01
---

A word that stands nowhere else: heliotrope.

```yaml reading
at: 50,1 MHz
note: a long line that goes on and on, as notes do that were written late in the evening with nobody to shorten them
results:
  gain: 12 dBm
  noise_flor: -120 dBm
```

```python
first_line = "code of the reader's own, with a line that is far too long for any telephone held upright, and then some"
```
"""


@pytest.fixture(scope="session")
def browser() -> Iterator[api.Browser]:
    # In here: a test run without browser tests needs no playwright.
    playwright_api = pytest.importorskip("playwright.sync_api", reason="playwright is not installed")
    path = chromium()
    if path is None:
        pytest.skip("there is no Chromium on this machine")
    with playwright_api.sync_playwright() as playwright:
        started = playwright.chromium.launch(executable_path=path, args=list(ARGUMENTS))
        yield started
        started.close()


@pytest.fixture(scope="session")
def site(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("browser")
    shutil.copytree(ROOT / "entries", folder / "entries")
    shutil.copy(ROOT / "mkdocs.yml", folder)
    (folder / "entries" / "2026-12-01-faults.md").write_text(FAULTY, encoding="utf-8")
    build(folder, folder / "site")
    return folder / "site"


class Visitor:
    """Somebody who opens pages of the site from the disk, and notes what the browser asks for and complains of."""

    def __init__(self, browser: api.Browser, site: Path, **settings: object) -> None:
        self.site = site
        self.context = browser.new_context(**settings)
        self.page = self.context.new_page()
        self.asked: list[str] = []
        self.complaints: list[str] = []
        self.page.on("request", lambda request: self.asked.append(request.url))
        self.page.on("pageerror", lambda error: self.complaints.append(f"{self.page.url}: {error}"))
        self.page.on("console", self._heard)

    def _heard(self, message: api.ConsoleMessage) -> None:
        if message.type in ("error", "warning"):
            self.complaints.append(f"{self.page.url}: {message.text}")

    def open(self, path: str) -> api.Page:
        self.page.goto((self.site / path).as_uri())
        return self.page

    @property
    def paths(self) -> list[str]:
        """Every page of the site; the one for addresses that do not exist is a server's matter."""
        found = sorted(path.relative_to(self.site).as_posix() for path in self.site.rglob("*.html"))
        return [path for path in found if path != "404.html"]


SIZES = {"desk": {"width": 1280, "height": 900}, "phone": {"width": 390, "height": 844}}


@pytest.fixture
def desk(browser: api.Browser, site: Path) -> Iterator[Visitor]:
    visitor = Visitor(browser, site, viewport=SIZES["desk"], color_scheme="light")
    yield visitor
    visitor.context.close()


@pytest.fixture
def phone(browser: api.Browser, site: Path) -> Iterator[Visitor]:
    visitor = Visitor(browser, site, viewport=SIZES["phone"], color_scheme="light", has_touch=True)
    yield visitor
    visitor.context.close()


@pytest.fixture(params=["light", "dark"])
def in_scheme(browser: api.Browser, site: Path, request: pytest.FixtureRequest) -> Iterator[Visitor]:
    visitor = Visitor(browser, site, viewport=SIZES["desk"], color_scheme=request.param)
    yield visitor
    visitor.context.close()
