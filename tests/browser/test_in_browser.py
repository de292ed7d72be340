"""The site as a browser shows it from the disk: search, requests, widths, keyboard, contrast, print."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

if TYPE_CHECKING:
    from conftest import Visitor

pytestmark = pytest.mark.browser

FAULTS = "2026-12-01-faults.html"


def test_the_search_works_from_the_disk(desk: Visitor) -> None:
    page = desk.open("index.html")
    page.locator(".md-search__input").fill("heliotrope")
    hit = page.locator(".md-search-result__item a").first
    hit.wait_for(timeout=10_000)
    assert "An entry with faults in it" in hit.inner_text()
    hit.click()
    page.wait_for_url(f"**/{FAULTS}**")
    assert [url for url in desk.asked if not url.startswith(("file:", "data:", "blob:"))] == []
    assert desk.complaints == []


def test_no_page_asks_for_anything_elsewhere_or_complains(desk: Visitor) -> None:
    for path in desk.paths:
        desk.open(path)
    assert len(desk.paths) > 20
    assert [url for url in desk.asked if not url.startswith(("file:", "data:", "blob:"))] == []
    assert desk.complaints == []


@pytest.mark.parametrize("width", [320, 390, 768])
def test_no_page_scrolls_sideways(phone: Visitor, width: int) -> None:
    phone.page.set_viewport_size({"width": width, "height": 844})
    wide = {}
    for path in phone.paths:
        page = phone.open(path)
        page.evaluate("document.querySelectorAll('details').forEach(each => each.open = true)")
        over = page.evaluate("document.scrollingElement.scrollWidth - innerWidth")
        # The page itself cuts off what sticks out, so that its width alone would not tell.
        out = page.evaluate(STICKS_OUT)
        if over > 0 or out:
            wide[path] = (over, out)
    assert wide == {}


STICKS_OUT = """() => {
  const scrolls = each => each.closest('.lb-scroll, .lb-source, pre, .md-typeset__scrollwrap, .highlight');
  return [...document.querySelectorAll('article *')]
    .filter(each => !scrolls(each) && each.getClientRects().length)
    .filter(each => each.getBoundingClientRect().right > innerWidth + 1)
    .filter(each => !each.closest('svg') && getComputedStyle(each).position !== 'absolute')
    .map(each => each.tagName + '.' + each.className)
}"""


def test_a_wide_table_is_scrolled_with_the_keyboard_and_keeps_its_first_column(phone: Visitor) -> None:
    page = phone.open("targets.html")
    table = page.locator(".lb-scroll").first
    assert table.evaluate("each => each.scrollWidth > each.clientWidth + 50"), "this table must be a wide one"
    for _ in range(60):
        page.keyboard.press("Tab")
        if table.evaluate("each => each === document.activeElement"):
            break
    assert table.evaluate("each => each === document.activeElement"), "the Tab key comes to the table"
    outline = table.evaluate(
        "each => [getComputedStyle(each).outlineStyle, parseFloat(getComputedStyle(each).outlineWidth)]"
    )
    assert outline[0] != "none"
    assert outline[1] >= 2
    first = table.locator("tbody th").first
    before = first.bounding_box()
    for _ in range(5):
        page.keyboard.press("ArrowRight")
    page.wait_for_timeout(400)
    assert table.evaluate("each => each.scrollLeft") > 50
    after = first.bounding_box()
    assert before is not None
    assert after is not None
    assert abs(after["x"] - before["x"]) < 1


def test_every_table_is_in_a_region_with_a_name_that_takes_the_focus(desk: Visitor) -> None:
    for path in desk.paths:
        page = desk.open(path)
        loose = page.evaluate(
            "[...document.querySelectorAll('.lb-grid')].filter(each => { const box = each.parentElement;"
            " return box.tabIndex !== 0 || box.getAttribute('role') !== 'region' || !box.getAttribute('aria-label') })"
            ".length"
        )
        assert loose == 0, path


# WCAG 2.2, success criterion 1.4.3 and the definition of relative luminance:
# https://www.w3.org/TR/WCAG22/#dfn-relative-luminance (sRGB threshold 0.04045 as corrected there).
CONTRAST = """() => {
  const canvas = document.createElement('canvas').getContext('2d', {willReadFrequently: true});
  const over = (colour, below) => {
    canvas.clearRect(0, 0, 1, 1);
    if (below) { canvas.fillStyle = `rgb(${below.join(' ')})`; canvas.fillRect(0, 0, 1, 1); }
    canvas.fillStyle = colour; canvas.fillRect(0, 0, 1, 1);
    return [...canvas.getImageData(0, 0, 1, 1).data].slice(0, 3);
  };
  const behind = each => {
    const chain = [];
    for (let at = each; at; at = at.parentElement) chain.unshift(getComputedStyle(at).backgroundColor);
    return chain.reduce((below, colour) => over(colour, below), [255, 255, 255]);
  };
  const light = colour => {
    const [r, g, b] = colour.map(v => v / 255).map(v => v <= 0.04045 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4);
    return 0.2126 * r + 0.7152 * g + 0.0722 * b;
  };
  const words = '.lb-verdict, .lb-muted, .lb-mark, .lb-tone, .lb-problems-head, .lb-card-line, .lb-fold > summary,'
    + ' .lb-way, .lb-grid th, .lb-grid td, .lb a, .lb-line, .lb-problems li';
  return [...document.querySelectorAll(words)].map(each => {
    const back = behind(each), text = over(getComputedStyle(each).color, back);
    const [low, high] = [light(text), light(back)].sort((a, b) => a - b);
    return [each.className || each.tagName, (high + 0.05) / (low + 0.05)];
  });
}"""


def test_words_stand_out_from_their_ground_in_both_schemes(in_scheme: Visitor) -> None:
    lowest: dict[str, float] = {}
    for path in in_scheme.paths:
        for name, ratio in in_scheme.open(path).evaluate(CONTRAST):
            lowest[name] = min(ratio, lowest.get(name, 99.0))
    assert {"lb-verdict lb-meets", "lb-verdict lb-misses", "lb-verdict lb-undecided", "lb-verdict lb-same"} <= set(
        lowest
    )
    assert {name: round(ratio, 2) for name, ratio in lowest.items() if ratio < 4.5} == {}


WORDS = ("better", "worse", "same", "changed", "not comparable", "new", "gone", "meets", "misses", "undecided")
WORDS += ("agrees", "disagrees", "possible", "struck out")

LOOK = """words => words.map(word => {
  const made = document.createElement('span');
  made.className = 'lb-verdict lb-' + word.replace(' ', '-');
  made.textContent = word;
  document.querySelector('.lb').append(made);
  const shape = getComputedStyle(made, '::before'), own = getComputedStyle(made);
  const plain = text => text.replace(/(rgb|color|oklab|lab)a?\\([^)]*\\)/g, 'colour');
  return [shape.clipPath, shape.borderRadius, plain(shape.backgroundImage), shape.borderStyle,
          shape.backgroundColor === 'rgba(0, 0, 0, 0)', own.borderStyle, own.borderWidth].join(' ');
})"""


def test_verdicts_differ_in_shape_or_border_and_not_in_colour_alone(desk: Visitor) -> None:
    looks = desk.open("index.html").evaluate(LOOK, list(WORDS))
    assert len(set(looks)) == len(WORDS), dict(zip(WORDS, looks, strict=True))


def test_the_switch_turns_page_and_drawings_dark(desk: Visitor) -> None:
    page = desk.open("history.html")
    seen = "() => [getComputedStyle(document.body).backgroundColor, getComputedStyle(document.querySelector("
    seen += (
        "'.lb-plot text')).fill, getComputedStyle(document.querySelector('.lb-plot path[style*=\"--lb-now\"]')).stroke]"
    )
    light = page.evaluate(seen)
    page.locator("form[data-md-component=palette] label:visible").click()
    page.wait_for_function("document.body.dataset.mdColorScheme === 'slate'")
    dark = page.evaluate(seen)
    assert [name for name, one, two in zip(("page", "words", "line"), light, dark, strict=True) if one == two] == []


def test_every_figure_says_what_it_shows_and_has_its_numbers_as_a_table(desk: Visitor) -> None:
    seen = 0
    for path in desk.paths:
        page = desk.open(path)
        page.evaluate("document.querySelectorAll('details').forEach(each => each.open = true)")
        for figure in page.locator(".lb-picture").all():
            seen += 1
            drawing = figure.get_by_role("img")
            assert drawing.count() == 1, path
            title, words = drawing.evaluate(
                "e => [e.querySelector('title')?.textContent, e.querySelector('desc')?.textContent]"
            )
            assert title, path
            assert len(words) > 15, path
            assert figure.locator("details tbody tr").count() > 0, (path, title)
            assert figure.locator("tbody tr").first.is_visible()
        for figure in page.locator(".lb-diagram").all():
            assert figure.locator("ol > li .lb-name").count() > 0, path
    assert seen > 20


def test_what_is_folded_opens_with_the_keyboard(desk: Visitor) -> None:
    page = desk.open("history.html")
    table = page.locator(".lb-picture tbody tr").first
    assert not table.is_visible()
    page.locator(".lb-picture summary").first.focus()
    page.keyboard.press("Enter")
    assert table.is_visible()


def test_words_in_drawings_can_be_read_on_a_phone(phone: Visitor) -> None:
    small = {}
    for path in phone.paths:
        sizes = phone.open(path).evaluate(
            "[...document.querySelectorAll('.lb-plot text')].map(each => parseFloat(getComputedStyle(each).fontSize)"
            " * each.ownerSVGElement.getScreenCTM().a)"
        )
        if sizes and min(sizes) < 10:
            small[path] = min(sizes)
    assert small == {}


def test_a_faulty_block_shows_its_lines_by_number_and_its_problems_beneath(desk: Visitor) -> None:
    page = desk.open(FAULTS)
    block = page.locator(".lb-written")
    assert block.count() == 1
    assert block.locator(".lb-wrong").count() == 3
    number = block.locator(".lb-wrong").first.evaluate("each => getComputedStyle(each, '::before').content")
    assert number.startswith('"9"')
    beneath = block.locator(".lb-problems").bounding_box()
    source = block.locator(".lb-source").bounding_box()
    assert beneath is not None
    assert source is not None
    assert beneath["y"] >= source["y"] + source["height"]


def test_on_paper_there_is_no_navigation_nothing_folded_and_no_table_cut(in_scheme: Visitor) -> None:
    # The printable width of A4 with the stylesheet's margins, at 96 px an inch.
    in_scheme.page.set_viewport_size({"width": round((210 - 30) / 25.4 * 96), "height": 1000})
    in_scheme.page.emulate_media(media="print")
    for path in in_scheme.paths:
        page = in_scheme.open(path)
        assert page.evaluate("getComputedStyle(document.body).backgroundColor") == "rgb(255, 255, 255)"
        shown = page.evaluate(
            "['.md-header', '.md-sidebar', '.md-footer', '.headerlink'].filter(name => "
            "[...document.querySelectorAll(name)].some(each => each.getClientRects().length))"
        )
        assert shown == [], path
        cut = page.evaluate(
            "[...document.querySelectorAll('.lb-grid')]"
            ".filter(each => each.getBoundingClientRect().right > innerWidth + 1)"
            ".map(each => each.parentElement.getAttribute('aria-label'))"
        )
        assert cut == [], path
        hidden = page.evaluate(
            "[...document.querySelectorAll('details .lb-grid')].filter(each => !each.checkVisibility()).length"
        )
        assert hidden == 0, path
