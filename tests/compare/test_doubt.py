"""The doubt of a difference: what both readings share cancels, and nothing else does."""

from __future__ import annotations

import math

import numpy as np
import pytest
import uncertainties
from uncertainties import umath
from uncertainties.unumpy import std_devs
from workshop import block, book_of, chain, change, delta, entry, reading

from logbook.book import Book, Settings, SourceFile, make_book
from logbook.findings import Delta

CHAIN = chain("name: amp, gain: 20 dB, nf: 3 dB")
CHANGED = change("  - {set: amp, to: {gain: 21 dB}}")


def bench(name: str = "shack", accuracy: str = "± 0.866025404 dB", rest: str = "", path: str = "") -> str:
    return block("bench", f"bench: {name}\nreads: {{accuracy: {accuracy}{rest}}}" + (f"\npath: {path}" if path else ""))


def compared(
    before: str,
    after: str,
    *,
    first: str = "bench: shack",
    second: str = "bench: shack",
    benches: str = "",
    later: str = "",
) -> Delta:
    """`before` and `after` as output levels on A and B; `later` is a bench block in B's entry."""
    book = book_of(
        entry("01-01", CHAIN, benches or bench(), reading(f"output_level: {before}", first), revision="A"),
        entry("02-01", CHANGED, later, reading(f"output_level: {after}", second), revision="B"),
    )
    return delta(book, "rx/output_level", "B")


def test_two_readings_on_one_bench() -> None:
    # Closed form: 0.5 dB shared, 0.10 dB fresh in each: 0.141 dB; 0.721 dB if they were independent.
    found = compared("-10.00(10) dBm", "-9.00(10) dBm")
    assert found.u == pytest.approx(0.1414, abs=0.0001)
    assert found.before_result is not None
    assert found.before_result.u == pytest.approx(math.hypot(0.5, 0.1))
    cancelled = [row for row in found.budget if row.cancelled]
    assert [(row.source.what, row.contribution) for row in cancelled] == [("accuracy", 0.0)]
    assert [row.contribution for row in found.budget if not row.cancelled] == pytest.approx([0.1, 0.1])


def test_another_bench_does_not_cancel() -> None:
    both = bench() + "\n" + bench("club")
    found = compared("-10.00(10) dBm", "-9.00(10) dBm", second="bench: club", benches=both)
    assert found.u == pytest.approx(0.721, abs=0.0005)
    assert not any(row.cancelled for row in found.budget)


def test_a_bench_described_anew_is_another_source() -> None:
    found = compared("-10.00(10) dBm", "-9.00(10) dBm", later=bench())
    assert found.u == pytest.approx(0.721, abs=0.0005)


def test_linearity_is_fresh_for_each_reading() -> None:
    found = compared("-10 dBm", "-9 dBm", benches=bench(rest=", linearity: 0.0 ± 0.4 dB (k=2)"))
    assert found.u == pytest.approx(0.2 * math.sqrt(2))


def test_a_pad_in_both_paths_cancels_and_one_in_a_single_path_does_not() -> None:
    benches = bench(path="[{name: tap, loss: 30.0(3) dB}, {name: pad, loss: 10.0(2) dB}]")
    both = "bench: shack\nthrough: [tap, pad]"
    assert compared("-50.0(1) dBm", "-49.0(1) dBm", first=both, second=both, benches=benches).u == pytest.approx(
        0.1 * math.sqrt(2)
    )
    single = compared(
        "-50.0(1) dBm", "-39.0(1) dBm", first=both, second="bench: shack\nthrough: [tap]", benches=benches
    )
    assert single.u == pytest.approx(math.sqrt(2 * 0.01 + 0.04))
    assert single.delta == pytest.approx(1)


def test_all_that_was_stated_cancels_and_nothing_fresh_was_stated() -> None:
    found = compared("-10 dBm", "-9 dBm")
    assert found.u is None
    assert (found.verdict, found.why, found.stated) == ("changed", "doubt not stated", False)


def test_mean_of_repeated_readings() -> None:
    # JCGM 100:2008 4.2.3: s/sqrt n of 41.8, 41.9, 41.7 is 0.0577; the gain's own sources cancel.
    book = book_of(
        entry("01-01", CHAIN, reading("gain: [41.8 dB, 41.9 dB, 41.7 dB]"), revision="A"),
        entry("02-01", CHANGED, reading("gain: [42.8 dB, 42.9 dB, 42.7 dB]"), revision="B"),
    )
    assert delta(book, "rx/gain", "B").u == pytest.approx(0.1 / math.sqrt(3) * math.sqrt(2))


@pytest.mark.parametrize("seed", range(6))
def test_random_differences_against_the_uncertainties_library(seed: int) -> None:
    """Two readings through random parts of one path, each with its own doubt; corrected or not."""
    rng = np.random.default_rng(seed)
    u = {
        name: round(float(rng.uniform(0.05, 0.6)), 3) for name in ("accuracy", "linearity", "p0", "p1", "p2", "a", "b")
    }
    path = ", ".join(f"{{name: p{n}, loss: {10 + n} ± {2 * u[f'p{n}']:.3f} dB (k=2)}}" for n in range(3))
    taken = [[f"p{n}" for n in range(3) if rng.random() < 0.6] for _ in range(2)]
    benches = bench(
        accuracy=f"0 ± {2 * u['accuracy']:.3f} dB (k=2)",
        rest=f", linearity: 0 ± {2 * u['linearity']:.3f} dB (k=2)",
        path=f"[{path}]",
    )
    conditions = [f"bench: shack\nthrough: [{', '.join(names)}]" for names in taken]
    doubts = (f"{2 * u['a']:.3f}", f"{2 * u['b']:.3f}")
    found = compared(
        f"-60 ± {doubts[0]} dBm (k=2)",
        f"-59 ± {doubts[1]} dBm (k=2)",
        first=conditions[0],
        second=conditions[1],
        benches=benches,
    )
    accuracy = uncertainties.ufloat(0, u["accuracy"])
    loss = {f"p{n}": uncertainties.ufloat(10 + n, u[f"p{n}"]) for n in range(3)}

    def level(value: float, own: float, names: list[str]) -> object:
        fresh = uncertainties.ufloat(value, own) + uncertainties.ufloat(0, u["linearity"])
        return fresh + accuracy + sum(loss[name] for name in names)

    by_library = level(-59, u["b"], taken[1]) - level(-60, u["a"], taken[0])
    assert found.delta == pytest.approx(by_library.nominal_value)
    assert found.u == pytest.approx(by_library.std_dev)


@pytest.mark.parametrize("seed", range(6))
def test_predicted_differences_against_the_uncertainties_library(seed: int) -> None:
    """The noise figure of two revisions that share most of their tolerances, differentiated by the library."""
    rng = np.random.default_rng(seed)
    values = {n: (round(float(rng.uniform(8, 18)), 2), round(float(rng.uniform(2, 8)), 2)) for n in range(3)}
    u = {n: (round(float(rng.uniform(0.02, 0.1)), 3), round(float(rng.uniform(0.02, 0.1)), 3)) for n in range(3)}
    stages = "\n".join(
        f"name: s{n}, gain: {g} ± {2 * u[n][0]:.3f} dB (k=2), nf: {f} ± {2 * u[n][1]:.3f} dB (k=2)"
        for n, (g, f) in values.items()
    )
    book = book_of(
        entry("01-01", chain(stages), revision="A"),
        entry("02-01", change("  - {set: s1, to: {nf: 2.5 ± 0.1 dB (k=2)}}"), revision="B"),
    )
    gain = {n: uncertainties.ufloat(values[n][0], u[n][0]) for n in range(3)}
    nf = {n: uncertainties.ufloat(values[n][1], u[n][1]) for n in range(3)}

    def total(figures: dict[int, uncertainties.UFloat]) -> uncertainties.UFloat:
        factor = 10 ** (figures[0] / 10)
        factor += (10 ** (figures[1] / 10) - 1) / 10 ** (gain[0] / 10)
        factor += (10 ** (figures[2] / 10) - 1) / 10 ** ((gain[0] + gain[1]) / 10)
        return 10 * umath.log10(factor)

    by_library = total({**nf, 1: uncertainties.ufloat(2.5, 0.05)}) - total(nf)
    found = delta(book, "rx/nf", "B", "predicted")
    assert found.delta == pytest.approx(by_library.nominal_value)
    # The engine takes central differences over +-u, the library derivatives.
    assert found.u == pytest.approx(float(std_devs(by_library)), rel=1e-3)


def spread_of(first: str, second: str, more: str = "") -> Book:
    return book_of(
        entry("01-01", CHAIN, bench(), reading(f"output_level: {first}", "bench: shack" + more), revision="A"),
        entry("01-02", reading(f"output_level: {second}", "bench: shack" + more)),
    )


def test_repeated_readings_that_spread_beyond_their_doubt_are_reported() -> None:
    (found,) = spread_of("-10.00(10) dBm", "-9.50(10) dBm").findings.spreads
    assert found.difference == pytest.approx(0.5)
    assert found.u == pytest.approx(0.1 * math.sqrt(2))
    assert found.revision == "A"


def test_repeated_readings_within_their_doubt_are_not() -> None:
    assert spread_of("-10.00(10) dBm", "-9.75(10) dBm").findings.spreads == []


def test_of_several_readings_the_two_that_differ_most_are_named() -> None:
    """The last one agrees with both others; these do not agree with each other."""
    book = book_of(
        entry("01-01", CHAIN, reading("gain: 20.00(10) dB"), revision="A"),
        entry("01-02", reading("gain: 20.36(10) dB")),
        entry("01-03", reading("gain: 20.18(10) dB")),
    )
    (found,) = book.findings.spreads
    assert (found.first.entry, found.second.entry) == ("2026-01-01-a.md", "2026-01-02-x.md")


def test_coverage_is_a_setting() -> None:
    sources = (
        entry("01-01", CHAIN, reading("nf: 3.00(10) dB"), revision="A"),
        entry("02-01", CHANGED, reading("nf: 2.65(10) dB"), revision="B"),
    )
    # 0.35 dB is 2.47 times its doubt.
    assert delta(book_of(*sources), "rx/nf", "B").verdict == "better"
    assert delta(book_of(*sources, settings=Settings(coverage=3)), "rx/nf", "B").verdict == "same"


def test_a_reading_after_the_calibration_was_due_is_marked() -> None:
    due = block("bench", "bench: shack\nreads: {accuracy: ± 1 dB}\ncalibrated: 2025-01-01\ndue: 2026-01-01")
    book = book_of(
        entry("01-01", CHAIN, due, reading("output_level: -10 dBm", "bench: shack"), revision="A"),
        entry("01-02", reading("output_level: -10 dBm", "bench: shack")),
    )
    first, second = (r for r in book.results if r.basis == "measured")
    assert first.notes == ()
    assert any("due" in note and "2026-01-01" in note for note in second.notes)


def test_a_bench_described_again_on_the_same_day_shares_nothing() -> None:
    """Two entries of one day, a bench of one name in each: the instrument was changed in between."""
    described = "```yaml bench\nbench: shack\nreads: {accuracy: ± 1 dB}\n```\n"
    read = "```yaml reading\nat: 50 MHz\nbench: shack\nresults:\n  output_level: {} dBm\n```\n"
    chain = "```yaml chain\nchain: rx\nsignal: 50 MHz\nstages:\n  - {name: lna, gain: 10 dB}\n```\n"
    change = "```yaml change\nchain: rx\nsteps:\n  - set: lna\n    to: {gain: 11 dB}\n```\n"
    front = "---\ntitle: T\ndate: 2026-01-01\nrevision: {}\n---\n"
    files = {
        "2026-01-01-a.md": front.format("A") + chain + described + read.format("-10.0(1)"),
        "2026-01-01-b.md": front.format("B") + change + described + read.format("-9.0(1)"),
    }
    book = make_book([SourceFile(path, text.encode()) for path, text in files.items()], None)
    (delta,) = [d for d in book.findings.deltas_to("B") if d.basis == "measured"]
    # Limits of 1 dB are u = 0.577 dB on either side, 0.1 dB fresh in each (closed form).
    assert delta.u == pytest.approx((2 * 1 / 3 + 2 * 0.1**2) ** 0.5)
