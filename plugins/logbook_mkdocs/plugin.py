"""The MkDocs plugin: reads the logbook once before any page, and puts what is computed into the pages at the end."""

from __future__ import annotations

import gc
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from functools import partial
from importlib.resources import files as package_files
from pathlib import Path
from threading import Lock, Thread
from typing import Literal

from jinja2 import Environment, FileSystemBytecodeCache
from mkdocs.config.defaults import MkDocsConfig
from mkdocs.exceptions import ConfigurationError, PluginError
from mkdocs.plugins import BasePlugin, event_priority, get_plugin_logger
from mkdocs.structure.files import File, Files
from mkdocs.structure.nav import Navigation
from mkdocs.structure.pages import Page as SitePage
from mkdocs.utils.templates import TemplateContext

from logbook.book import Book, Remembering, SourceFile, make_book
from logbook.cache import Cache
from logbook.entry_text import decode
from logbook.failing import failure_words, failures
from logbook.html import render
from logbook.model import Entry
from logbook.options import OptionError, Options, read_options
from logbook.pages import PagePlan, block_pieces, head_pieces, home_pieces, page_plans, revision_path, tail_pieces
from logbook.pieces import Bars, Chart, Piece
from logbook.plots import draw
from logbook.problems import Problems
from logbook.results import results_json, schema_text
from logbook_mkdocs.fingerprints import fingerprints
from logbook_mkdocs.navigation import HOME, navigation
from logbook_mkdocs.options import LogbookConfig
from logbook_mkdocs.slots import HEAD, TAIL, WHOLE, add_to_contents, fill, slot, with_slots

log = get_plugin_logger("logbook")

ASSETS = "assets/logbook"
STYLE = f"{ASSETS}/logbook.css"
SEARCH_SHIM = f"{ASSETS}/iframe-worker.js"
RESULTS = "data/results.json"


class LogbookPlugin(BasePlugin[LogbookConfig]):  # type: ignore[no-untyped-call]
    """One instance lives through all rebuilds of `serve`."""

    serving = dirty = False
    cache_folder: Path | None = None
    writing = Lock()
    options: Options
    book: Book
    cache: Cache
    entries: dict[str, Entry]
    made: dict[str, Callable[[], list[Piece]]]
    site_files: Files
    marks: dict[str, str]

    def __init__(self) -> None:
        self.reading = Remembering()
        self.marks = {}

    def on_startup(self, *, command: Literal["build", "gh-deploy", "serve"], dirty: bool) -> None:
        """Defined, so that MkDocs keeps this instance between rebuilds."""
        self.serving = command == "serve"
        self.dirty = self.serving and dirty
        self.marks = {}
        if self.dirty:
            # A whole logbook is kept between the builds: garbage is looked for after each, not many times within it.
            gc.disable()

    def on_shutdown(self) -> None:
        """Leave the interpreter as it was found."""
        if self.dirty:
            gc.enable()

    def on_config(self, config: MkDocsConfig) -> MkDocsConfig:
        """Check the options, and add the stylesheet and the search's shim."""
        try:
            self.options = read_options(config.site_name, dict(self.config))
        except OptionError as error:
            raise ConfigurationError(f"Plugin 'logbook': {error}") from error
        if STYLE not in config.extra_css:
            config.extra_css.insert(0, STYLE)
        polyfills = config.extra.setdefault("polyfills", [])
        if not config.use_directory_urls and SEARCH_SHIM not in polyfills:
            polyfills.append(SEARCH_SHIM)
        folder = _root(config) / self.config.cache
        if self.cache_folder != folder:
            self.cache_folder, self.cache = folder, Cache(folder)
        return config

    @event_priority(-50)
    def on_files(self, files: Files, /, *, config: MkDocsConfig) -> Files:
        """Read and compute the whole logbook; add the pages, the data and the assets that it makes."""
        folder = Path(config.docs_dir)
        sources = {source.path: source for source in self.reading.find(folder)}
        with _no_collecting():
            self.book = make_book(sources.values(), folder, self.options.settings, self.reading.read)
        self.entries = {entry.path: entry for entry in self.book.entries}
        self.site_files = files
        # A page of that name which somebody wrote stands as it is.
        pages = [plan for plan in page_plans(self.book) if files.get_file_from_path(plan.path) is None]
        self.made = {plan.path: plan.make for plan in pages}
        self.made[HOME] = partial(home_pieces, self.book)
        self._add_files(files, pages, config)
        _mend_encoding(files, sources, config)
        if config.nav is None:
            others = [f.src_uri for f in files.documentation_pages() if f.src_uri not in {*self.entries, *self.made}]
            config.nav = navigation(self.book, pages, others)
        if self.dirty:
            with _no_collecting():
                self._mark(files, sources)
        for problem in self.book.problems:
            log.warning(str(problem))
        return files

    def _add_files(self, files: Files, pages: list[PagePlan], config: MkDocsConfig) -> None:
        def add(path: str, content: str | bytes) -> None:
            if files.get_file_from_path(path) is None:
                files.append(File.generated(config, path, content=content))

        add(HOME, f"---\ntitle: {_quoted(config.site_name)}\n---\n\n# {config.site_name}\n")
        for page in pages:
            add(page.path, f"---\ntitle: {_quoted(page.title)}\n---\n\n# {page.title}\n\n{slot(WHOLE)}\n")
        if not self.dirty:
            add(RESULTS, results_json(self.book))
        add("data/results.schema.json", schema_text())
        assets = package_files("logbook_mkdocs") / "assets"
        for asset in sorted(assets.iterdir(), key=lambda each: each.name):
            add(f"{ASSETS}/{asset.name}", asset.read_bytes())

    def _mark(self, files: Files, sources: dict[str, SourceFile]) -> None:
        """Under `serve --dirty`, rebuild just the pages whose content is not what it was at the last build."""
        marks = fingerprints(self.book, sources, self.made)
        for file in files.documentation_pages():
            mark = marks.get(file.src_uri)
            if mark is not None:
                same = self.marks.get(file.src_uri) == mark
                file.is_modified = lambda same=same: not same  # type: ignore[method-assign,misc]
        self.marks = marks

    def on_page_markdown(self, markdown: str, /, *, page: SitePage, config: MkDocsConfig, files: Files) -> str:
        """Put a slot in the place of each block of an entry; home gets one behind its prose."""
        path = page.file.src_uri
        entry = self.entries.get(path)
        if entry is not None:
            page.update_date = entry.date.isoformat()
            return with_slots(self.book, entry, markdown)
        return f"{markdown}\n\n{slot(WHOLE)}\n" if path == HOME else markdown

    @event_priority(-200)
    def on_page_context(
        self, context: TemplateContext, /, *, page: SitePage, config: MkDocsConfig, nav: Navigation
    ) -> TemplateContext:
        """Fill the slots, after the search has taken the page's words."""
        path = page.file.src_uri
        entry = self.entries.get(path)
        if entry is not None:
            found = self._entry_pieces(entry)
        elif path in self.made:
            pieces = self.made[path]()
            found = {WHOLE: pieces}
            add_to_contents(page.toc, pieces)
        else:
            return context
        page.content = fill(page.content or "", lambda name: self._html(found.get(name, []), page))
        return context

    def _entry_pieces(self, entry: Entry) -> dict[str, list[Piece]]:
        found = {block.id: block_pieces(self.book, entry, block) for block in entry.blocks}
        found[HEAD] = head_pieces(self.book, entry)
        found[TAIL] = tail_pieces(self.book, entry)
        return found

    def _html(self, pieces: list[Piece], page: SitePage) -> str:
        def url(to: str, anchor: str) -> str | None:
            target = self.site_files.get_file_from_path(_path(to))
            if target is None:
                return None
            return target.url_relative_to(page.file) + (f"#{anchor}" if anchor else "")

        def picture(drawing: Chart | Bars) -> str:
            return draw(drawing, self.cache)

        return render(pieces, url, picture)

    def on_env(self, env: Environment, /, *, config: MkDocsConfig, files: Files) -> Environment:
        """Keep compiled templates between builds."""
        folder = _root(config) / self.config.cache / "templates"
        try:
            folder.mkdir(parents=True, exist_ok=True)
        except OSError:
            return env
        env.bytecode_cache = FileSystemBytecodeCache(str(folder))
        return env

    @event_priority(-100)
    def on_post_build(self, *, config: MkDocsConfig) -> None:
        """Make the search work from the disk; then fail, where that was asked for and is due: the site is there."""
        index = Path(config.site_dir) / "search" / "search_index.json"
        if not config.use_directory_urls and index.is_file():
            words = index.read_text(encoding="utf-8")
            index.with_suffix(".js").write_text(f"var __index = {words}", encoding="utf-8")
        if self.dirty:
            Thread(target=self._tidy_up, args=(self.book, Path(config.site_dir) / RESULTS), daemon=True).start()
        if not self.serving:
            self.cache.prune()
        failed = failures(self.book, self.options.fail_on)
        if failed and self.serving:
            log.warning(failure_words(failed))
        elif failed:
            raise PluginError(f"{failure_words(failed)}; the site is in {config.site_dir}")

    def _tidy_up(self, book: Book, file: Path) -> None:
        """Under `serve --dirty`, while the page is looked at already: of a large logbook it takes a second."""
        gc.collect()
        data = results_json(book)
        with self.writing:
            if book is self.book:
                file.parent.mkdir(parents=True, exist_ok=True)
                file.write_bytes(data)


@contextmanager
def _no_collecting() -> Iterator[None]:
    # Very many objects are made and all are kept: to look through them again and again takes a fifth of the time.
    collecting = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if collecting:
            gc.enable()


def _root(config: MkDocsConfig) -> Path:
    """The folder that paths in mkdocs.yml start from."""
    return Path(config.config_file_path).parent if config.config_file_path else Path.cwd()


def _path(to: str) -> str:
    sort, _, name = to.partition(":")
    return revision_path(name) if sort == "revision" else f"{name}.md" if sort == "page" else name


def _quoted(title: str) -> str:
    return "'" + title.replace("'", "''") + "'"


def _mend_encoding(files: Files, sources: dict[str, SourceFile], config: MkDocsConfig) -> None:
    """A file that is not UTF-8 is a problem with its place; MkDocs would stop at it, so it is given clean text."""
    for path, source in sources.items():
        try:
            source.data.decode("utf-8-sig")
        except UnicodeDecodeError:
            old = files.get_file_from_path(path)
            if old is not None:
                files.remove(old)
                files.append(File.generated(config, path, content=decode(source.data, path, Problems())))
