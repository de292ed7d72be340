"""The command: which logbook it takes, what it prints, how it ends."""

from __future__ import annotations

import json
import os
import re
import subprocess
import sys
from collections.abc import Callable
from datetime import date
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from logbook.book import Settings, find_sources, make_book
from logbook.cli import main
from logbook.cli.check import status_of
from logbook.cli.printing import print_problems
from logbook.problems import CAUTION, Place
from logbook.results import results_json

ROOT = Path(__file__).parent.parent

CHAIN = """\
chain: rx
signal: 50.1 MHz
bandwidth: 10 kHz
stages:
  - {name: lna, gain: 18 ± 0.5 dB, nf: %s dB, oip3: 24 dBm}
  - {name: detector, gain: 0 dB, nf: 12 dB}
"""
READING = "at: 50.1 MHz\nresults: {nf: %s}\n"
TARGET = "quantity: nf\nat: 50.1 MHz\nlimit: <= 2 dB\n"

Run = Callable[..., tuple[int, str, str]]


@pytest.fixture
def run(capsys: pytest.CaptureFixture[str]) -> Run:
    """Runs the command; its status, what it printed, and what it complained of."""

    def call(*arguments: str) -> tuple[int, str, str]:
        try:
            status = main(arguments)
        except SystemExit as stop:
            status = int(stop.code or 0)
        said = capsys.readouterr()
        return status, said.out, said.err

    return call


@pytest.fixture
def here(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.chdir(tmp_path)
    return tmp_path


def write(folder: Path, day: str, front: str, *blocks: tuple[str, str]) -> Path:
    folder.mkdir(parents=True, exist_ok=True)
    fences = "\n".join(f"```yaml {kind}\n{text}```\n" for kind, text in blocks)
    file = folder / f"{day}-a.md"
    file.write_text(f"---\ntitle: Session\ndate: {day}\n{front}---\n\n{fences}", encoding="utf-8")
    return file


def worse(folder: Path, *last: tuple[str, str]) -> None:
    """A logbook whose noise figure got worse by 2 dB and now misses its target."""
    first = (("chain", CHAIN % "1.0"), ("target", TARGET), ("reading", READING % "1.2(1) dB"))
    write(folder, "2026-01-01", "revision: A\n", *first)
    write(folder, "2026-02-01", "revision: B\n", ("chain", CHAIN % "2.9"), ("reading", READING % "3.2(1) dB"), *last)


# --- how it ends ---------------------------------------------------------------------------------

ACCEPT = ("accept", "quantity: nf\nwhy: the old stage burnt out\n")


@pytest.mark.parametrize(
    ("fail_on", "last", "status"),
    [
        ([], (), 0),
        (["--fail-on", "problem"], (), 0),
        (["--fail-on", "regression"], (), 2),
        (["--fail-on", "target"], (), 2),
        (["--fail-on", "problem,regression,target"], (), 2),
        (["--fail-on", "regression"], (ACCEPT,), 0),
        (["--fail-on", "regression, target"], (ACCEPT,), 2),
        (["--fail-on", "regression"], (("reading", "results: {nf: 3}\n"),), 1),
    ],
)
def test_status_of_a_logbook_that_got_worse(
    here: Path, run: Run, fail_on: list[str], last: tuple[tuple[str, str], ...], status: int
) -> None:
    worse(here / "entries", *last)
    assert run("check", *fail_on)[0] == status


def test_cautions_are_said_and_do_not_fail(here: Path, capsys: pytest.CaptureFixture[str]) -> None:
    book = make_book([], None)
    book.problems.add(Place("a.md", 3, 4), "due", "The bench was due.", "Have it\ncalibrated.", CAUTION)
    print_problems(book.problems, Path("entries"))
    assert capsys.readouterr().err == "entries/a.md:3:4: caution: The bench was due. Have it calibrated. [due]\n"
    assert status_of(book, frozenset({"problem"})) == 0
    book.problems.add(Place("a.md", 3), "empty-block", "Nothing here.")
    assert status_of(book, frozenset()) == 1


@pytest.mark.parametrize(
    "arguments",
    [
        [],
        ["chek"],
        ["check", "nowhere"],
        ["check", "--coverage", "0"],
        ["check", "--coverage", "two"],
        ["check", "--fail-on", "regresion"],
        ["check", "--results", "nowhere/results.json"],
        ["check", "--unknown"],
        ["compare", "A"],
        ["compare", "A", "Q"],
        ["compare", "A", "A"],
        ["new"],
        ["new", "  "],
        ["new", "Title", "--date", "9.5.2026"],
        ["new", "Title", "--date", "2026-02-30"],
        ["new", "Title", "--state", "trial"],
        ["new", "Title", "--revision", "A", "--state", "sold"],
        ["new", "Title", "--revision", "A", "--state", "trial"],
        ["new", "Title", "--revision", "what: a label"],
    ],
)
def test_wrong_usage_ends_with_three_and_says_why(here: Path, run: Run, arguments: list[str]) -> None:
    worse(here / "entries")
    before = sorted(here.rglob("*"))
    status, out, err = run(*arguments)
    assert (status, out) == (3, "")
    assert err.strip()
    assert "Traceback" not in err
    assert sorted(here.rglob("*")) == before


@pytest.mark.parametrize(
    ("arguments", "hint"),
    [
        (["check", "entreis"], "Did you mean 'entries'?"),
        (["check", "--fail-on", "regresion"], "Did you mean 'regression'?"),
        (["compare", "A", "b"], "Did you mean 'B'?"),
    ],
)
def test_a_slip_of_the_pen_is_answered_with_the_likely_word(
    here: Path, run: Run, arguments: list[str], hint: str
) -> None:
    worse(here / "entries")
    assert hint in run(*arguments)[2]


def test_without_a_logbook(here: Path, run: Run) -> None:
    status, _, err = run("check")
    assert status == 3
    assert "'entries'" in err


@pytest.mark.parametrize("argument", ["--help", "--version"])
def test_what_is_asked_for_ends_in_order(run: Run, argument: str) -> None:
    status, out, _ = run(argument)
    assert status == 0
    assert "logbook" in out


# --- check ---------------------------------------------------------------------------------------


def test_problems_are_printed_as_an_editor_finds_them(here: Path, run: Run) -> None:
    file = write(
        here / "entries", "2026-01-01", "revision: A\n", ("chain", CHAIN.replace("18 ± 0.5 dB", "18 dBm") % "1")
    )
    line = 1 + file.read_text(encoding="utf-8").splitlines().index(
        "  - {name: lna, gain: 18 dBm, nf: 1 dB, oip3: 24 dBm}"
    )
    status, _, err = run("check")
    assert status == 1
    assert re.search(rf"^entries/2026-01-01-a\.md:{line}:\d+: .*'18 dBm'.*\[dimension\]$", err, re.M)
    assert run("check", "entries")[2] == err


def test_report(here: Path, run: Run) -> None:
    worse(here / "entries", ("todo", "- {id: lna, what: order a new one}\n- {id: pad, what: measure it}\n"))
    status, out, err = run("check")
    assert (status, err) == (0, "")
    for words in ("2 entries, 2 revisions", "revision B", "rx/nf@50.1MHz", "not accepted", "misses", "worse", "3.20"):
        assert words in out, words
    assert "2 open items, 0 problems" in out


def test_report_marks_what_is_accepted(here: Path, run: Run) -> None:
    worse(here / "entries", ACCEPT)
    out = run("check")[1]
    assert "the old stage burnt out" in out
    assert "not accepted" not in out


def test_quiet_says_problems_only(here: Path, run: Run) -> None:
    worse(here / "entries")
    assert run("check", "--quiet") == (0, "", "")
    worse(here / "entries", ("readin", "at: 50 MHz\n"))
    status, out, err = run("check", "--quiet")
    assert (status, out, err.count("\n")) == (1, "", 1)


def test_coverage_decides_what_is_beyond_doubt(here: Path, run: Run) -> None:
    worse(here / "entries")
    # 2 dB against u = sqrt(2) * 0.1 dB (closed form): beyond doubt up to k = 14.1.
    assert run("check", "--fail-on", "regression", "--coverage", "14")[0] == 2
    assert run("check", "--fail-on", "regression", "--coverage", "14.2")[0] == 2  # the target is still lost
    out = run("check", "--coverage", "14.2")[1]
    assert "same" in out
    assert "same" not in run("check", "--coverage", "14")[1]


def test_an_empty_logbook_is_in_order(here: Path, run: Run) -> None:
    (here / "entries").mkdir()
    status, out, _ = run("check")
    assert status == 0
    assert "no entry yet" in out


# --- the site's file -----------------------------------------------------------------------------


def results(run: Run, *arguments: str) -> tuple[int, bytes]:
    status, _, err = run("check", "--quiet", "--results", "out.json", *arguments)
    assert status != 3, err
    return status, Path("out.json").read_bytes()


def test_results_are_those_of_the_book_with_the_settings_of_the_site(here: Path, run: Run) -> None:
    worse(here / "notes" / "bench")
    (here / "mkdocs.yml").write_text(
        "site_name: Monitor\ndocs_dir: notes/bench\ntheme: {name: material}\n"
        "plugins:\n  - search\n  - logbook: {coverage: 3, matters: {nf: 0.3 dB}, fail_on: [regression]}\n"
        "markdown_extensions:\n  - a: {b: !!python/name:some.module.name }\n  - c: !relative $docs_dir\n",
        encoding="utf-8",
    )
    folder = here / "notes" / "bench"
    book = make_book(find_sources(folder), folder, Settings("Monitor", 3.0, {"nf": 0.3}))
    for arguments in ([], ["."], ["mkdocs.yml"], ["notes/bench"], [str(folder)]):
        assert results(run, *arguments) == (2, results_json(book)), arguments
    assert results(run, "--fail-on", "problem")[0] == 0


SITES = {
    "no title": ("docs_dir: entries\n", "Logbook", 2.0),
    "plugins as a mapping": (
        "site_name: M\ndocs_dir: entries\nplugins: {search: {}, logbook: {coverage: 3}}\n",
        "M",
        3.0,
    ),
    "plugin without options": ("site_name: M\ndocs_dir: entries\nplugins: [search, logbook]\n", "M", 2.0),
    "other plugins only": ("site_name: 2026\ndocs_dir: entries\nplugins: [search]\n", "2026", 2.0),
    "no plugins at all": ("site_name: M\ndocs_dir: entries\nplugins:\n", "M", 2.0),
    "from the environment": (
        "site_name: !ENV [UNSET_NAME, SET_NAME, Else]\ndocs_dir: entries\nplugins: [logbook: {coverage: !ENV SET_K}]\n",
        "From outside",
        2.5,
    ),
    "environment not set": ("site_name: !ENV [UNSET_NAME, Else]\ndocs_dir: !ENV [UNSET_NAME, entries]\n", "Else", 2.0),
    "inherited": ("INHERIT: base.yml\nplugins: {logbook: {coverage: 4}}\n", "Base", 4.0),
}


@pytest.mark.parametrize("name", SITES)
def test_what_a_site_may_set(name: str, here: Path, run: Run, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("SET_NAME", "From outside")
    monkeypatch.setenv("SET_K", "2.5")
    written, title, k = SITES[name]
    (here / "entries").mkdir()
    (here / "mkdocs.yml").write_text(written, encoding="utf-8")
    (here / "base.yml").write_text(
        "site_name: Base\ndocs_dir: entries\nplugins: {logbook: {coverage: 3}, search: {}}\n", encoding="utf-8"
    )
    data = json.loads(results(run)[1])
    assert (data["title"], data["coverage"]) == (title, k)


BAD_SITES = {
    "not YAML": ("site_name: [\n", r"mkdocs\.yml:2:1: "),
    "a list": ("- a\n", "no keys"),
    "no such folder": ("site_name: M\n", "'docs'"),
    "wrong option": ("docs_dir: entries\nplugins: [logbook: {coverage: none}]\n", r"mkdocs\.yml: 'coverage'"),
    "wrong word": ("docs_dir: entries\nplugins: [logbook: {fail_on: [targets]}]\n", "Did you mean 'target'"),
    "wrong smallest change": ("docs_dir: entries\nplugins: [logbook: {matters: {nf: 1 dBm}}]\n", "'1 dBm'"),
    "parent missing": ("INHERIT: nowhere.yml\n", r"nowhere\.yml"),
}


@pytest.mark.parametrize("name", BAD_SITES)
def test_a_site_that_cannot_be_read(name: str, here: Path, run: Run) -> None:
    (here / "entries").mkdir()
    (here / "mkdocs.yml").write_text(BAD_SITES[name][0], encoding="utf-8")
    status, _, err = run("check")
    assert status == 3
    assert re.search(BAD_SITES[name][1], err)


def test_a_site_further_up_counts_only_for_its_own_folder(here: Path, run: Run) -> None:
    (here / "mkdocs.yml").write_text("site_name: Outer\ndocs_dir: entries\n", encoding="utf-8")
    for name in ("entries", "others"):
        (here / name).mkdir()
    assert json.loads(results(run, "entries")[1])["title"] == "Outer"
    assert json.loads(results(run, "others")[1])["title"] == "Logbook"


# --- new -----------------------------------------------------------------------------------------


def test_new_entry(here: Path, run: Run) -> None:
    status, out, _ = run("new", "Größere Röhre & Co: #1", "--date", "2026-05-09")
    assert (status, out) == (0, "entries/2026-05-09-grossere-rohre-co-1.md\n")
    written = Path(out.strip()).read_text(encoding="utf-8")
    assert written.startswith('---\ntitle: "Größere Röhre & Co: #1"\ndate: 2026-05-09\n---\n')
    assert run("check")[0] == 0


def test_new_never_overwrites(here: Path, run: Run) -> None:
    paths = [run("new", "Again", "--date", "2026-05-09")[1].strip() for _ in range(3)]
    assert [Path(path).name for path in paths] == [f"2026-05-09-again{n}.md" for n in ("", "-2", "-3")]


def test_new_is_of_today(here: Path, run: Run) -> None:
    before = date.today()
    name = Path(run("new", "Now")[1]).name
    assert before <= date.fromisoformat(name[:10]) <= date.today()


def test_new_in_the_folder_of_the_site(here: Path, run: Run) -> None:
    (here / "mkdocs.yml").write_text("docs_dir: notes\n", encoding="utf-8")
    assert run("new", "First", "--date", "2026-05-09")[1] == "notes/2026-05-09-first.md\n"
    assert run("new", "First", ".", "--date", "2026-05-10")[1] == "notes/2026-05-10-first.md\n"


@pytest.mark.parametrize(
    ("arguments", "front"),
    [
        (["--revision", "B"], "revision: B\n---"),
        (["--revision", "C"], "revision: C\nfrom: B\n---"),
        (["--revision", "C", "--state", "planned"], "revision: C\nfrom: B\nstate: planned\n---"),
        (["--revision", "C", "--date", "2026-01-15"], "revision: C\nfrom: A\n---"),
        (["--revision", "No", "--state", "trial"], 'revision: "No"\nfrom: B\nstate: trial\n---'),
    ],
)
def test_new_entry_of_a_revision_brings_no_problem(here: Path, run: Run, arguments: list[str], front: str) -> None:
    worse(here / "entries")
    status, out, _ = run("new", "Next", *arguments)
    assert status == 0
    assert front in Path(out.strip()).read_text(encoding="utf-8")
    status, _, err = run("check")
    assert (status, err) == (0, "")


@settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(title=st.text(st.characters(exclude_categories=["Cs"]), max_size=80))
def test_any_title_makes_an_entry_without_a_problem(tmp_path: Path, title: str) -> None:
    folder = tmp_path / "any"
    folder.mkdir(exist_ok=True)
    for old in folder.glob("*.md"):
        old.unlink()
    status = main(["new", "--date", "2026-05-09", "--", title, str(folder)])
    book = make_book(find_sources(folder), folder)
    assert list(book.problems) == []
    assert len(book.entries) == (1 if status == 0 else 0)
    if title.isprintable() and title.strip():
        assert [entry.title for entry in book.entries] == [" ".join(title.split())]
    assert all(re.fullmatch(r"2026-05-09-[a-z0-9-]+\.md", file.name) for file in folder.iterdir())


def test_blocks_of_a_new_entry_are_in_a_comment_and_good_to_use(here: Path, run: Run) -> None:
    path = Path(run("new", "First", "--date", "2026-05-09", "--revision", "A")[1].strip())
    book = make_book(find_sources(path.parent), path.parent)
    assert [entry.blocks for entry in book.entries] == [()]
    text = path.read_text(encoding="utf-8")
    chain = re.search(r"```yaml chain\n.*?```\n", text, re.S)
    assert chain is not None
    path.write_text(text.replace("<!--", chain[0] + "\n<!--"), encoding="utf-8")
    assert run("check") == (0, run("check")[1], "")
    assert list(make_book(find_sources(path.parent), path.parent).revisions["A"].chains) == ["rx"]


# --- compare -------------------------------------------------------------------------------------


def side_branches(folder: Path) -> None:
    """Two trials that both come from A, and know nothing of one another."""
    write(folder, "2026-01-01", "revision: A\n", ("chain", CHAIN % "1.0"))
    for label, day, nf in (("B", "2026-02-01", "2.0"), ("C", "2026-03-01", "4.0")):
        front = f"revision: {label}\nfrom: A\nstate: trial\n"
        write(folder, day, front, ("chain", CHAIN % nf), ("reading", READING % f"{nf}(1) dB"))


def test_compare_any_two_revisions(here: Path, run: Run) -> None:
    side_branches(here / "entries")
    status, out, _ = run("compare", "B", "C")
    assert status == 0
    for words in ("From B to C", "Measured", "Predicted", "+2.00", "worse"):
        assert words in out, words
    status, out, _ = run("compare", "C", "B", "entries")
    assert status == 0
    assert "-2.00" in out
    assert "better" in out


def test_compare_with_the_budget_names_the_sources(here: Path, run: Run) -> None:
    side_branches(here / "entries")
    assert "lna gain" not in run("compare", "B", "C")[1]
    out = run("compare", "B", "C", "--budget")[1]
    for words in ("lna gain", "nf reading", "0.14"):  # sqrt(2) * 0.1 dB, closed form
        assert words in out, words


def test_compare_says_what_is_not_there(here: Path, run: Run) -> None:
    write(here / "entries", "2026-01-01", "revision: A\n", ("chain", CHAIN % "1.0"))
    write(here / "entries", "2026-02-01", "revision: B\nstate: planned\n", ("chain", CHAIN % "2.0"))
    out = run("compare", "A", "B")[1]
    assert "Neither A nor B has been measured." in out


# --- as a program --------------------------------------------------------------------------------


def program(folder: Path, *arguments: str, **environment: str) -> subprocess.CompletedProcess[bytes]:
    paths = os.pathsep.join([str(ROOT), os.environ.get("PYTHONPATH", "")])
    return subprocess.run(
        [sys.executable, *arguments],
        cwd=folder,
        env={**os.environ, "PYTHONPATH": paths, **environment},
        capture_output=True,
        check=False,
    )


def test_as_a_module_on_a_terminal_that_knows_ascii_only(tmp_path: Path) -> None:
    worse(tmp_path / "entries", ("reading", "results: {nf: 3 µV}\n"))
    done = program(tmp_path, "-m", "logbook", "check", PYTHONIOENCODING="ascii", PYTHONUTF8="0")
    assert done.returncode == 1
    assert b"Traceback" not in done.stderr
    assert b"'3 ?V'" in done.stderr
    assert b"? 0.10 dB" in done.stdout


def test_check_needs_neither_the_site_builder_nor_the_drawing_library(tmp_path: Path) -> None:
    worse(tmp_path / "entries")
    code = (
        "import sys; from logbook.cli import main; status = main(['check', '--results', 'out.json']);"
        "heavy = {'mkdocs', 'matplotlib', 'scipy', 'jsonschema', 'importlib.metadata'} & set(sys.modules);"
        "sys.exit(f'imported: {heavy}' if heavy else status)"
    )
    done = program(tmp_path, "-c", code)
    assert (done.returncode, done.stderr) == (0, b"")


def test_help_answers_without_the_engine(tmp_path: Path) -> None:
    code = (
        "import sys; from logbook.cli import main\n"
        "try: main(['--help'])\nexcept SystemExit: pass\n"
        "sys.exit(str({'numpy', 'yaml', 'logbook.book'} & set(sys.modules) or ''))"
    )
    done = program(tmp_path, "-c", code)
    assert done.stderr.strip() == b""


def test_a_reader_that_goes_away_is_no_fault(tmp_path: Path) -> None:
    worse(tmp_path / "entries")
    reading, writing = os.pipe()
    os.close(reading)
    paths = os.pathsep.join([str(ROOT), os.environ.get("PYTHONPATH", "")])
    done = subprocess.run(
        [sys.executable, "-m", "logbook", "check"],
        cwd=tmp_path,
        env={**os.environ, "PYTHONPATH": paths},
        stdout=writing,
        stderr=subprocess.PIPE,
        check=False,
    )
    os.close(writing)
    assert (done.returncode, done.stderr) == (0, b"")
