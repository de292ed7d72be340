"""What `mkdocs.yml` says of the logbook, read without MkDocs."""

from __future__ import annotations

import os
from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import yaml

from logbook.cli.status import UsageError

_DEEPEST_INHERITANCE = 10


@dataclass(frozen=True, slots=True)
class Site:
    """The site's title, the folder of its pages as written, and its plugins with their options."""

    name: str | None = None
    docs_dir: str = "docs"
    plugins: Mapping[str, Any] = field(default_factory=dict)


def read_site(file: Path) -> Site:
    """The site of a `mkdocs.yml`. Raises UsageError where it cannot be read."""
    found = _inherited(file, 0)
    name, docs_dir = found.get("site_name"), found.get("docs_dir")
    return Site(
        name=None if name is None else str(name),
        docs_dir="docs" if docs_dir is None else str(docs_dir),
        plugins=_plugins(found.get("plugins")),
    )


def _plugins(written: Any) -> dict[str, Any]:
    """Plugins by name: they are listed, or given as a mapping."""
    if isinstance(written, Mapping):
        return {str(name): options for name, options in written.items()}
    found: dict[str, Any] = {}
    for each in written if isinstance(written, list) else ():
        if isinstance(each, Mapping):
            found.update((str(name), options) for name, options in each.items())
        else:
            found[str(each)] = None
    return found


def _inherited(file: Path, depth: int) -> dict[str, Any]:
    own = _read(file)
    parent = own.pop("INHERIT", None)
    if not isinstance(parent, str) or depth >= _DEEPEST_INHERITANCE:
        return own
    return _merged(_inherited(file.parent / parent, depth + 1), own)


def _merged(below: Mapping[str, Any], above: Mapping[str, Any]) -> dict[str, Any]:
    """Mappings within one another are merged, all else is replaced, as the site's own reader does."""
    merged = dict(below)
    for key, value in above.items():
        old = merged.get(key)
        both = isinstance(old, Mapping) and isinstance(value, Mapping)
        merged[key] = _merged(old, value) if both else value  # type: ignore[arg-type]
    return merged


def _read(file: Path) -> dict[str, Any]:
    try:
        found = yaml.load(file.read_bytes(), Loader=_Loader)
    except OSError as error:
        raise UsageError(f"'{file}' cannot be read: {error.strerror}.") from error
    except (yaml.YAMLError, ValueError) as error:
        mark = getattr(error, "problem_mark", None)
        where = f"{file}:{mark.line + 1}:{mark.column + 1}" if mark is not None else str(file)
        raise UsageError(f"{where}: {getattr(error, 'problem', None) or error}") from error
    if found is None:
        return {}
    if not isinstance(found, dict):
        raise UsageError(f"'{file}' holds no keys with values; a site's file begins with 'site_name: ...'.")
    return found


_SafeLoader: Any = getattr(yaml, "CSafeLoader", yaml.SafeLoader)


class _Loader(_SafeLoader):  # type: ignore[misc]
    """A safe loader that knows !ENV and passes over every other tag: they are for the site's own parts."""


def _passed_over(loader: Any, node: yaml.Node) -> None:
    return None


def _environment(loader: Any, node: yaml.Node) -> Any:
    """`!ENV NAME` or `!ENV [NAME, ANOTHER, default]`: the first that is set, read as YAML would read it."""
    if isinstance(node, yaml.ScalarNode):
        names, default = [node], None
    elif isinstance(node, yaml.SequenceNode) and node.value:
        names, last = node.value[:-1] or node.value, node.value[-1]
        default = loader.construct_object(last) if len(node.value) > 1 else None
    else:
        return None
    for each in names:
        written = os.environ.get(str(each.value))
        if written is not None:
            tag = loader.resolve(yaml.ScalarNode, written, (True, False))
            return loader.construct_object(yaml.ScalarNode(tag, written))
    return default


_Loader.add_constructor("!ENV", _environment)
_Loader.add_constructor(None, _passed_over)
