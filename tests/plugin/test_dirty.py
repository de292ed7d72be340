"""`serve --dirty`: which pages are built again after a file was saved. Held against whole builds of the same files."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from threading import current_thread
from threading import enumerate as enumerate_threads

import pytest
from building import CHAIN, FRONT, READING, Project, fresh_config, main_of
from mkdocs.commands.build import build
from mkdocs.config import load_config

SERVED_AT = "http://127.0.0.1:8000/"

BENCH = """```yaml bench
bench: shack
reads: {accuracy: ± 1.5 dB, linearity: ± 0.3 dB, rbw_filter: gaussian}
```
"""
TARGET = """```yaml target
quantity: nf
at: 50.1 MHz
limit: <= 2.6 dB
```
"""
LEVEL = """```yaml reading
at: 50.1 MHz
bench: shack
results:
  gain: 11.3(1) dB
```
"""
CHANGE = """```yaml change
chain: rx
steps:
  - set: lna
    to: {nf: 0.9 dB}
```
"""
TODO = "```yaml todo\nid: lid\nwhat: a lid for the box\n```\n"
DONE = "```yaml todo\ndone: lid\n```\n"
TRIAL = CHANGE.replace("nf: 0.9 dB", "gain: 15 dB")
PLAN = CHANGE.replace("nf: 0.9 dB", "gain: 19 dB")


def entry(title: str, date: str, text: str, more: str = "") -> str:
    return FRONT.format(title=title, date=date, more=more) + text


ENTRIES = {
    "2026-01-10-first.md": entry("First", "2026-01-10", f"A box.\n\n{CHAIN}\n{TODO}", "revision: A\n"),
    "2026-01-11-bench.md": entry("Bench", "2026-01-11", f"Instruments.\n\n{BENCH}\n{TARGET}"),
    "2026-01-12-numbers.md": entry("Numbers", "2026-01-12", f"Readings.\n\n{READING}\n{LEVEL}"),
    "2026-01-13-change.md": entry("Change", "2026-01-13", f"Soldering.\n\n{CHANGE}", "revision: B\n"),
    "2026-01-14-again.md": entry("Again", "2026-01-14", f"And again.\n\n{READING}\n{LEVEL}"),
    "2026-01-15-trial.md": entry("Trial", "2026-01-15", f"A trial.\n\n{TRIAL}", "revision: T\nstate: trial\n"),
    "2026-01-16-plan.md": entry("Plan", "2026-01-16", f"A plan.\n\n{PLAN}", "revision: C\nstate: planned\n"),
    "2026-01-17-lid.md": entry("Lid", "2026-01-17", f"The lid is on.\n\n{DONE}"),
    "about.md": "# About\n\nWho I am.\n",
}


class Served:
    """A site under `serve --dirty`, and the same files built whole."""

    def __init__(self, project: Project, whole: Path) -> None:
        self.project = project
        self.whole = whole
        self.file = project.folder / "mkdocs.yml"
        config = fresh_config(self.file, project.site)
        config.plugins.on_startup(command="serve", dirty=True)
        build(config, serve_url=SERVED_AT, dirty=True)

    def again(self) -> set[str]:
        """Build again as after a save; the pages that were written."""
        before = self._times()
        build(load_config(str(self.file), site_dir=str(self.project.site)), serve_url=SERVED_AT, dirty=True)
        return {name for name, time in self._times().items() if before.get(name) != time}

    def _times(self) -> dict[str, int]:
        site = self.project.site
        return {path.relative_to(site).as_posix(): path.stat().st_mtime_ns for path in site.rglob("*.html")}

    def built_whole(self) -> dict[str, str]:
        """What every page says when the same files are built anew."""
        config = fresh_config(self.file, self.whole)
        config.plugins.on_startup(command="serve", dirty=False)
        build(config)
        return contents(self.whole)


def contents(site: Path) -> dict[str, str]:
    """What stands on each page, by its words, links and drawings; ids are there too."""
    return {path.relative_to(site).as_posix(): _said(path) for path in sorted(site.rglob("*.html"))}


def _said(path: Path) -> str:
    main = main_of(path)
    return main.words + repr([sorted(each.attributes.items()) for each in main.walk()])


@pytest.fixture
def logbook(project: Project) -> Project:
    for path, text in ENTRIES.items():
        project.write(path, text)
    project.configure({"logbook": {"fail_on": []}})
    return project


def replaced(path: str, old: str, new: str) -> Callable[[Project], None]:
    def edit(project: Project) -> None:
        text = (project.entries / path).read_text(encoding="utf-8")
        assert old in text
        project.write(path, text.replace(old, new))

    return edit


def removed(path: str) -> Callable[[Project], None]:
    return lambda project: (project.entries / path).unlink()


def added(path: str, text: str) -> Callable[[Project], None]:
    return lambda project: project.write(path, text)


EDITS = {
    "a reading": replaced("2026-01-14-again.md", "2.4(1) dB", "3.4(1) dB"),
    "a reading before": replaced("2026-01-12-numbers.md", "2.4(1) dB", "3.4(1) dB"),
    "a doubt alone": replaced("2026-01-12-numbers.md", "2.4(1) dB", "2.4(4) dB"),
    "a condition": replaced("2026-01-14-again.md", "bench: shack\n", "bench: shack\ntemperature: 40 degC\n"),
    "a stage of the first chain": replaced("2026-01-10-first.md", "nf: 7 dB", "nf: 8 dB"),
    "a change": replaced("2026-01-13-change.md", "0.9 dB", "1.0 dB"),
    "a reason": replaced("2026-01-13-change.md", "chain: rx\n", "chain: rx\nwhy: less noise\n"),
    "a trial": replaced("2026-01-15-trial.md", "15 dB", "14 dB"),
    "a plan": replaced("2026-01-16-plan.md", "19 dB", "20 dB"),
    "a limit": replaced("2026-01-11-bench.md", "<= 2.6 dB", "<= 2.0 dB"),
    "a bench": replaced("2026-01-11-bench.md", "± 1.5 dB", "± 0.5 dB"),
    "a bench's calibration": replaced("2026-01-11-bench.md", "reads:", "due: 2026-01-13\nreads:"),
    "a title": replaced("2026-01-10-first.md", "title: First", "title: The very first"),
    "a state": replaced("2026-01-15-trial.md", "state: trial", "state: planned"),
    "an item": replaced("2026-01-10-first.md", "a lid for the box", "a lid for the tin"),
    "an item no longer closed": replaced("2026-01-17-lid.md", DONE, ""),
    "a fault": replaced("2026-01-14-again.md", "2.4(1) dB", "2.4(1) dBm"),
    "a fault in a chain": replaced("2026-01-10-first.md", "nf: 7 dB", "nf: -7 dB"),
    "a new entry": added("2026-01-18-new.md", entry("New", "2026-01-18", READING)),
    "a new entry in between": added("2026-01-12-b.md", entry("Between", "2026-01-12", LEVEL)),
    "a new revision": added("2026-01-18-d.md", entry("D", "2026-01-18", TRIAL, "revision: D\n")),
    "an entry taken away": removed("2026-01-14-again.md"),
    "an ordinary page": replaced("about.md", "Who I am.", "Who I was."),
}


@pytest.mark.parametrize("edit", EDITS.values(), ids=EDITS)
def test_after_a_save_every_page_says_what_a_whole_build_says(
    logbook: Project, tmp_path: Path, edit: Callable[[Project], None]
) -> None:
    served = Served(logbook, tmp_path / "whole")
    before = contents(logbook.site)
    edit(logbook)
    written = served.again()
    whole = served.built_whole()
    now = contents(logbook.site)
    assert [name for name in whole if now.get(name) != whole[name]] == [], "these pages are stale"
    needed = {name for name in whole if before.get(name) != whole[name]}
    assert needed, "the edit must be one that a reader sees"
    assert needed <= written


@pytest.mark.parametrize("path", ENTRIES)
def test_prose_saved_builds_its_own_page_and_no_other(logbook: Project, tmp_path: Path, path: str) -> None:
    served = Served(logbook, tmp_path / "whole")
    text = (logbook.entries / path).read_text(encoding="utf-8")
    logbook.write(path, text + "\nOne more sentence.\n")
    assert served.again() == {path.replace(".md", ".html")}


def test_a_save_that_changes_nothing_builds_nothing(logbook: Project, tmp_path: Path) -> None:
    served = Served(logbook, tmp_path / "whole")
    for path, text in ENTRIES.items():
        logbook.write(path, text)
    assert served.again() == set()


NOT_TOUCHED = {
    "a reading": (
        "2026-01-14-again.md",
        "2.4(1) dB",
        "3.4(1) dB",
        {"2026-01-10-first", "2026-01-11-bench", "revisions/A"},
    ),
    "a trial": ("2026-01-15-trial.md", "15 dB", "14 dB", {"2026-01-12-numbers", "2026-01-14-again", "revisions/A"}),
    "an item": ("2026-01-10-first.md", "for the box", "for the tin", {"2026-01-12-numbers", "revisions/B", "history"}),
    "a plan": ("2026-01-16-plan.md", "19 dB", "20 dB", {"2026-01-12-numbers", "revisions/A", "revisions/B", "benches"}),
}


@pytest.mark.parametrize(("path", "old", "new", "others"), NOT_TOUCHED.values(), ids=NOT_TOUCHED)
def test_pages_that_do_not_depend_on_what_was_saved_are_not_built(
    logbook: Project, tmp_path: Path, path: str, old: str, new: str, others: set[str]
) -> None:
    served = Served(logbook, tmp_path / "whole")
    replaced(path, old, new)(logbook)
    written = served.again()
    assert path.replace(".md", ".html") in written
    assert {f"{name}.html" for name in others} & written == set()


def test_a_fault_in_a_file_that_was_not_saved_is_told_again(
    logbook: Project, tmp_path: Path, caplog: pytest.LogCaptureFixture
) -> None:
    replaced("2026-01-14-again.md", "2.4(1) dB", "2.4(1) dBm")(logbook)
    served = Served(logbook, tmp_path / "whole")

    def told() -> list[str]:
        return [r.getMessage() for r in caplog.records if "2026-01-14-again.md:" in r.getMessage()]

    first = told()
    assert len(first) == 1
    caplog.clear()
    replaced("about.md", "Who I am.", "Who I was.")(logbook)
    served.again()
    assert told() == first


def test_the_results_follow_a_save(logbook: Project, tmp_path: Path) -> None:
    served = Served(logbook, tmp_path / "whole")
    replaced("2026-01-14-again.md", "2.4(1) dB", "3.4(1) dB")(logbook)
    served.again()
    for thread in enumerate_threads():
        if thread.daemon and thread is not current_thread():
            thread.join(10)
    served.built_whole()
    results = "data/results.json"
    assert (logbook.site / results).read_bytes() == (served.whole / results).read_bytes()
