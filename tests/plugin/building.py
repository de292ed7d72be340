"""Sites built in this process, most of them with a theme of a few lines, which takes a hundredth of Material's time."""

from __future__ import annotations

import json
from collections.abc import Iterator
from dataclasses import dataclass
from html.parser import HTMLParser
from pathlib import Path
from typing import Any

from mkdocs.commands.build import build
from mkdocs.config import load_config
from mkdocs.config.defaults import MkDocsConfig

MAIN = """<!DOCTYPE html>
<html lang="en"><head><title>{{ page.title }}</title>
{%- for path in config.extra_css %}<link rel="stylesheet" href="{{ path | url }}">{% endfor %}</head>
<body><nav>{% for item in nav %}{{ item }}{% endfor %}</nav><main>{{ page.content }}</main></body></html>
"""

FRONT = "---\ntitle: {title}\ndate: {date}\n{more}---\n\n"

CHAIN = """```yaml chain
chain: rx
signal: 50.1 MHz
bandwidth: 10 kHz
stages:
  - {name: lna, gain: 18 ± 0.5 dB, nf: 1.1 ± 0.2 dB, oip3: 24 dBm}
  - {name: mixer, gain: -6.5 dB, nf: 7 dB, iip3: 13 dBm, lo: 71.5 MHz}
```
"""

READING = """```yaml reading
at: 50.1 MHz
results:
  nf: 2.4(1) dB
```
"""

FIRST = FRONT.format(title="First light", date="2026-01-10", more="revision: A\n") + f"Words about the box.\n\n{CHAIN}"
SECOND = FRONT.format(title="Numbers", date="2026-01-11", more="") + f"Words about readings.\n\n{READING}"


@dataclass
class Project:
    """A folder with a site in it."""

    folder: Path
    plugins: tuple[Any, ...] = ("logbook",)
    material: bool = False

    def __post_init__(self) -> None:
        self.entries.mkdir(parents=True, exist_ok=True)
        (self.folder / "theme").mkdir(exist_ok=True)
        (self.folder / "theme" / "main.html").write_text(MAIN, encoding="utf-8")
        self.configure()

    def configure(self, *plugins: Any) -> None:
        """Write mkdocs.yml, with these plugins when any are given."""
        self.plugins = plugins or self.plugins
        bare = {"name": None, "custom_dir": "theme", "static_templates": []}
        site = {
            "site_name": "Bench",
            "docs_dir": "entries",
            "use_directory_urls": False,
            "theme": {"name": "material", "font": False} if self.material else bare,
            "markdown_extensions": ["tables", {"toc": {"permalink": False}}],
            "plugins": list(self.plugins),
        }
        # JSON is YAML.
        (self.folder / "mkdocs.yml").write_text(json.dumps(site), encoding="utf-8")

    @property
    def entries(self) -> Path:
        return self.folder / "entries"

    @property
    def site(self) -> Path:
        return self.folder / "site"

    def write(self, path: str, content: str | bytes) -> None:
        """A file among the entries."""
        target = self.entries / path
        target.parent.mkdir(parents=True, exist_ok=True)
        target.write_bytes(content.encode("utf-8") if isinstance(content, str) else content)

    def build(self, **settings: Any) -> None:
        """Build as `mkdocs build` does."""
        build_site(self.folder / "mkdocs.yml", self.site, **settings)

    def page(self, path: str) -> Element:
        """A built page's main part."""
        return main_of(self.site / path)


def build_site(file: Path, site: Path, **settings: Any) -> None:
    """One whole build with plugins that are new, in this process."""
    config = fresh_config(file, site, **settings)
    config.plugins.on_startup(command="build", dirty=False)
    build(config)


def fresh_config(file: Path, site: Path, **settings: Any) -> MkDocsConfig:
    """The site's settings, with plugins that remember nothing of builds before."""
    # MkDocs keeps plugins that have `on_startup` for the whole life of a process.
    dict(MkDocsConfig._schema)["plugins"].plugin_cache.clear()  # type: ignore[attr-defined]
    return load_config(str(file), site_dir=str(site), **settings)


class Element:
    """An element of a page: its attributes, and what is in it."""

    def __init__(self, name: str, attributes: dict[str, str]) -> None:
        self.name = name
        self.attributes = attributes
        self.inside: list[Element | str] = []

    @property
    def words(self) -> str:
        """Its text, as a person reads it."""
        return " ".join("".join(self._texts()).split())

    def _texts(self) -> Iterator[str]:
        for each in self.inside:
            if isinstance(each, str):
                yield each
            else:
                yield from each._texts()
                yield " "

    def all(self, name: str = "", **attributes: str) -> list[Element]:
        """Every element within, by its name and attributes; `class_` is one of its classes."""
        return [each for each in self.walk() if each._is(name, attributes)]

    def walk(self) -> Iterator[Element]:
        """Itself and every element within, in order."""
        yield self
        for each in self.inside:
            if isinstance(each, Element):
                yield from each.walk()

    def _is(self, name: str, attributes: dict[str, str]) -> bool:
        if name and self.name != name:
            return False
        wanted = {key.rstrip("_"): value for key, value in attributes.items()}
        return all(
            value in self.attributes.get(key, "").split() if key == "class" else self.attributes.get(key) == value
            for key, value in wanted.items()
        )


_EMPTY = frozenset("area base br col embed hr img input link meta source track wbr".split())  # noqa: SIM905


class _Reader(HTMLParser):
    def __init__(self) -> None:
        super().__init__()
        self.root = Element("", {})
        self.open = [self.root]

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        element = Element(tag, {key: value or "" for key, value in attrs})
        self.open[-1].inside.append(element)
        if tag not in _EMPTY:
            self.open.append(element)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.open[-1].inside.append(Element(tag, {key: value or "" for key, value in attrs}))

    def handle_endtag(self, tag: str) -> None:
        names = [each.name for each in self.open]
        if tag in names:
            del self.open[len(names) - 1 - names[::-1].index(tag) :]

    def handle_data(self, data: str) -> None:
        self.open[-1].inside.append(data)


def read_page(file: Path) -> Element:
    """A built page."""
    reader = _Reader()
    reader.feed(file.read_text(encoding="utf-8"))
    reader.close()
    return reader.root


def main_of(file: Path) -> Element:
    """A built page without what stands around it."""
    root = read_page(file)
    return next(iter(root.all("article") or root.all("main")), root)
