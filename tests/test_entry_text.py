"""The scanner for front matter and fences, and what becomes of bytes."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import markdown
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mkdocs.utils.meta import get_data

from logbook import fences
from logbook.entry_text import EntryText, Fence, decode, replace_fences, scan
from logbook.problems import Problem, Problems


def scanned(text: str) -> tuple[EntryText, list[Problem]]:
    problems = Problems()
    return scan(text, "e.md", problems), list(problems)


def kinds(text: str) -> list[str]:
    entry, problems = scanned(text)
    assert not problems
    return [fence.kind for fence in entry.fences]


def said(problems: list[Problem]) -> list[tuple[int, int, str]]:
    return [(problem.place.line, problem.place.column, problem.code) for problem in problems]


# --- fences of blocks ----------------------------------------------------------------------------


def test_a_block_with_its_lines() -> None:
    entry, problems = scanned("Text\n\n```yaml reading\nat: 50 MHz\nrbw: 1 kHz\n```\nmore\n")
    assert entry.fences == (Fence("reading", "at: 50 MHz\nrbw: 1 kHz\n", 3, 4, 6, 0, True),)
    assert entry.lines[2] == "```yaml reading"
    assert len(entry.lines) == 7
    assert not problems


@pytest.mark.parametrize("prefix", ["    ", "  ", "\t", "        ", "> ", ">   ", "> > "])
def test_a_fence_in_a_list_an_admonition_or_a_quotation(prefix: str) -> None:
    text = "".join(prefix + line + "\n" for line in ("~~~yaml todo", "a:", "  b: 1", "~~~"))
    entry, problems = scanned(text)
    assert entry.fences == (Fence("todo", "a:\n  b: 1\n", 1, 2, 4, len(prefix), True),)
    assert not problems


@pytest.mark.parametrize(
    "info",
    ["yaml", 'yaml title="x"', 'yaml hl_lines="1 2"', 'yaml linenums="1"', "yml reading", "python", "", "yaml 1a"],
)
def test_other_fences_are_left_alone(info: str) -> None:
    assert kinds(f"```{info}\na: 1\n```\n") == []
    assert kinds(f"```{info}\na: 1\n```\n```yaml todo\na: 1\n```\n") == ["todo"]


@pytest.mark.parametrize("info", ["yaml  reading", " yaml reading ", "yaml\treading", "yaml reading"])
def test_space_in_the_info_string_does_not_matter(info: str) -> None:
    assert kinds(f"```{info}\na: 1\n```\n") == ["reading"]


def test_kinds_with_hyphens_and_digits() -> None:
    assert kinds("```yaml noise-vs-gain\na: 1\n```\n\n```yaml y2_factor\na: 1\n```") == ["noise-vs-gain", "y2_factor"]


def test_a_fence_shown_within_a_longer_one_is_left_alone() -> None:
    shown = "```yaml reading\na: 1\n```\n"
    assert kinds(f"````markdown\n{shown}````\n{shown}") == ["reading"]
    assert kinds(f"~~~~\n{shown}~~~~\n") == []
    assert kinds(f"~~~\n{shown}~~~\n") == []


def test_a_longer_fence_closes_and_a_shorter_or_other_one_does_not() -> None:
    entry, problems = scanned("````yaml todo\na: 1\n```\n~~~~\n`````\n")
    assert [fence.text for fence in entry.fences] == ["a: 1\n```\n~~~~\n"]
    assert not problems


@pytest.mark.parametrize(
    "comment", ["<!--\n{}-->", "text <!-- so\n{}--> text", "<!--> <!--\n\n{}\n-->", "<!-- <!--\n{}-->"]
)
def test_fences_in_comments_are_left_alone(comment: str) -> None:
    block = "```yaml todo\na: 1\n```\n"
    assert kinds(comment.format(block) + "\n" + block) == ["todo"]


@pytest.mark.parametrize("line", ["<!-- one line -->", "`<!--` is how a comment begins", "<!-- has no end", "<!-->"])
def test_what_is_no_open_comment(line: str) -> None:
    assert kinds(f"{line}\n\n```yaml todo\na: 1\n```\n") == ["todo"]


def test_a_comment_within_a_fence_is_none() -> None:
    assert kinds("```html\n<!--\n```\n```yaml todo\na: 1\n```\n-->\n") == ["todo"]


def test_backticks_in_a_line_are_inline_code() -> None:
    assert kinds("```yaml reading``` is how it begins\n\n```yaml todo\na: 1\n```\n") == ["todo"]


# --- what is wrong with a fence ------------------------------------------------------------------


def test_a_fence_that_is_never_closed_runs_to_the_end() -> None:
    entry, problems = scanned("Text\n  ```yaml todo\n  a: 1\n\n  and on\n\n")
    assert entry.fences == (Fence("todo", "a: 1\n\nand on\n", 2, 3, 5, 2, False),)
    assert said(problems) == [(2, 3, "unclosed-fence")]
    assert "'```yaml todo' is not closed" in problems[0].message


@pytest.mark.parametrize("next_fence", ["```yaml reading", "```python", '```yaml title="x"'])
def test_a_fence_that_is_not_closed_leaves_the_next_one_whole(next_fence: str) -> None:
    entry, problems = scanned(f"```yaml chain\na: 1\n\n{next_fence}\nb: 1\n```\n```yaml todo\nc: 1\n```\n")
    assert [(fence.kind, fence.closed) for fence in entry.fences if fence.kind != "reading"] == [
        ("chain", False),
        ("todo", True),
    ]
    assert entry.fences[0].text == "a: 1\n\n"
    assert said(problems) == [(1, 1, "unclosed-fence")]


def test_another_fence_that_is_not_closed_hides_no_block() -> None:
    entry, problems = scanned("````text\nx\n\n```yaml todo\na: 1\n```\n")
    assert [fence.kind for fence in entry.fences] == ["todo"]
    assert said(problems) == [(1, 1, "unclosed-fence")]
    entry, problems = scanned("```text\nx\n\n```yaml todo\na: 1\n```\n")
    assert [fence.kind for fence in entry.fences] == ["todo"]
    assert said(problems) == [(1, 1, "unclosed-fence")]
    assert "longer" in problems[0].hint


def test_a_quotation_that_ends_leaves_its_fence_open() -> None:
    entry, problems = scanned("> ```yaml todo\n> a: 1\n\ntext\n\n```yaml todo\nb: 1\n```\n")
    assert [(fence.text, fence.closed) for fence in entry.fences] == [("a: 1\n", False), ("b: 1\n", True)]
    assert said(problems) == [(1, 3, "unclosed-fence")]


def test_a_fence_behind_a_list_marker_is_told() -> None:
    entry, problems = scanned("- ```yaml todo\n  a: 1\n  ```\n\n```yaml todo\nb: 1\n```\n")
    assert [fence.text for fence in entry.fences] == ["b: 1\n"]
    assert said(problems) == [(1, 3, "fence-position")]


def test_more_than_a_kind_is_told() -> None:
    entry, problems = scanned('```yaml reading title="x"\na: 1\n```\n')
    assert entry.fences == ()
    assert said(problems) == [(1, 1, "fence-info")]
    assert problems[0].hint == "Write 'yaml reading' alone."


# --- front matter --------------------------------------------------------------------------------


def test_front_matter_with_its_line() -> None:
    entry, problems = scanned("---\ntitle: x\ndate: 2026-05-09\n---\n```yaml todo\na: 1\n```\n")
    assert (entry.front, entry.front_line) == ("title: x\ndate: 2026-05-09\n", 2)
    assert entry.fences[0].line == 5
    assert not problems


@pytest.mark.parametrize(
    "text",
    [
        "---\na: 1\n---\ntext\n",
        "--- \na: 1\n... \ntext\n",
        "---\na: 1\n\nb: 2\n---\n---\n",
        "text\n---\na: 1\n---\n",
        "---\n\ntext\n",
        "----\na: 1\n----\n",
        "text\n",
        "",
    ],
)
def test_front_matter_is_what_mkdocs_takes_for_it(text: str) -> None:
    entry, problems = scanned(text)
    body, data = get_data(text)
    assert (entry.front is not None) == bool(data)
    if data:
        taken = len(entry.front.splitlines()) + 2 if entry.front else 0
        assert "\n".join(entry.lines[taken:]).strip("\n") == body.strip("\n")
    assert not problems


def test_front_matter_without_an_end() -> None:
    entry, problems = scanned("---\ntitle: x\n\n```yaml todo\na: 1\n```\n")
    assert entry.front is None
    assert said(problems) == [(1, 1, "front-matter")]
    assert len(entry.fences) == 1


def test_front_matter_behind_empty_lines() -> None:
    entry, problems = scanned("\n\n---\ntitle: x\n---\n")
    assert entry.front is None
    assert said(problems) == [(3, 1, "front-matter")]


# --- replacement ---------------------------------------------------------------------------------


def test_replacement_stands_at_the_fence_and_nothing_else_changes() -> None:
    text = "a\n\n- b\n\n    ```yaml todo\n    x: 1\n    ```\n\n> ```yaml chain\n> x: 1\n> ```\n```py\n1\n```\nend"
    put = replace_fences(text, lambda number, fence: f"<{number}>\n\n</{fence.kind}>")
    assert put == "a\n\n- b\n\n    <0>\n\n    </todo>\n\n> <1>\n>\n> </chain>\n```py\n1\n```\nend"


LINES = ["text", "```", "````", "~~~", "```yaml todo", "````yaml reading", "~~~yaml chain", "  ```yaml todo", "  ```"]
LINES += [
    "> ```yaml todo",
    "> ```",
    "- ```yaml todo",
    "<!--",
    "-->",
    "a: 1",
    "",
    "    a: 1",
    '```yaml title="x"',
    "---",
    "> ",
]


@given(st.lists(st.sampled_from(LINES), max_size=25))
def test_scan_and_replace_see_the_same_and_leave_the_rest(lines: list[str]) -> None:
    text = "\n".join(["begin", *lines])
    entry, problems = scanned(text)
    covered = [number for fence in entry.fences for number in range(fence.line, fence.last_line + 1)]
    assert covered == sorted(set(covered))
    rest = [line for number, line in enumerate(text.split("\n"), 1) if number not in covered]
    seen: list[Fence] = []
    put = replace_fences(text, keep_in(seen))
    assert tuple(seen) == entry.fences
    assert [line for line in put.split("\n") if "SLOT" not in line] == rest
    assert sum("SLOT" in line for line in put.split("\n")) == len(entry.fences)
    not_closed = {fence.line for fence in entry.fences if not fence.closed}
    assert not_closed <= {problem.place.line for problem in problems if problem.code == "unclosed-fence"}
    for fence in entry.fences:
        last = fence.last_line - 1 if fence.closed else fence.last_line
        assert fence.text.count("\n") == last - fence.first_line + 1


def keep_in(seen: list[Fence]) -> Callable[[int, Fence], str]:
    def keep(number: int, fence: Fence) -> str:
        assert number == len(seen)
        seen.append(fence)
        return "SLOT"

    return keep


@given(st.text(alphabet="`~ \n\t->y<!a:.\u2028\x0c\r", max_size=80))
def test_any_text_is_scanned(text: str) -> None:
    entry, problems = scanned(text)
    line_count = text.count("\n") + 1
    assert all(1 <= fence.line <= fence.last_line <= line_count for fence in entry.fences)
    assert all(1 <= problem.place.line <= line_count for problem in problems)
    assert replace_fences(text, lambda _, fence: "x").count("\n") <= text.count("\n")


# --- bytes ---------------------------------------------------------------------------------------


def decoded(data: bytes) -> tuple[str, list[Problem]]:
    problems = Problems()
    return decode(data, "e.md", problems), list(problems)


@pytest.mark.parametrize(
    ("data", "text"),
    [
        (b"\xef\xbb\xbfa\n", "a\n"),
        (b"a\r\nb\rc\n\r\n", "a\nb\nc\n\n"),
        ("5 µV ± 1 %\n".encode(), "5 µV ± 1 %\n"),
        (b"", ""),
    ],
)
def test_sound_bytes(data: bytes, text: str) -> None:
    assert decoded(data) == (text, [])


def test_a_byte_that_is_not_utf8_is_located_and_the_rest_read() -> None:
    text, problems = decoded("€\r\nnoise 5 ".encode() + b"\xb5V and \xb5W\r\n")
    assert text == "€\nnoise 5 \ufffdV and \ufffdW\n"
    assert said(problems) == [(2, 9, "encoding")]
    assert "0xB5" in problems[0].message
    assert "'µ'" in problems[0].hint


def test_a_character_cut_off_at_the_end() -> None:
    text, problems = decoded(b"ab\xc2")
    assert text == "ab\ufffd"
    assert said(problems) == [(1, 3, "encoding")]


@pytest.mark.parametrize("encoding", ["utf-16", "utf-32", "utf-16-be"])
def test_wide_encodings_are_named_and_read(encoding: str) -> None:
    mark = b"\xfe\xff" if encoding == "utf-16-be" else b""
    text, problems = decoded(mark + "a µ\r\nb".encode(encoding))
    assert text == "a µ\nb"
    assert said(problems) == [(1, 1, "encoding")]
    assert encoding.upper()[:6] in problems[0].message


def test_a_null_byte_is_located_once() -> None:
    text, problems = decoded(b"a\nb\0c\0")
    assert text == "a\nb\ufffdc\ufffd"
    assert said(problems) == [(2, 2, "null-byte")]


@given(st.binary(max_size=40))
def test_any_bytes_are_decoded(data: bytes) -> None:
    text, problems = decoded(data)
    assert "\r" not in text
    assert "\0" not in text
    assert len(problems) <= 2


MANY_OPEN = ["```x", "````x", "`````x", "~~~x", "```yaml todo", "````yaml todo", "```", "````", "> ```x", "text", ""]


@given(st.lists(st.sampled_from(MANY_OPEN), max_size=14))
def test_the_shortcut_past_open_fences_changes_nothing(lines: list[str]) -> None:
    text = "\n".join(lines)
    quick = scanned(text)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(fences, "_known_end", lambda mark, unclosed: None)
        assert scanned(text) == quick


def found_by_markdown(text: str) -> list[str]:
    """The texts of fences with the info string `yaml todo`, as the site's own Markdown extension reads them."""
    found: list[str] = []

    def accept(language: str, inputs: dict[str, Any], options: dict[str, Any], attrs: object, md: object) -> bool:
        options.update(inputs)
        return True

    def collect(source: str, language: str, css: str, options: dict[str, Any], md: object, **rest: object) -> str:
        if "todo" in options:
            found.append(source)
        return "<p>block</p>"

    custom = {"name": "yaml", "class": "x", "format": collect, "validator": accept}
    settings = {"pymdownx.superfences": {"custom_fences": [custom]}}
    markdown.markdown(text, extensions=["admonition", "pymdownx.superfences"], extension_configs=settings)
    return found


BLOCK = ["```yaml todo", "a: 1", "", "b:", "  c: 2", "```"]


def put(prefix: str, lines: list[str]) -> str:
    return "".join((prefix + line if line else prefix.rstrip()) + "\n" for line in lines)


@pytest.mark.parametrize(
    "text",
    [
        put("", BLOCK),
        "- item\n\n" + put("    ", BLOCK) + "\n- next\n",
        "1. item\n\n    - deeper\n\n" + put("        ", BLOCK),
        '!!! note "x"\n    words\n\n' + put("    ", BLOCK),
        put("> ", ["words", "", *BLOCK]),
        "````markdown\n" + put("", BLOCK) + "````\n\n" + put("", BLOCK),
        "~~~text\n" + put("", BLOCK) + "~~~\n",
        put("", BLOCK).replace("```", "~~~~"),
        "`<!--` words\n\n" + put("", BLOCK),
        "```text\nx\n```\n" + put("", BLOCK) + put("", BLOCK),
        "a ```yaml todo``` b\n\n" + put("", BLOCK),
    ],
)
def test_blocks_are_those_that_the_sites_markdown_finds(text: str) -> None:
    entry, problems = scanned(text)
    assert [fence.text.rstrip("\n") for fence in entry.fences] == [t.rstrip("\n") for t in found_by_markdown(text)]
    assert not problems
