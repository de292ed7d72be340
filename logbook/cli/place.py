"""Which logbook is meant, and what its site sets for it."""

from __future__ import annotations

import os
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

from logbook.cli.site import Site, read_site
from logbook.cli.status import UsageError
from logbook.options import OptionError, Options, read_options
from logbook.problems import did_you_mean

_SITE_FILES = ("mkdocs.yml", "mkdocs.yaml")
_DEFAULT_FOLDER = "entries"


@dataclass(frozen=True, slots=True)
class Place:
    """A logbook's folder, as it is best named from here, and its options."""

    folder: Path
    options: Options


def find_place(path: str | None, *, may_be_new: bool = False) -> Place:
    """The logbook that `path` leads to. Raises UsageError; a folder that is still to be made is only taken if asked."""
    place = _default(may_be_new) if path is None else _given(Path(path))
    if not may_be_new and not place.folder.is_dir():
        raise UsageError(f"There is no folder '{place.folder}', where the site's entries should be.")
    return place


def _default(may_be_new: bool) -> Place:
    here = Path()
    site = _site_file(here)
    if site is not None:
        return _of_site(site)
    if (here / _DEFAULT_FOLDER).is_dir() or may_be_new:
        return Place(here / _DEFAULT_FOLDER, Options())
    raise UsageError(f"Here is neither mkdocs.yml nor a folder '{_DEFAULT_FOLDER}'; name the logbook's folder.")


def _given(path: Path) -> Place:
    if path.is_file():
        if path.suffix in (".yml", ".yaml"):
            return _of_site(path)
        raise UsageError(f"'{path}' is a file; name the logbook's folder.")
    if not path.is_dir():
        raise UsageError(f"There is no folder '{path}'.{_near(path)}")
    site = _site_file(path)
    if site is not None:
        return _of_site(site)
    return Place(path, _options_above(path))


def _near(path: Path) -> str:
    beside = path.parent
    names = sorted(each.name for each in beside.iterdir() if each.is_dir()) if beside.is_dir() else []
    hint = did_you_mean(path.name, names)
    return f" {hint}" if hint.startswith("Did") else ""


def _site_file(folder: Path) -> Path | None:
    return next((folder / name for name in _SITE_FILES if (folder / name).is_file()), None)


def _of_site(file: Path) -> Place:
    site = read_site(file)
    # Joined, not resolved: places of problems are then named as one would type them from here.
    folder = Path(os.path.normpath(file.parent / site.docs_dir))
    return Place(folder, _options(site, file))


def _options_above(folder: Path) -> Options:
    """The options of a site further up whose entries lie in this very folder; so check and site agree."""
    whole = folder.resolve()
    for above in whole.parents:
        file = _site_file(above)
        if file is not None:
            site = read_site(file)
            return _options(site, file) if (above / site.docs_dir).resolve() == whole else Options()
    return Options()


def _options(site: Site, file: Path) -> Options:
    plugins = site.plugins
    given = plugins.get("logbook")
    try:
        return read_options(site.name, given if isinstance(given, Mapping) else {})
    except OptionError as error:
        raise UsageError(f"{file}: {error}") from error
