"""The cache: what is put can be got, and nothing that a disk does comes through to the caller."""

from __future__ import annotations

import os
import time
from pathlib import Path

import pytest

from logbook.cache import Cache, cache_key

KEY = cache_key("a drawing", "1")


def files(folder: Path) -> list[Path]:
    return [path for path in folder.rglob("*") if path.is_file()]


def test_another_run_finds_what_was_put(tmp_path: Path) -> None:
    Cache(tmp_path).put(KEY, b"<svg/>")
    assert Cache(tmp_path).get(KEY) == b"<svg/>"


def test_what_was_never_put_is_not_there(tmp_path: Path) -> None:
    assert Cache(tmp_path / "nowhere").get(KEY) is None


def test_without_a_folder_it_remembers_while_it_lives() -> None:
    cache = Cache(None)
    cache.put(KEY, b"")
    assert cache.get(KEY) == b""
    assert Cache(None).get(KEY) is None
    assert cache.prune(0) == 0


def test_keys_depend_on_where_one_part_ends() -> None:
    assert len({cache_key("ab", "c"), cache_key("a", "bc"), cache_key("abc"), cache_key("abc", "")}) == 4


def test_a_key_can_be_made_of_any_text() -> None:
    assert cache_key("\ud800") != cache_key("\ud801")


def test_later_bytes_replace_earlier_ones(tmp_path: Path) -> None:
    cache = Cache(tmp_path)
    cache.put(KEY, b"one")
    cache.put(KEY, b"two")
    assert Cache(tmp_path).get(KEY) == b"two"
    assert len(files(tmp_path)) == 1, "nothing temporary stays"


@pytest.mark.parametrize("damage", [b"", b"short", b"x" * 200])
def test_a_damaged_file_is_as_good_as_none(tmp_path: Path, damage: bytes) -> None:
    Cache(tmp_path).put(KEY, b"<svg/>")
    (path,) = files(tmp_path)
    path.write_bytes(damage)
    assert Cache(tmp_path).get(KEY) is None


def test_half_a_file_is_as_good_as_none(tmp_path: Path) -> None:
    Cache(tmp_path).put(KEY, b"a long drawing")
    (path,) = files(tmp_path)
    path.write_bytes(path.read_bytes()[:-3])
    assert Cache(tmp_path).get(KEY) is None


def test_a_folder_that_cannot_be_made_leaves_the_memory(tmp_path: Path) -> None:
    (tmp_path / "cache").write_text("a file stands where the folder should be")
    cache = Cache(tmp_path / "cache")
    cache.put(KEY, b"<svg/>")
    assert cache.get(KEY) == b"<svg/>"
    assert Cache(tmp_path / "cache").get(KEY) is None
    assert cache.prune(0) == 0


def test_a_disk_that_refuses_to_write_leaves_nothing_behind(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(*_: object) -> None:
        raise PermissionError("read-only")

    monkeypatch.setattr(os, "replace", refuse)
    cache = Cache(tmp_path)
    cache.put(KEY, b"<svg/>")
    assert cache.get(KEY) == b"<svg/>"
    assert files(tmp_path) == []


def test_pruning_removes_what_nobody_asked_for(tmp_path: Path) -> None:
    other = cache_key("another drawing")
    cache = Cache(tmp_path)
    cache.put(KEY, b"old")
    (old,) = files(tmp_path)
    cache.put(other, b"new")
    long_ago = time.time() - 100 * 86400
    os.utime(old, (long_ago, long_ago))
    assert Cache(tmp_path).prune(90) == 1
    assert (Cache(tmp_path).get(KEY), Cache(tmp_path).get(other)) == (None, b"new")


def test_asking_keeps_it_from_being_pruned(tmp_path: Path) -> None:
    Cache(tmp_path).put(KEY, b"old")
    (old,) = files(tmp_path)
    long_ago = time.time() - 100 * 86400
    os.utime(old, (long_ago, long_ago))
    Cache(tmp_path).get(KEY)
    assert Cache(tmp_path).prune(90) == 0
