"""Good entries with something wrong put into them: no traceback, every problem in place, sound blocks unharmed."""

from __future__ import annotations

import re
from pathlib import Path

from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from logbook.book import Book, SourceFile, make_book
from logbook.html import render
from logbook.kinds import registry
from logbook.model import Result
from logbook.pages import block_pieces, generated_pages, home_pieces
from logbook.results import results_json

GROUND = (Path(__file__).parent / "entries" / "ground.md").read_text(encoding="utf-8")

HEAD = "---\ntitle: Changed\ndate: 2026-02-01\nrevision: B\n---\n\nProse ahead of the blocks.\n"

BLOCKS = (
    """chain: tx
signal: 50.1 MHz
level: -10 dBm
impedance: 50 ohm
bandwidth: 3 kHz
external_noise: 18 dB
snr: 10 dB
stages:
  - {name: driver, gain: 18 ± 0.5 dB, nf: 3.1(2) dB, oip3: 33 dBm, op1db: 20 dBm}
  - name: mixer
    loss: 6.5 dB
    nf_dsb: 7 dB
    image_rejection: 20 dB
    iip3: 13 dBm
    lo: {follows: signal, offset: 21.4 MHz}
  - {name: vga, gain_range: [-4 dB, 28 dB], nf: 9 dB}
  - {name: detector, gain: 0 dB, noise_voltage: 1.5 nV/rtHz, termination: 50 ohm}
lineup: {input: -42 dBm, at: detector, level: -12 dBm, adjust: vga}
""",
    """chain: rx
why: less noise from behind the mixer
steps:
  - insert: {name: post-amp, gain: 11.5 dB, nf: 3.2 dB, oip3: 24 dBm}
    after: mixer
  - set: lna
    to: {gain: 17.2 ± 0.3 dB}
  - replace: if-filter
    with: {name: if-filter, loss: 2.6 dB, bandwidth: 15 kHz}
  - remove: vga
""",
    """bench: club
reads: {accuracy: ± 1.0 dB, linearity: ± 0.2 dB, floor: -155 dBm/Hz, max_input: 20 dBm, rbw_filter: synchronous_4}
drives: {accuracy: ± 0.5 dB}
path:
  - {name: attenuator, loss: 20.3 ± 0.1 dB, max_input: 1 W}
calibrated: 2026-01-01
due: 2027-01-01
""",
    """chain: rx
name: one
at: 50.1 MHz
rbw: 10 kHz
averaging: log
bench: shack
through: [tap, pad]
results:
  output_noise: -100.4(3) dBm
  gain: [25.1 dB, 25.2 dB, 25.0 dB]
  agc_line: {value: 3.1 V, better: neither}
""",
    """chain: rx
name: two
at: 50.1 MHz
results: {nf: 3.2 ± 0.2 dB (k=2), iip3: -5.5 dBm}
""",
    """- {chain: rx, quantity: noise_floor, at: 50.1 MHz, rbw: 10 kHz, limit: <= -125 dBm, why: site noise}
- chain: rx
  quantity: gain
  limit: 20 dB .. 30 dB
""",
    """- {id: relay, what: replace the relay}
- {id: case, what: paint the case}
- {done: relay}
""",
)
KINDS = ("chain", "change", "bench", "reading", "reading", "target", "todo")

# Nothing here can end a fence or open a comment: what that does to the text behind it is another matter.
SNIPPETS = (
    "nan", "inf", "1e999", "-1e308", "0", "-0", "12,5", "1_000", "0x10", "1:30", "true", "null", "~", "dB", " dBm",
    "W", "MHz", "mhz", "kHz", " ± ", "±", "(3)", "(k=2)", "(k=0)", "%", "!!str ", "!x ", "&a ", "*a", "<<: ", "? ",
    "- ", ": ", ":", ",", "{", "}", "[", "]", "'", '"', "#", " # ", "|", ">", "@", "\t", "\0", "\x07", "\u200b",
    "\ufeff", "µ", "Ω", "−", "\\", "\n", "\n\n", "\n---\n", "\n...\n", "  ", "name: lna", "results:", "gain: 3 dB",
    "../../x", "/etc/x.s2p", "response: x.s2p", "999999999999999999999999999 Hz", "0.000000000000000000001 dB",
    "-273.16 degC", "1e-400 W", "é",
)  # fmt: skip


@st.composite
def mutated(draw: st.DrawFn, text: str) -> str:
    """The text after one to three mishaps."""
    for _ in range(draw(st.integers(1, 3))):
        text = draw(st.sampled_from((_line, _letter, _snippet, _word)))(draw, text)
    return text


def _line(draw: st.DrawFn, text: str) -> str:
    """A line lost, doubled, moved or shifted."""
    lines = text.split("\n")
    here, there = (draw(st.integers(0, len(lines) - 1)) for _ in range(2))
    what = draw(st.sampled_from(("lost", "doubled", "swapped", "in", "out", "tab")))
    if what == "lost":
        del lines[here]
    elif what == "doubled":
        lines.insert(there, lines[here])
    elif what == "swapped":
        lines[here], lines[there] = lines[there], lines[here]
    else:
        lines[here] = {"in": "  " + lines[here], "out": lines[here][1:], "tab": "\t" + lines[here]}[what]
    return "\n".join(lines)


def _letter(draw: st.DrawFn, text: str) -> str:
    """Some letters lost, or two swapped."""
    here = draw(st.integers(0, max(len(text) - 2, 0)))
    if draw(st.booleans()):
        return text[:here] + text[here + draw(st.integers(1, 4)) :]
    return text[:here] + text[here : here + 2][::-1] + text[here + 2 :]


def _snippet(draw: st.DrawFn, text: str) -> str:
    here = draw(st.integers(0, len(text)))
    return text[:here] + draw(st.sampled_from(SNIPPETS)) + text[here:]


def _word(draw: st.DrawFn, text: str) -> str:
    """A word in the place of another."""
    words = list(re.finditer(r"[^\s{},:\[\]]+", text))
    if not words:
        return text
    old = draw(st.sampled_from(words))
    new = draw(st.sampled_from([*SNIPPETS, *(word[0] for word in words)]))
    return text[: old.start()] + new + text[old.end() :]


def entry(blocks: tuple[str, ...]) -> str:
    return HEAD + "".join(f"\n```yaml {kind}\n{text}```\n" for kind, text in zip(KINDS, blocks, strict=True))


def book_of(text: str) -> Book:
    return make_book([SourceFile("ground.md", GROUND.encode()), SourceFile("changed.md", text.encode())], Path("."))


def said(results: tuple[Result, ...]) -> list[str]:
    """Results without the lines they stand in."""
    return [repr((r.key, r.basis, r.value, r.u, r.unit, r.shown, r.corrections, r.better)) for r in results]


def assert_in_place(book: Book, texts: dict[str, str]) -> None:
    for problem in book.problems:
        lines = re.split("\r\n|\r|\n", texts[problem.place.file])
        assert 1 <= problem.place.line <= len(lines), problem
        assert 1 <= problem.place.column <= len(lines[problem.place.line - 1]) + 1, problem
        assert problem.message.strip()
        assert re.fullmatch(r"[a-z0-9-]+", problem.code), problem
        assert "Traceback" not in problem.message


def assert_shown(book: Book) -> None:
    """Everything that is made of a book can be made, and no number that is not known is shown as one."""
    pieces = [piece for page in generated_pages(book) for piece in page.pieces] + home_pieces(book)
    assert not re.search(r"± nan|\bnan (dB|[kMG]?Hz|V|K|°C|%)", render(pieces, lambda to, _: to, lambda _: ""))
    pieces = [piece for each in book.entries for block in each.blocks for piece in block_pieces(book, each, block)]
    assert render(pieces, lambda to, _: to, lambda _: "") or not pieces
    assert results_json(book)


FUZZ = settings(
    max_examples=130, derandomize=True, deadline=None, database=None, suppress_health_check=list(HealthCheck)
)

GOOD = book_of(entry(BLOCKS))


def test_the_entry_is_good_before_anything_happens_to_it() -> None:
    assert [str(p) for p in GOOD.problems] == []
    assert len([r for r in GOOD.results if r.entry == "changed.md" and r.basis == "measured"]) == 5


@FUZZ
@given(st.data(), st.integers(0, len(BLOCKS) - 1))
def test_a_mishap_in_one_block_leaves_the_others_as_they_are(data: st.DataObject, which: int) -> None:
    blocks = list(BLOCKS)
    blocks[which] = data.draw(mutated(BLOCKS[which])).rstrip("\n") + "\n"
    text = entry(tuple(blocks))
    book = book_of(text)
    assert_in_place(book, {"ground.md": GROUND, "changed.md": text})
    own = {e.path: e for e in book.entries}
    assert len(own["changed.md"].blocks) == len(BLOCKS)
    for number in (3, 4):
        if number != which:
            block, good = own["changed.md"].blocks[number], GOOD.entries[1].blocks[number]
            assert said(book.outcome(block).results) == said(GOOD.outcome(good).results)
            assert not book.problems_of(block)
    ground = [r for r in book.results if r.entry == "ground.md"]
    assert said(tuple(ground)) == said(tuple(r for r in GOOD.results if r.entry == "ground.md"))
    if which != 0 and "chain: tx" not in blocks[which]:
        assert book.revisions["B"].chains["tx"].stage_names == ["driver", "mixer", "vga", "detector"]
    assert_shown(book)


@FUZZ
@given(st.data())
def test_a_mishap_anywhere_in_a_file_raises_nothing(data: st.DataObject) -> None:
    """Front matter and fences too: then nothing can be said of the blocks, but faults still stand in the file."""
    text = data.draw(mutated(entry(BLOCKS)))
    if data.draw(st.booleans()):
        here = data.draw(st.integers(0, len(text)))
        text = text[:here] + data.draw(st.sampled_from(("```", "~~~", "<!--", "-->", "---", "\r"))) + text[here:]
    book = book_of(text)
    assert_in_place(book, {"ground.md": GROUND, "changed.md": text})
    assert_shown(book)


@FUZZ
@given(st.binary(min_size=1, max_size=6), st.integers(0, 2000))
def test_bytes_of_any_sort_raise_nothing(noise: bytes, here: int) -> None:
    data = entry(BLOCKS).encode()
    data = data[:here] + noise + data[here:]
    book = make_book([SourceFile("ground.md", GROUND.encode()), SourceFile("changed.md", data)], Path("."))
    assert_in_place(book, {"ground.md": GROUND, "changed.md": data.decode("utf-8", "replace")})
    assert results_json(book)


@FUZZ
@given(st.data(), st.sampled_from(sorted(registry())))
def test_a_mishap_in_the_example_of_any_kind(data: st.DataObject, word: str) -> None:
    kind = registry()[word]
    text = data.draw(mutated(kind.example)).rstrip("\n") + "\n"
    whole = f"---\ntitle: Changed\ndate: 2026-02-01\nrevision: B\nfrom: A\n---\n\n```yaml {word}\n{text}```\n"
    book = book_of(whole)
    assert_in_place(book, {"ground.md": GROUND, "changed.md": whole})
    ground = [r for r in book.results if r.entry == "ground.md"]
    assert said(tuple(ground)) == said(tuple(r for r in GOOD.results if r.entry == "ground.md"))
    assert_shown(book)
