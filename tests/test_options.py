"""What a user may set, for the site and for the command line alike."""

from __future__ import annotations

from typing import Any

import pytest

from logbook.options import OptionError, read_options


@pytest.mark.parametrize(
    ("written", "found"),
    [
        (["regression", "target"], {"regression", "target"}),
        ("problem,regression", {"problem", "regression"}),
        ("target", {"target"}),
        ([], set()),
        ("", set()),
        (None, set()),
    ],
)
def test_fail_on(written: Any, found: set[str]) -> None:
    assert read_options("M", {"fail_on": written}).fail_on == found


@pytest.mark.parametrize(("written", "k"), [(2, 2.0), (1.96, 1.96), ("3", 3.0)])
def test_coverage(written: Any, k: float) -> None:
    assert read_options("M", {"coverage": written}).settings.coverage == k


@pytest.mark.parametrize(("written", "value"), [("0.3 dB", 0.3), ("2 %", 0.02), (0.05, 0.05), (0, 0.0)])
def test_smallest_change(written: Any, value: float) -> None:
    assert read_options("M", {"matters": {"gain": written}}).settings.matters == {"gain": pytest.approx(value)}


def test_what_is_not_set() -> None:
    options = read_options(None, {})
    assert options.fail_on == {"problem"}
    assert (options.settings.title, options.settings.coverage, options.settings.matters) == ("Logbook", 2.0, {})


@pytest.mark.parametrize(
    ("given", "words"),
    [
        ({"coverage": 0}, "coverage"),
        ({"coverage": -2}, "coverage"),
        ({"coverage": float("nan")}, "coverage"),
        ({"coverage": True}, "coverage"),
        ({"coverage": None}, "coverage"),
        ({"coverage": [2]}, "coverage"),
        ({"fail_on": ["targets"]}, "Did you mean 'target'"),
        ({"fail_on": 3}, "fail_on"),
        ({"matters": ["gain"]}, "matters"),
        ({"matters": {"gain": "0.3 dBm"}}, "'0.3 dBm'"),
        ({"matters": {"gain": "0,3 dB"}}, "'0,3 dB'"),
        ({"matters": {"gain": -1}}, "gain"),
        ({"matters": {"gain": True}}, "gain"),
    ],
)
def test_what_cannot_be_used(given: dict[str, Any], words: str) -> None:
    with pytest.raises(OptionError, match=words):
        read_options("M", given)
