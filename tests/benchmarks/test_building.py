"""Building the site, against bare MkDocs on the same pages; memory; and what stays out when plots are cached."""

from __future__ import annotations

import re
from pathlib import Path

import pytest
from bare import write_bare, write_site
from generate import write_logbook
from timed import Timed, best, tell, timed

from logbook.cache import Cache

pytestmark = pytest.mark.benchmark

BUILD = ("-m", "mkdocs", "build", "--quiet")


def sites(folder: Path, entries: int, revisions: int) -> tuple[Path, Path]:
    """The site with the plugin, its plots cached already, and the bare one."""
    ours, bare = folder / "ours", folder / "bare"
    write_site(ours, plugins=["search", "logbook"])
    write_logbook(ours / "entries", entries=entries, revisions=revisions)
    write_bare(ours / "entries", bare, Cache(ours / ".cache" / "logbook"))
    return ours, bare


def compared(folder: Path, entries: int, revisions: int, runs: int) -> tuple[Timed, Timed]:
    ours, bare = sites(folder, entries, revisions)
    timed(BUILD, ours)
    took = best(runs, lambda: timed(BUILD, ours))
    floor = best(runs, lambda: timed(BUILD, bare))
    tell(
        f"{entries} entries: {took.seconds:.1f} s and {took.peak_mib:.0f} MiB, bare {floor.seconds:.1f} s and "
        f"{floor.peak_mib:.0f} MiB: {took.seconds / floor.seconds:.2f} times"
    )
    return took, floor


def test_a_hundred_pages_take_no_longer_than_bare(tmp_path: Path) -> None:
    took, floor = compared(tmp_path, entries=100, revisions=20, runs=3)
    assert took.seconds <= 1.0 * floor.seconds


def test_a_thousand_pages_take_seven_tenths_of_bare_and_little_memory(tmp_path: Path) -> None:
    took, floor = compared(tmp_path, entries=1000, revisions=60, runs=1)
    assert took.seconds <= 0.7 * floor.seconds
    assert took.peak_mib < 300


def test_matplotlib_stays_out_when_all_plots_are_cached(tmp_path: Path) -> None:
    write_site(tmp_path, plugins=["search", "logbook"])
    write_logbook(tmp_path / "entries", entries=10, revisions=2)
    build = ("-X", "importtime", "-m", "mkdocs", "build")
    assert re.search(r"\| +matplotlib\n", timed(build, tmp_path).output)
    assert not re.search(r"\| +matplotlib\n", timed(build, tmp_path).output)
