"""Emission rules as files: those shipped say where they come from; the faults of a logbook's own are located."""

from __future__ import annotations

import math

import pytest

from logbook.problems import Problems
from logbook.rules import Rule, read_rule, shipped_rules

RULE = """\
rule: own
title: Own limits
regulation: Licence conditions
paragraph: "4.2"
edition: of 2020
carrier: [1 MHz, 30 MHz]
limits:
  - {below_carrier: 50 dB}
"""


def dbm(watt: float) -> float:
    return 10 * math.log10(watt) + 30


def read(content: str) -> tuple[Rule | None, list[tuple[int, int, str]]]:
    problems = Problems()
    rule = read_rule(content, "rules/own.yml", problems)
    assert all(p.place.file == "rules/own.yml" for p in problems)
    return rule, [(p.place.line, p.place.column, p.code) for p in problems]


def test_shipped_rules_say_where_they_come_from_and_what_they_leave_out() -> None:
    rules = shipped_rules()
    assert set(rules) == {"us-97-307-d-after-2003", "us-97-307-d-until-2003", "us-97-307-e", "us-95-779-a-3"}
    for name, rule in rules.items():
        assert rule.name == name
        assert rule.regulation.startswith("47 CFR ")
        assert rule.paragraph.startswith("(")
        assert "text in force" in rule.edition
        assert rule.left_out


@pytest.mark.parametrize(
    ("name", "carrier_hz", "watt", "below"),
    [
        # 47 CFR 97.307(e), (d) and 95.779(a)(3).
        ("us-97-307-e", 50e6, 5.0, 53.0),
        ("us-97-307-e", 50e6, 25.0, 60.0),
        ("us-97-307-e", 50e6, 100.0, 60.0),
        ("us-97-307-e", 144e6, 0.2, 40.0),
        ("us-97-307-e", 144e6, 0.05, 37.0),
        ("us-97-307-d-after-2003", 14e6, 100.0, 43.0),
        ("us-97-307-d-after-2003", 14e6, 1.0, 43.0),
        ("us-97-307-d-until-2003", 14e6, 100.0, 40.0),
        ("us-97-307-d-until-2003", 14e6, 4.9, 30.0),
        ("us-97-307-d-until-2003", 14e6, 5.0, 40.0),
        ("us-97-307-d-until-2003", 14e6, 1500.0, 44.8),
        ("us-95-779-a-3", 72e6, 4.0, 49.0),
    ],
)
def test_published_limits(name: str, carrier_hz: float, watt: float, below: float) -> None:
    rule = shipped_rules()[name]
    assert rule.why_not(carrier_hz, dbm(watt)) == ""
    assert dbm(watt) - rule.allowed_dbm(dbm(watt)) == pytest.approx(below, abs=0.05)


@pytest.mark.parametrize(
    ("name", "carrier_hz", "watt", "words"),
    [
        ("us-97-307-e", 14e6, 5.0, "carriers from 30 MHz to 225 MHz, and this one is at 14 MHz"),
        ("us-97-307-e", 432e6, 5.0, "this one is at 432 MHz"),
        ("us-97-307-d-after-2003", 50e6, 5.0, "carriers from 0 Hz to 30 MHz"),
        ("us-95-779-a-3", 72e6, 30.0, "carriers up to 43.98 dBm"),
    ],
)
def test_a_rule_that_does_not_cover_a_carrier_says_why(name: str, carrier_hz: float, watt: float, words: str) -> None:
    assert words in shipped_rules()[name].why_not(carrier_hz, dbm(watt))


def test_a_rule_of_ones_own() -> None:
    text = RULE.replace("carrier: [1 MHz, 30 MHz]", "carrier: [1 MHz, 30 MHz]\nlines: [30 MHz, 1 GHz]\nnote: mine")
    rule, faults = read(text.replace("\n", "\r\n"))
    assert faults == []
    assert rule is not None
    assert (rule.name, rule.paragraph, rule.note, rule.left_out) == ("own", "4.2", "mine", ())
    assert [rule.covers_line(f) for f in (29e6, 30e6, 1e9, 1.1e9)] == [False, True, True, False]
    assert rule.allowed_dbm(30.0) == -20.0


def test_a_power_without_a_limit_is_said() -> None:
    rule, _ = read(RULE.replace("{below_carrier", "{up_to: 5 W, below_carrier"))
    assert rule is not None
    assert "gives no limit for a carrier of 40.00 dBm" in rule.why_not(10e6, 40.0)
    assert math.isnan(rule.allowed_dbm(40.0))


@pytest.mark.parametrize("turned", [False, True])
def test_the_order_of_the_limits_does_not_matter(turned: bool) -> None:
    limits = [
        "  - {below: 5 W, below_carrier: 30 dB}",
        "  - {up_to: 100 W, below_carrier: 40 dB}",
        "  - {at_most: 1 mW}",
    ]
    lines = limits[::-1] if turned else limits
    rule, faults = read(RULE.replace("  - {below_carrier: 50 dB}", "\n".join(lines)))
    assert rule is not None, faults
    assert [rule.allowed_dbm(dbm(watt)) - dbm(watt) for watt in (4.9, 5.0, 100.0)] == [-30.0, -40.0, -40.0]
    assert rule.allowed_dbm(dbm(101.0)) == 0.0


@pytest.mark.parametrize(
    ("old", "new", "fault"),
    [
        ("carrier: [1 MHz, 30 MHz]", "carrier: [30 MHz, 1 MHz]", (6, 10, "pair")),
        ("carrier: [1 MHz, 30 MHz]", "carrier: [1 MHz]", (6, 10, "pair")),
        ("carrier: [1 MHz, 30 MHz]", "carrier: [1 dB, 30 MHz]", (6, 13, "dimension")),
        ("limits:", "lines: [2 GHz, 1 GHz]\nlimits:", (7, 8, "pair")),
        ("{below_carrier: 50 dB}", "{up_to: 5 W}", (8, 5, "limit")),
        ("{below_carrier: 50 dB}", "{}", (8, 5, "limit")),
        ("{below_carrier: 50 dB}", "{up_to: 5 W, below: 4 W, at_most: 1 mW}", (8, 25, "limit")),
        ("{below_carrier: 50 dB}", "{below_carrier: -50 dB}", (8, 21, "sign")),
        ("{below_carrier: 50 dB}", "{below_carrier: 50 dBc}", (8, 24, "dimension")),
        ("{below_carrier: 50 dB}", "{below_carier: 50 dB}", (8, 6, "unknown-key")),
        ("{below_carrier: 50 dB}", "{at_most: 0 W}", (8, 15, "sign")),
        ("limits:\n  - {below_carrier: 50 dB}", "limits: []", (7, 9, "empty")),
        ("edition: of 2020\n", "", (1, 1, "missing-key")),
        ("title: Own limits", "title Own limits", (2, 1, "yaml-syntax")),
        (RULE, "", (1, 1, "empty-rule")),
        (RULE, "- a\n- b\n", (1, 1, "not-mapping")),
    ],
)
def test_faults_of_a_rule_are_located_in_its_file(old: str, new: str, fault: tuple[int, int, str]) -> None:
    assert old in RULE
    rule, faults = read(RULE.replace(old, new))
    assert fault in faults
    assert rule is None or fault[2] == "unknown-key"
