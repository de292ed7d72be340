"""results.json: every name of its contract, held against the schema that is shipped with it."""

from __future__ import annotations

import json
import re
from copy import deepcopy
from math import inf, nan
from pathlib import Path
from typing import Any

import pytest
from jsonschema import Draft202012Validator

from logbook.book import Book, Settings, SourceFile, find_sources, make_book
from logbook.results import SCHEMA, results_data, results_json, schema_text
from logbook.results.numbers import number

DEMONSTRATION = Path(__file__).parent.parent / "entries"

CHAIN = """\
chain: rx
signal: 50.1 MHz
level: -60 dBm
bandwidth: 10 kHz
snr: 10 dB
lineup: {input: -42 dBm, at: detector, level: -12 dBm, adjust: vga}
stages:
  - {name: lna, gain: 18 ± 0.5 dB, nf: 1.1 ± 0.2 dB, oip3: 24 dBm, op1db: 10 dBm, part: A1, note: from the drawer}
  - {name: mixer, gain: -6.5 dB, nf: 7 dB, iip3: 13 dBm, lo: 71.5 MHz}
  - {name: vga, gain_range: [-4 dB, 28 dB], nf: 9 dB, op1db: 7 dBm}
  - {name: detector, gain: 0 dB, noise_voltage: 1.5 nV/rtHz, termination: 50 ohm}
"""
BENCH = """\
bench: shack
reads: {accuracy: ± 1.5 dB, linearity: ± 0.3 dB, rbw_filter: gaussian}
path:
  - {name: tap, loss: 30 ± 0.4 dB}
"""
READING = """\
at: 50.1 MHz
rbw: 10 kHz
averaging: log
bench: shack
through: [tap]
results: {output_noise: %s, noise_floor: -125(1) dBm}
"""
TARGET = "quantity: noise_floor\nat: 50.1 MHz\nrbw: 10 kHz\nlimit: <= -127 dBm\nwhy: to hear the beacon\n"


def entry(day: str, front: str, *blocks: tuple[str, str], title: str = "Session") -> SourceFile:
    fences = "\n".join(f"```yaml {kind}\n{text}```\n" for kind, text in blocks)
    return SourceFile(f"{day}-a.md", f"---\ntitle: {title}\ndate: {day}\n{front}---\n\n{fences}".encode())


def whole() -> list[SourceFile]:
    """A small logbook with something in every list of the results."""
    plan = "chain: rx\nwhy: more gain\nsteps:\n  - set: lna\n    to: {gain: 22 dB, nf: 0.8 dB}\n"
    what_if = plan + "what_if:\n  - {name: cooler, steps: [{set: lna, to: {nf: 0.5 dB}}], parts: 12 EUR}\n"
    return [
        entry(
            "2026-01-01",
            "revision: A\n",
            ("bench", BENCH),
            ("chain", CHAIN),
            ("target", TARGET),
            ("reading", READING % "-98.0(2) dBm"),
            ("todo", "- {id: relay, what: replace the relay}\n"),
            ("parts", "- {item: relay, quantity: 2, price: 1.50 EUR}\n"),
        ),
        entry("2026-02-01", "revision: B\nstate: planned\n", ("change", what_if)),
        entry("2026-03-01", "revision: B\n", ("change", "chain: rx\nas_planned: true\n")),
        entry("2026-04-01", "", ("reading", READING % "-90.0(2) dBm"), ("reading", READING % "-94.0(1) dBm")),
        entry("2026-05-01", "", ("todo", "done: relay\n"), ("bench", "bench: shack\nreeds: {}\n")),
        entry("2026-06-01", "revision: C\nstate: planned\n", ("change", what_if)),
    ]


def bare() -> list[SourceFile]:
    """No doubt stated, hardly anything known of the chain."""
    chain = "chain: tx\nsignal: 50 MHz\nstages:\n  - {name: amp, gain: 10 dB}\n"
    reading = "results: {hum: {value: 3 mV, better: lower}}\n"
    return [entry("2026-01-01", "revision: A\n", ("chain", chain), ("reading", reading))]


def made(sources: list[SourceFile], **settings: Any) -> Book:
    return make_book(sources, None, Settings(**settings))


def demonstration() -> Book:
    return make_book(find_sources(DEMONSTRATION), DEMONSTRATION)


def broken() -> list[SourceFile]:
    text = b"---\ndate: 2026-01-01\nrevision: A\n---\n```yaml chain\n[\n"
    return [SourceFile("a.md", text), SourceFile("b.md", b"\xff")]


BOOKS = {
    "empty": lambda: made([]),
    "whole": lambda: made(whole()),
    "bare": lambda: made(bare()),
    "broken": lambda: made(
        [SourceFile("a.md", b"---\ndate: 2026-01-01\n---\n```yaml chain\n[\n"), SourceFile("b", b"\xff")]
    ),
    "demonstration": demonstration,
}


@pytest.fixture(scope="module")
def validator() -> Draft202012Validator:
    schema = json.loads(schema_text())
    Draft202012Validator.check_schema(schema)
    return Draft202012Validator(schema)


@pytest.mark.parametrize("name", BOOKS)
def test_results_keep_to_the_schema(name: str, validator: Draft202012Validator) -> None:
    data = json.loads(results_json(BOOKS[name]()))
    assert [f"{list(e.path)}: {e.message}" for e in validator.iter_errors(data)] == []


def test_every_list_of_the_whole_example_holds_something() -> None:
    data = results_data(made(whole()))
    assert [name for name, value in data.items() if isinstance(value, list) and not value] == []
    by_label = {revision["label"]: revision for revision in data["revisions"]}
    assert by_label["B"]["planned"]["state"] == "planned"
    assert [(each["name"], each["cost"], each["currency"]) for each in by_label["C"]["alternatives"]] == [
        ("cooler", 12.0, "EUR")
    ]


# The names that others rely on, written out once more so that the schema cannot drift from it.
CONTRACT = {
    "": "schema title entries revisions results deltas agreement targets regressions todo problems",
    "entries": "path title date revision",
    "revisions": "label from state date entry chains planned",
    "results": "key quantity chain at_hz name revision entry line block basis value unit u shown",
    "deltas": "key from to basis before after delta unit u verdict why",
    "agreement": "key revision measured predicted en verdict shares",
    "targets": "key limit revision basis value u probability verdict",
    "regressions": "key from to kind delta accepted why",
    "todo": "id what opened closed",
    "problems": "file line column severity code message hint",
}
NODE = "stage frequency_hz gain_db nf_db noise_dbm level_dbm iip3_dbm ip1db_dbm headroom_db noise_share iip3_share"
TOTALS = (
    "gain nf noise_temperature noise_floor noise_density output_noise iip3 oip3 iip2 oip2 ip1db op1db sfdr sensitivity "
    "setting range_left"
)


@pytest.mark.parametrize("name", CONTRACT)
def test_names_of_the_contract(name: str) -> None:
    data = results_data(made(whole()))
    for item in [data] if not name else data[name]:
        assert set(CONTRACT[name].split()) <= set(item)


def test_names_within_a_chain_and_a_result() -> None:
    data = results_data(made(whole()))
    chain = data["revisions"][0]["chains"]["rx"]
    assert {"stages", "nodes", "totals", "lineup"} <= set(chain)
    assert all(set(NODE.split()) <= set(node) for node in chain["nodes"])
    assert set(TOTALS.split()) <= set(chain["totals"])
    assert all({"value", "unit", "u"} <= set(total) for total in chain["totals"].values())
    assert {"value", "rbw_hz", "averaging", "through"} <= set(data["results"][0]["shown"])
    share = next(found for found in data["agreement"] if found["shares"])["shares"][0]
    assert {"stage", "parameter", "share", "shift"} <= set(share)
    assert set(data["revisions"][1]["planned"]) == set(data["revisions"][0]) - {"label", "entries", "planned"}


def paths(data: Any, here: tuple[str | int, ...] = ()) -> list[tuple[str | int, ...]]:
    """Where every name of an example stands; the first item of each list stands for all."""
    if isinstance(data, list):
        return paths(data[0], (*here, 0)) if data else []
    if not isinstance(data, dict):
        return []
    found = [(*here, key) for key in data]
    return found + [path for key, value in data.items() for path in paths(value, (*here, key))]


def test_schema_misses_every_name_that_is_dropped_and_refuses_one_that_is_added(
    validator: Draft202012Validator,
) -> None:
    example = json.loads(results_json(made(whole())))
    # By the user's own names, these may be anything.
    free = {("chains", "rx")} | {("parameters", name) for name in ("gain", "nf", "iip3", "oip3", "op1db")}
    missed = []
    for path in paths(example):
        changed = deepcopy(example)
        holder = changed
        for step in path[:-1]:
            holder = holder[step]
        del holder[path[-1]]
        if path[-2:] not in free and validator.is_valid(changed):
            missed.append(path)
        holder["an_unknown_name"] = 1
        if path[-2:] not in free and path[-2:-1] not in (("chains",), ("parameters",)):
            assert not validator.is_valid(changed), path
    assert missed == []


def test_values_are_those_of_the_book() -> None:
    book = made(whole(), title="Monitor", coverage=3.0)
    data = json.loads(results_json(book))
    assert (data["schema"], data["title"], data["coverage"]) == (SCHEMA, "Monitor", 3.0)
    assert [r["key"] for r in data["results"]] == [r.key for r in book.results]
    first = next(r for r in data["results"] if r["basis"] == "measured")
    # As read -98 dBm with log averaging behind 30 dB; a gaussian filter's noise bandwidth is 1.065 of its RBW
    # (0.27 dB; closed form sqrt(pi/ln 2)/2), log averaging shows 2.51 dB too little (common practice).
    assert first["shown"]["value"] == -98.0
    assert first["shown"]["through"] == ["tap"]
    assert first["value"] == pytest.approx(-98 + 2.51 + 30 - 0.27, abs=0.01)
    assert sum(step["db"] for step in first["corrections"]) == pytest.approx(first["value"] + 98.0, abs=1e-9)
    assert data["todo"] == [
        {"id": "relay", "what": "replace the relay", "opened": "2026-01-01-a.md", "closed": "2026-05-01-a.md"}
    ]
    assert [(p["file"], p["line"], p["code"]) for p in data["problems"]] == [("2026-05-01-a.md", 12, "unknown-key")]


def test_totals_that_are_not_known_are_null_and_say_why() -> None:
    totals = results_data(made(bare()))["revisions"][0]["chains"]["tx"]["totals"]
    assert totals["gain"] == {"value": 10.0, "unit": "dB", "u": None, "why": None}
    assert totals["nf"]["value"] is None
    assert "amp" in totals["nf"]["why"]
    assert totals["setting"] == {"value": None, "unit": "dB", "u": None, "why": "not asked for"}


def test_two_runs_give_the_same_bytes_whatever_the_order_of_the_files() -> None:
    sources = whole()
    once, again = results_json(made(sources)), results_json(made(sources[::-1]))
    assert once == again
    assert once.endswith(b"}\n")
    assert json.loads(once)["results"]


def test_no_path_of_this_machine_and_nothing_that_json_does_not_know() -> None:
    data = results_json(demonstration()).decode("utf-8")
    assert str(DEMONSTRATION.parent) not in data
    assert re.search(r"[:\[ ](NaN|-?Infinity|-0\.0)[,\]}]", data) is None


def test_one_line_for_each_item() -> None:
    lines = results_json(made(whole())).decode().splitlines()
    items = [json.loads(line.rstrip(",")) for line in lines if line.startswith("{") and line != "{"]
    data = results_data(made(whole()))
    assert len(items) == sum(len(value) for value in data.values() if isinstance(value, list))


@pytest.mark.parametrize(
    ("value", "shown"), [(nan, "null"), (inf, "null"), (-inf, "null"), (None, "null"), (-0.0, "0.0")]
)
def test_numbers_that_json_lacks(value: float | None, shown: str) -> None:
    assert json.dumps(number(value)) == shown


def test_text_of_any_sort_survives() -> None:
    title = 'Ümläut \u2028 "quoted" \\ \U0001f4fb'
    data = results_json(made([], title=title))
    assert json.loads(data)["title"] == title
    # A file's name may hold bytes that are not UTF-8; Python carries them as lone surrogates.
    assert json.loads(results_json(made([], title="a\udcffb")))["title"] == "a\udcffb"
