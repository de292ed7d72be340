"""Pieces as HTML, read as a person reads a page: words, headings, links, rows."""

from __future__ import annotations

import base64
import math
from collections.abc import Iterable
from xml.etree import ElementTree

import pytest
from hypothesis import given
from hypothesis import strategies as st

from logbook.html import render
from logbook.pieces import (
    Axis,
    Bars,
    Box,
    Branch,
    Card,
    Cards,
    Chart,
    Code,
    Diagram,
    Download,
    Folded,
    Heading,
    Items,
    Link,
    Muted,
    Note,
    Picture,
    Piece,
    Series,
    Strong,
    Table,
    Text,
    Tree,
    Verdict,
    Written,
)

CHART = Chart(Axis("stage", "category", ("a", "b")), Axis("level, dBm"), (Series("signal", (0, 1), (-60.0, math.nan)),))
HOSTILE = "<script>alert('x')</script> & \"quoted\" ]]> \x00\x0b \ud800 </pre>"


def where(to: str, anchor: str) -> str | None:
    """Only one page exists."""
    return f"../c/#{anchor}" if to == "revision:C" else None


def shown(*pieces: Piece) -> str:
    return render(pieces, where, lambda drawing: '<svg viewBox="0 0 640 300"><path d="M0 0"/></svg>')


def page(*pieces: Piece) -> ElementTree.Element:
    """The page as a tree; parsing as XML is stricter than what a browser forgives."""
    return ElementTree.fromstring(f"<main>{shown(*pieces)}</main>")


def words(node: ElementTree.Element) -> str:
    return " ".join("".join(node.itertext()).split())


def of_class(node: ElementTree.Element, name: str) -> list[ElementTree.Element]:
    return [each for each in node.iter() if name in each.get("class", "").split()]


def the(found: Iterable[ElementTree.Element]) -> ElementTree.Element:
    (only,) = found
    return only


def test_a_heading_has_its_level_and_the_id_that_it_names() -> None:
    root = page(Heading(2, "Level plan", "rx-level"), Heading(3, "no id"))
    assert [(h.tag, words(h), h.get("id")) for h in root] == [("h2", "Level plan", "rx-level"), ("h3", "no id", None)]


def test_a_heading_level_that_html_does_not_have_is_brought_into_range() -> None:
    assert [h.tag for h in page(Heading(0, "a"), Heading(9, "b"))] == ["h1", "h6"]


def test_a_line_keeps_its_words_in_order() -> None:
    line = ("from ", Strong("B"), " by ", Code("insert"), " ", Muted("as planned"), ": ", Verdict("better", "by 3 dB"))
    assert words(page(Text(line))) == "from B by insert as planned: better by 3 dB"


def test_a_link_leads_where_the_page_is_and_is_plain_words_where_there_is_none() -> None:
    root = page(Text((Link("C", "revision:C", "rx"), " after ", Link("B", "revision:B"))))
    assert words(root) == "C after B"
    assert [(a.text, a.get("href")) for a in root.iter("a")] == [("C", "../c/#rx")]


@pytest.mark.parametrize(
    ("word", "name"), [("better", "lb-better"), ("not comparable", "lb-not-comparable"), ("undecided", "lb-undecided")]
)
def test_a_verdict_is_a_word_and_has_a_class_for_its_look(word: str, name: str) -> None:
    verdict = the(of_class(page(Text(Verdict(word))), "lb-verdict"))
    assert words(verdict) == word
    assert name in verdict.get("class", "").split()


def test_no_verdict_leaves_nothing_to_see() -> None:
    assert words(page(Text(Verdict("")))) == ""


def test_a_table_names_its_rows_and_columns_and_sets_numbers_apart() -> None:
    table = Table(
        ("result", "now"), (("gain", "18.0 dB"), ("nf", Verdict("same"))), "Totals", frozenset({1}), ("gain",)
    )
    root = page(table)
    assert words(the(root.iter("caption"))) == "Totals"
    assert [(th.text, th.get("scope")) for th in root.iter("th")] == [
        ("result", "col"),
        ("now", "col"),
        ("gain", "row"),
        ("nf", "row"),
    ]
    assert [words(td) for td in root.iter("td")] == ["18.0 dB", "same"]
    assert all("lb-number" in td.get("class", "") for td in root.iter("td"))
    assert [tr.get("id") for tr in root.iter("tr")] == [None, "gain", None]


def test_words_among_figures_may_wrap_and_figures_may_not() -> None:
    table = Table(
        ("total", "predicted"),
        (("gain", "18.0 dB"), ("IIP2", "not known: 2 of 3 stages give none")),
        "",
        frozenset({1}),
    )
    classes = [td.get("class", "").split() for td in page(table).iter("td")]
    assert classes == [["lb-number"], ["lb-number", "lb-words"]]


def test_a_wide_table_scrolls_by_itself_and_the_keyboard_reaches_it() -> None:
    region = page(Table(("a", "b"), ()))[0]
    assert (region.get("role"), region.get("tabindex"), region.get("aria-label")) == ("region", "0", "Table of a, b")


def test_a_picture_says_what_it_shows_and_has_its_numbers_as_a_table() -> None:
    numbers = Table(("behind", "signal, dBm"), (("a", "-60.0"),))
    root = page(Picture("Level plan", CHART, "-60 dBm enters.", numbers))
    svg = the(root.iter("svg"))
    assert svg.get("role") == "img"
    assert [(part.tag, part.text) for part in svg[:2]] == [("title", "Level plan"), ("desc", "-60 dBm enters.")]
    assert words(the(root.iter("figcaption"))) == "Level plan"
    details = the(root.iter("details"))
    assert words(the(details.iter("summary"))) == "Level plan as a table"
    assert words(the(details.iter("td"))) == "-60.0"


def test_the_same_picture_twice_makes_no_id_twice() -> None:
    picture = Picture("Shares", Bars(("lna",), ("noise",), ((1.0,),)), "All of it comes from lna.")
    assert [each.get("id") for each in page(picture, picture).iter() if each.get("id")] == []


def test_a_block_diagram_is_a_list_in_the_order_of_the_signal() -> None:
    boxes = (Box("lna", "amplifier", ("18.0 dB", "NF 1.1 dB")), Box("mixer", "mixer", ("-6.5 dB",), "new"))
    root = page(Diagram("Chain rx", "50.1 MHz", boxes, "21.4 MHz"))
    stages = [words(li) for li in the(root.iter("ol"))]
    assert stages == ["enters 50.1 MHz", "lna 18.0 dB NF 1.1 dB", "mixer new -6.5 dB", "leaves 21.4 MHz"]
    assert all(svg.get("aria-hidden") == "true" for svg in root.iter("svg"))


def test_every_symbol_of_the_trade_looks_different_and_an_unknown_one_is_a_box() -> None:
    def drawn(symbol: str) -> str:
        return ElementTree.tostring(the(page(Diagram("", "", (Box("x", symbol),))).iter("svg")), "unicode")

    known = ["amplifier", "filter", "pad", "mixer", "detector", "attenuator", "stage"]
    assert len({drawn(symbol) for symbol in known}) == len(known)
    assert drawn("mixer-of-a-new-sort") == drawn("stage")


def test_a_tree_sets_in_only_what_branches_off() -> None:
    tail = Branch("C", (Branch("E", side=True), Branch("D")))
    root = page(Tree((Branch("A", (Branch("B", (tail,)), Branch("T", side=True))),)))
    trunk = root[0]
    assert [words(li).split()[0] for li in trunk] == ["A", "B", "C", "D"]
    assert words(trunk[0]) == "A T side branch"
    assert words(trunk[2]) == "C E side branch"


def test_a_trial_and_a_plan_have_each_their_own_look() -> None:
    root = page(Tree((Branch("A", (Branch("T", side=True, state="trial"), Branch("P", side=True, state="planned"))),)))
    assert [li.get("class") for li in root.iter("li")] == [None, "lb-side lb-trial", "lb-side lb-planned"]


def test_a_thousand_revisions_in_a_row_are_one_column() -> None:
    branch = Branch("0")
    for number in range(1, 1000):
        branch = Branch(str(number), (branch,))
    assert len(page(Tree((branch,)))[0]) == 1000


def test_cards_show_the_number_and_the_verdict() -> None:
    card = Card("noise floor", "-118.4 dBm", Verdict("meets"), ("limit ", Code("<= -115 dBm")))
    root = page(Cards((card, Card("gain", "12 dB"))))
    assert [words(li) for li in the(root.iter("ul"))] == ["noise floor-118.4 dBmmeetslimit <= -115 dBm", "gain12 dB"]


def test_a_block_as_written_shows_the_lines_of_the_file_and_marks_the_wrong_one() -> None:
    problems = ("entries/a.md:19:9: '12 dBm' is a level. [dimension]",)
    root = page(Written("chain: rx\n  gain: 12 dBm\n", problems, 18))
    lines = [
        (line.get("data-line"), line.text, "lb-wrong" in line.get("class", "")) for line in of_class(root, "lb-line")
    ]
    assert lines == [("18", "chain: rx", False), ("19", "  gain: 12 dBm", True)]
    assert words(the(of_class(root, "lb-problems-head"))) == "1 problem"
    assert [words(li) for li in root.iter("li")] == list(problems)
    assert the(root.iter("pre")).text is None, "the text starts with its first line"


@pytest.mark.parametrize(
    ("tone", "word"), [("plain", "Note"), ("good", "In order"), ("caution", "Caution"), ("problem", "Attention")]
)
def test_a_note_says_its_tone_in_a_word(tone: str, word: str) -> None:
    assert words(page(Note("the stage runs hot", tone))) == f"{word} the stage runs hot"  # type: ignore[arg-type]


def test_lists_are_numbered_when_they_are_ordered_and_absent_when_empty() -> None:
    root = page(Items(("a", ("b ", Strong("c")))), Items(("d",), ordered=True), Items(()))
    assert [(each.tag, [words(li) for li in each]) for each in root] == [("ul", ["a", "b c"]), ("ol", ["d"])]


def test_folded_pieces_are_there() -> None:
    root = page(Folded("The doubt by source", (Text("reads"), Folded("inner", (Heading(4, "deep"),)))))
    assert [words(summary) for summary in root.iter("summary")] == ["The doubt by source", "inner"]
    assert [words(p) for p in root.iter("p")] == ["reads"]
    assert [words(h) for h in root.iter("h4")] == ["deep"]


def test_a_download_carries_the_file_itself() -> None:
    link = the(page(Download("The points as CSV", "bandpass.csv", "hz;dB\n50e6;-3 µ\n")).iter("a"))
    assert link.get("download") == "bandpass.csv"
    head, _, data = (link.get("href") or "").partition(",")
    assert head == "data:text/csv;charset=utf-8;base64"
    assert base64.b64decode(data).decode() == "hz;dB\n50e6;-3 µ\n"


def every_piece(hostile: str) -> tuple[Piece, ...]:
    """Every piece, with the same text wherever a piece takes any."""
    line = (hostile, Strong(hostile), Muted(hostile), Code(hostile), Link(hostile, "revision:C", hostile))
    table = Table((line, hostile), ((line, Verdict(hostile, hostile)),), hostile, ids=(hostile,))
    return (
        Heading(2, hostile, hostile),
        Text(line),
        Note(line, "caution"),
        Items((line,)),
        table,
        Picture(hostile, CHART, hostile, table),
        Diagram(hostile, hostile, (Box(hostile, hostile, (hostile,), hostile),), hostile),
        Tree((Branch(line, (Branch(line, side=True),)),)),
        Cards((Card(line, hostile, Verdict(hostile), line),)),
        Written(hostile, (hostile,)),
        Folded(hostile, (Text(line),)),
        Download(hostile, hostile, hostile),
    )


def test_hostile_text_stays_text_in_every_piece() -> None:
    root = page(*every_piece(HOSTILE))
    assert list(root.iter("script")) == []
    assert words(root).count("<script>alert('x')</script>") >= len(every_piece(HOSTILE))
    shown(*every_piece(HOSTILE)).encode("utf-8")


@given(st.text(st.characters(exclude_categories=()), max_size=30))
def test_any_text_makes_a_page_that_parses(anything: str) -> None:
    page(*every_piece(anything))


def test_the_engine_s_own_classes_all_bear_its_prefix() -> None:
    classes = {name for each in page(*every_piece("x")).iter() for name in each.get("class", "").split()}
    assert classes
    assert {name for name in classes if not name.startswith("lb-")} == set()
