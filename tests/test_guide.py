"""The README's guide to the kinds is the registry's own."""

from pathlib import Path

from logbook.guide import renew
from logbook.kinds import registry

README = Path(__file__).parent.parent / "README.md"


def test_readme_shows_every_kind_as_the_registry_has_it() -> None:
    text = README.read_text(encoding="utf-8")
    assert renew(text) == text, "renew it with: python -m logbook.guide README.md"
    for word in registry():
        assert f"### `{word}`" in text
