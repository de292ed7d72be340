"""The demonstration's whole site: its links, what a browser would fetch, its bytes, and what is left untouched."""

from __future__ import annotations

import re
import shutil
from collections.abc import Iterator
from functools import cache
from pathlib import Path
from urllib.parse import unquote, urlsplit

import pytest
from building import FIRST, SECOND, Element, Project, build_site, read_page

from logbook.cli import main

ROOT = Path(__file__).parents[2]


@cache
def page(file: Path) -> Element:
    return read_page(file)


@cache
def ids(file: Path) -> frozenset[str]:
    every = list(page(file).walk())
    return frozenset(e.attributes[key] for e in every for key in ("id", "name") if key in e.attributes)


def pages(site: Path) -> list[Path]:
    found = sorted(site.rglob("*.html"))
    assert len(found) > 20
    return found


def test_every_link_and_every_fragment_leads_somewhere(demonstration: Path) -> None:
    dead = []
    checked = 0
    for file in pages(demonstration):
        if file.name == "404.html":  # its addresses start at the server's root
            continue
        for element in page(file).walk():
            for key in ("href", "src"):
                address = element.attributes.get(key, "")
                parts = urlsplit(address)
                if not address or parts.scheme or parts.netloc:
                    continue
                checked += 1
                target = (file.parent / unquote(parts.path)).resolve() if parts.path else file
                target = target / "index.html" if target.is_dir() else target
                named = unquote(parts.fragment) if target.suffix == ".html" else ""
                if not target.is_file() or (named and named not in ids(target)):
                    dead.append(f"{file.name}: {address}")
    assert checked > 500
    assert dead == []


def test_no_id_stands_twice_on_a_page(demonstration: Path) -> None:
    for file in pages(demonstration):
        found = [e.attributes["id"] for e in page(file).walk() if "id" in e.attributes]
        assert sorted(found) == sorted(set(found)), file.name


_LOADS = {("link", "href"), ("script", "src"), ("img", "src"), ("iframe", "src"), ("source", "src"), ("object", "data")}
# A link of these sorts tells the reader or a search engine something; a browser fetches nothing for it.
_NOT_LOADED = {"canonical", "next", "prev", "author", "license", "help"}


def loaded(file: Path) -> Iterator[str]:
    """Every address that a browser loads by itself to show this page."""
    for element in page(file).walk():
        for key, value in element.attributes.items():
            loads = (element.name, key) in _LOADS and element.attributes.get("rel") not in _NOT_LOADED
            if loads or key in ("srcset", "poster", "background"):
                yield value
            elif key == "style" and "url(" in value:
                yield from re.findall(r"url\(\s*['\"]?([^'\")]+)", value)
        if element.name == "style":
            text = "".join(each for each in element.inside if isinstance(each, str))
            yield from re.findall(r"url\(\s*['\"]?([^'\")]+)|@import\s+['\"]([^'\"]+)", text)


def test_a_browser_fetches_nothing_from_elsewhere(demonstration: Path) -> None:
    away = re.compile(r"(?:[a-z]+:)?//", re.I)
    assert [a for file in pages(demonstration) for a in loaded(file) if away.match(a)] == []
    for sheet in sorted(demonstration.rglob("*.css")):
        text = sheet.read_text(encoding="utf-8")
        addresses = re.findall(r"url\(\s*['\"]?([^'\")]+)", text) + re.findall(r"@import\s+['\"]([^'\"]+)", text)
        assert [a for a in addresses if away.match(a)] == [], sheet.name


def test_every_page_has_the_stylesheet_and_the_site_holds_it(demonstration: Path) -> None:
    sheet = demonstration / "assets" / "logbook" / "logbook.css"
    for file in pages(demonstration):
        if file.name == "404.html":
            continue
        links = [e.attributes.get("href", "") for e in page(file).all("link", rel="stylesheet")]
        assert sheet in [(file.parent / link).resolve() for link in links], file.name
    style = sheet.read_text(encoding="utf-8")
    used = {
        name
        for file in pages(demonstration)
        for element in page(file).walk()
        for name in element.attributes.get("class", "").split()
        if name.startswith("lb-")
    }
    assert {"lb-verdict", "lb-scroll", "lb-chain", "lb-cards", "lb-tree", "lb-fold", "lb-note"} <= used
    assert used - set(re.findall(r"\.(lb-[\w-]+)", style)) <= _NEED_NO_LOOK


# Sorts of stages are told apart by their symbols, and these words are as they are.
_NEED_NO_LOOK = {
    *(f"lb-{sort}" for sort in ("amplifier", "filter", "pad", "mixer", "detector", "attenuator", "stage")),
    *("lb-items", "lb-note-plain", "lb-picture", "lb-diagram", "lb-port"),
}


def test_the_results_are_the_bytes_that_check_writes(
    demonstration: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.chdir(ROOT)
    file = tmp_path / "results.json"
    main(["check", "--results", str(file)])
    capsys.readouterr()
    assert (demonstration / "data" / "results.json").read_bytes() == file.read_bytes()


def files(folder: Path) -> dict[str, bytes]:
    return {path.relative_to(folder).as_posix(): path.read_bytes() for path in folder.rglob("*") if path.is_file()}


@pytest.fixture
def copy(tmp_path: Path) -> Path:
    """The demonstration's sources at another place; nothing is cached there."""
    folder = tmp_path / "copy"
    shutil.copytree(ROOT / "entries", folder / "entries")
    shutil.copy(ROOT / "mkdocs.yml", folder)
    return folder


def test_two_builds_give_the_same_bytes_plots_drawn_anew(
    copy: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    # MkDocs dates the site map and the archive of it by this.
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "1770000000")
    for name in ("one", "two"):
        build_site(copy / "mkdocs.yml", tmp_path / name)
        shutil.rmtree(copy / ".cache")
    one, two = files(tmp_path / "one"), files(tmp_path / "two")
    assert one.keys() == two.keys()
    assert [path for path, data in one.items() if two[path] != data] == []
    assert sum(data.count(b'class="lb-plot"') for path, data in one.items() if path.endswith(".html")) > 20


def test_a_build_with_cached_plots_gives_the_same_pages(copy: Path, tmp_path: Path) -> None:
    for name in ("drawn", "cached"):
        build_site(copy / "mkdocs.yml", tmp_path / name)
    drawn, cached = files(tmp_path / "drawn"), files(tmp_path / "cached")
    assert [path for path in drawn if path.endswith((".html", ".json")) and cached[path] != drawn[path]] == []


def test_sources_are_never_written(project: Project) -> None:
    project.write("2026-01-10-first.md", FIRST)
    project.write("2026-01-11-numbers.md", SECOND.replace("2.4(1) dB", "2.4(1) dBm"))
    project.write("2026-01-12-old.md", b"---\ntitle: Old\ndate: 2026-01-12\n---\n\n\xf6\n")
    project.configure({"logbook": {"fail_on": []}})

    def state() -> dict[str, tuple[int, bytes]]:
        every = [path for path in project.entries.rglob("*") if path.is_file()]
        return {path.name: (path.stat().st_mtime_ns, path.read_bytes()) for path in every}

    before = state()
    project.build()
    assert state() == before
    assert {path.name for path in project.folder.iterdir()} == {"mkdocs.yml", "entries", "theme", "site", ".cache"}


def test_a_cache_that_cannot_be_written_is_done_without(project: Project) -> None:
    project.write("2026-01-10-first.md", FIRST)
    (project.folder / ".cache").write_text("a file stands in the way", encoding="utf-8")
    project.build(strict=True)
    assert project.page("2026-01-10-first.html").all("svg", class_="lb-plot")
