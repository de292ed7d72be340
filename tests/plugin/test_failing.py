"""When a build fails: what was asked for, after the site is there."""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Sequence

import pytest
from building import FIRST, FRONT, READING, SECOND, Project
from mkdocs.exceptions import Abort, ConfigurationError

BROKEN = SECOND.replace("2.4(1) dB", "2.4(1) dBm")
WORSE = """```yaml reading
at: 50.1 MHz
results:
  nf: 4.4(1) dB
```
"""
CHANGE = """```yaml change
chain: rx
steps:
  - set: lna
    to: {nf: 3 dB}
```
"""
TARGET = """```yaml target
quantity: nf
at: 50.1 MHz
limit: <= 2 dB
```
"""


def third(*blocks: str) -> str:
    return FRONT.format(title="Worse", date="2026-01-12", more="revision: B\n") + "\n".join((CHANGE, *blocks))


def built(project: Project, fail_on: Sequence[str] | str | None = None, **settings: object) -> str:
    """What the build ended with; empty when it ended well. The site must be whole either way."""
    options = {} if fail_on is None else {"fail_on": fail_on}
    project.configure({"logbook": options})
    ended = ""
    try:
        project.build(**settings)
    except Abort as error:
        ended = str(error)
    assert (project.site / "2026-01-11-numbers.html").is_file()
    assert (project.site / "data" / "results.json").is_file()
    return ended


@pytest.fixture
def worse(project: Project) -> Project:
    """A logbook without a problem, with a regression that nobody accepted and a target that is missed."""
    project.write("2026-01-10-first.md", FIRST)
    project.write("2026-01-11-numbers.md", SECOND)
    project.write("2026-01-12-worse.md", third(WORSE, TARGET))
    return project


@pytest.fixture
def faulty(project: Project) -> Project:
    """A logbook with one problem."""
    project.write("2026-01-10-first.md", FIRST)
    project.write("2026-01-11-numbers.md", BROKEN)
    return project


def test_a_problem_fails_the_build_unless_told_otherwise(faulty: Project) -> None:
    assert built(faulty) != ""
    assert built(faulty, fail_on=[]) == ""
    assert built(faulty, fail_on=["regression", "target"]) == ""


def test_strict_fails_on_a_problem_whatever_the_option_says(faulty: Project) -> None:
    assert built(faulty, strict=True) != ""
    assert "1 warning" in built(faulty, fail_on=[], strict=True)


def test_the_failure_says_how_many_and_where_the_site_is(faulty: Project, caplog: pytest.LogCaptureFixture) -> None:
    built(faulty)
    said = [record.getMessage() for record in caplog.records]
    assert f"1 problem; the site is in {faulty.site}" in said
    assert [s for s in said if s.startswith("logbook: 2026-01-11-numbers.md:11:")], "each problem by its own place"


def test_a_regression_and_a_missed_target_fail_only_when_asked(
    worse: Project, caplog: pytest.LogCaptureFixture
) -> None:
    assert built(worse) == ""
    assert built(worse, strict=True) == ""
    for asked, words in (("regression", "1 regression not accepted"), ("target", "1 target missed")):
        caplog.clear()
        assert built(worse, fail_on=[asked]) != ""
        assert [r for r in caplog.records if r.getMessage().startswith(words)], asked
    caplog.clear()
    assert built(worse, fail_on=["problem", "regression", "target"]) != ""
    (said,) = [r.getMessage() for r in caplog.records if "not accepted" in r.getMessage()]
    assert said.startswith("1 regression not accepted, 1 target missed")


def test_an_accepted_regression_does_not_fail(worse: Project) -> None:
    accept = "```yaml accept\nquantity: nf\nat: 50.1 MHz\nwhy: the other amplifier died\n```\n"
    worse.write("2026-01-12-worse.md", third(WORSE, accept))
    assert built(worse, fail_on=["regression"]) == ""


@pytest.mark.parametrize(
    ("options", "named"),
    [({"fail_on": ["regresion"]}, "regression"), ({"coverage": 0}, "coverage"), ({"fail_no": []}, "fail_no")],
)
def test_an_option_that_cannot_be_used_is_named(
    project: Project, options: dict[str, object], named: str, caplog: pytest.LogCaptureFixture
) -> None:
    project.write("2026-01-10-first.md", FIRST)
    project.configure({"logbook": options})
    with pytest.raises((Abort, ConfigurationError)) as stopped:
        project.build(strict=True)
    said = " ".join([str(stopped.value), *(record.getMessage() for record in caplog.records)])
    assert named in said


def test_the_command_ends_with_a_status_and_no_traceback(faulty: Project) -> None:
    command = [sys.executable, "-m", "mkdocs", "build", "--strict"]
    done = subprocess.run(command, cwd=faulty.folder, capture_output=True, text=True, check=False)
    assert done.returncode == 1
    assert "2026-01-11-numbers.md:11:" in done.stderr
    assert "Traceback" not in done.stderr
    faulty.write("2026-01-11-numbers.md", FRONT.format(title="Numbers", date="2026-01-11", more="") + READING)
    done = subprocess.run(command, cwd=faulty.folder, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr
