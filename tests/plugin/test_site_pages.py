"""What the plugin puts on the pages of a site, and what it leaves alone."""

from __future__ import annotations

import re
from pathlib import Path

import pytest
from building import CHAIN, FIRST, FRONT, READING, SECOND, Project

BROKEN = READING.replace("2.4(1) dB", "2.4(1) dBm")


def slots(project: Project, path: str) -> list[str]:
    return [each.attributes["id"] for each in project.page(path).all("div", class_="lb")]


def test_an_entry_shows_its_prose_and_each_block_computed_in_its_place(project: Project) -> None:
    project.write("2026-01-10-first.md", FIRST + "\nWords behind the chain.\n")
    project.write("2026-01-11-numbers.md", SECOND)
    project.build()
    first = project.page("2026-01-10-first.html")
    order = ["Words about the box.", "lna", "noise figure", "Words behind the chain."]
    places = [first.words.index(words) for words in order]
    assert places == sorted(places)
    assert slots(project, "2026-01-10-first.html") == ["lb-head", "lb-chain-1"]
    (block,) = project.page("2026-01-11-numbers.html").all("div", id="lb-reading-1")
    rows = [tr.words for tr in block.all("tr")]
    assert any(row.startswith("noise figure at 50.1 MHz 2.40 dB") for row in rows), rows
    assert "signal: 50.1 MHz" not in first.words, "the block's own text gives way to what is computed from it"


def test_the_logbooks_own_pages_are_there_and_lead_to_one_another(project: Project) -> None:
    project.write("2026-01-10-first.md", FIRST)
    project.write("2026-01-11-numbers.md", SECOND)
    project.build()
    made = {"index.html", "history.html", "targets.html", "open-items.html", "benches.html", "revisions/A.html"}
    assert made <= {path.relative_to(project.site).as_posix() for path in project.site.rglob("*.html")}
    links = {a.attributes["href"]: a.words for a in project.page("index.html").all("a")}
    assert links["revisions/A.html"] == "A"
    assert links["2026-01-10-first.html"] == "First light"
    back = {a.attributes["href"] for a in project.page("revisions/A.html").all("a")}
    assert {"../2026-01-10-first.html", "../2026-01-11-numbers.html"} <= back


def test_home_keeps_the_prose_that_was_written_for_it(project: Project) -> None:
    project.write("index.md", "# My bench\n\nWhat this is about.\n")
    project.write("2026-01-10-first.md", FIRST)
    project.build()
    words = project.page("index.html").words
    assert words.index("What this is about.") < words.index("First light")


def test_a_broken_block_shows_its_text_with_the_problem_and_the_rest_is_built(project: Project) -> None:
    project.write("2026-01-10-first.md", FIRST)
    project.write("2026-01-11-numbers.md", SECOND.replace(READING, f"{BROKEN}\n{READING}"))
    project.configure({"logbook": {"fail_on": []}})
    project.build()
    page = project.page("2026-01-11-numbers.html")
    (written,) = page.all(class_="lb-written")
    assert "nf: 2.4(1) dBm" in written.words
    # The front matter, an empty line, a line of prose, an empty line and the fence stand before the block's first line.
    lines = {line.attributes["data-line"]: line for line in written.all("span", class_="lb-line")}
    assert list(lines) == ["9", "10", "11"]
    assert "lb-wrong" in lines["11"].attributes["class"]
    (problem,) = written.all("li")
    assert re.match(r"2026-01-11-numbers\.md:11:\d+: '2\.4\(1\) dBm' is a level", problem.words)
    assert problem.words.endswith("[dimension]")
    assert slots(project, "2026-01-11-numbers.html")[1:3] == ["lb-reading-1", "lb-reading-2"]
    sound = next(each for each in page.all("div", id="lb-reading-2"))
    assert "2.40" in sound.words
    assert not sound.all(class_="lb-written")
    assert not project.page("2026-01-10-first.html").all(class_="lb-written")


def test_an_empty_logbook_is_a_site_that_says_how_to_begin(project: Project) -> None:
    project.build()
    assert project.page("index.html").words
    assert "'revision: A'" in project.page("history.html").words
    assert not (project.site / "revisions").exists()


def test_one_entry_without_blocks_is_enough(project: Project) -> None:
    project.write(
        "2026-01-10-note.md", FRONT.format(title="A note", date="2026-01-10", more="") + "Nothing measured.\n"
    )
    project.build()
    assert "Nothing measured." in project.page("2026-01-10-note.html").words
    assert "A note" in project.page("index.html").words


ORDINARY = (
    "# About\n\nA [link](2026-01-10-first.md), a table:\n\n| a | b |\n|---|---|\n| 1 | 2 |\n\n```yaml\nx: 1\n```\n"
)


def test_an_ordinary_page_is_what_it_is_without_the_plugin(project: Project, tmp_path: Path) -> None:
    bare = Project(tmp_path / "bare", plugins=("search",))
    for each in (project, bare):
        each.write("2026-01-10-first.md", FIRST)
        each.write("about.md", ORDINARY)
        each.build()

    def content(site: Path) -> str:
        found = re.search(r"<main>.*</main>", (site / "about.html").read_text(encoding="utf-8"), re.S)
        assert found is not None
        return found.group()

    assert content(project.site) == content(bare.site)


PLAIN = {
    "no kind": "```yaml\nchain: rx\n```",
    "an option": '```yaml title="mkdocs.yml"\nchain: rx\n```',
    "lines to mark": "```yaml hl_lines=1\nchain: rx\n```",
    "shown in a longer fence": "````markdown\n```yaml chain\nchain: rx\n```\n````",
}


@pytest.mark.parametrize("fence", PLAIN.values(), ids=PLAIN)
def test_a_fence_that_is_no_block_stays_as_it_is(project: Project, fence: str) -> None:
    head = FRONT.format(title="How", date="2026-01-10", more="")
    project.write("2026-01-10-how.md", f"{head}This is how it is written:\n\n{fence}\n")
    project.build(strict=True)
    assert "chain: rx" in project.page("2026-01-10-how.html").words
    assert slots(project, "2026-01-10-how.html") == ["lb-head"]


def test_a_block_inside_a_list_stays_inside_its_item(project: Project) -> None:
    project.write("2026-01-10-first.md", FIRST)
    inside = "\n".join("    " + line if line else "" for line in READING.split("\n"))
    head = FRONT.format(title="List", date="2026-01-11", more="")
    project.write("2026-01-11-list.md", f"{head}1. Warm up.\n\n2. Read:\n\n{inside}\n3. Switch off.\n")
    project.build(strict=True)
    (steps,) = project.page("2026-01-11-list.html").all("ol")
    items = [each for each in steps.inside if not isinstance(each, str)]
    assert [li.words.split()[0] for li in items] == ["Warm", "Read:", "Switch"]
    (block,) = items[1].all("div", id="lb-reading-1")
    assert "2.40" in block.words
    assert not [p for p in items[1].all("p") if p.all("div")], "a paragraph may not hold a block"


def test_a_byte_order_mark_and_windows_line_ends_make_no_difference(project: Project, tmp_path: Path) -> None:
    other = Project(tmp_path / "other")
    for path, text in (("2026-01-10-first.md", FIRST), ("2026-01-11-numbers.md", SECOND)):
        project.write(path, text)
        other.write(path, b"\xef\xbb\xbf" + text.replace("\n", "\r\n").encode("utf-8"))
    for each in (project, other):
        each.build(strict=True)
    for path in ("2026-01-10-first.html", "2026-01-11-numbers.html", "index.html"):
        assert other.page(path).words == project.page(path).words
    results = "data/results.json"
    assert (other.site / results).read_bytes() == (project.site / results).read_bytes()


def test_a_file_that_is_not_utf_8_is_a_problem_with_its_place_and_the_site_is_made(
    project: Project, caplog: pytest.LogCaptureFixture
) -> None:
    project.write("2026-01-10-first.md", FIRST)
    text = FRONT.format(title="Old words", date="2026-01-11", more="") + f"Gr\xf6\xdfe.\n\n{READING}"
    project.write("2026-01-11-old.md", text.encode("latin-1"))
    project.configure({"logbook": {"fail_on": []}})
    project.build()
    page = project.page("2026-01-11-old.html").words
    assert "Gr\ufffd\ufffde." in page
    assert "2.40" in page
    said = [record.getMessage() for record in caplog.records if "2026-01-11-old.md:6:3" in record.getMessage()]
    assert len(said) == 1
    assert "UTF-8" in said[0]


def test_a_page_that_has_the_name_of_one_of_the_logbooks_own_stands_as_it_is_written(project: Project) -> None:
    project.write("2026-01-10-first.md", FIRST)
    project.write("history.md", "# My own history\n")
    project.build(strict=True)
    assert project.page("history.html").words == "My own history"


def test_blocks_in_folders_link_to_pages_from_where_they_are(project: Project) -> None:
    project.write("2026/01/first.md", FIRST)
    project.write("2026/01/numbers.md", SECOND)
    project.build(strict=True)
    links = [a.attributes["href"] for a in project.page("2026/01/numbers.html").all("a")]
    assert "../../revisions/A.html" in links


def test_the_search_finds_prose_and_quantities_but_no_table_of_numbers(project: Project) -> None:
    project.write("2026-01-10-first.md", FIRST)
    project.configure("search", "logbook")
    project.build()
    index = (project.site / "search" / "search_index.json").read_text(encoding="utf-8")
    assert "Words about the box." in index
    assert "noise figure" in index or "nf" in index
    assert CHAIN.split("\n")[1] not in index
    assert "<td" not in index
    shim = (project.site / "search" / "search_index.js").read_text(encoding="utf-8")
    assert shim == f"var __index = {index}"
