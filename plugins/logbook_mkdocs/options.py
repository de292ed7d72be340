"""What may stand under `logbook:` in mkdocs.yml."""

from __future__ import annotations

from mkdocs.config import config_options as c
from mkdocs.config.base import Config


class LogbookConfig(Config):  # type: ignore[no-untyped-call]
    """The plugin's options; their meaning and their faults are the engine's (`logbook.options`)."""

    fail_on = c.Type((list, str), default=["problem"])
    coverage = c.Type((int, float, str), default=2)
    matters = c.Type(dict, default={})
    cache = c.Type(str, default=".cache/logbook")
