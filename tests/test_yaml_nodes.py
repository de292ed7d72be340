"""YAML nodes: scalars as written, true places, one plain message for a fault, the same from both parsers."""

from __future__ import annotations

import pytest
import yaml
from hypothesis import given
from hypothesis import strategies as st

from logbook import yaml_nodes
from logbook.problems import Place, Problem, Problems
from logbook.yaml_nodes import Mapping, Node, Scalar, Sequence, read_yaml


@pytest.fixture(params=["CSafeLoader", "SafeLoader"])
def parser(request: pytest.FixtureRequest, monkeypatch: pytest.MonkeyPatch) -> str:
    """Each of the two parsers, where it is there."""
    loader = getattr(yaml, request.param, None)
    if loader is None:
        pytest.skip("PyYAML without the parser in C")
    monkeypatch.setattr(yaml_nodes, "_LOADER", loader)
    return str(request.param)


def read(text: str, first_line: int = 10, indent: int = 4, what: str = "block") -> tuple[Node | None, list[Problem]]:
    problems = Problems()
    node = read_yaml(text, "e.md", first_line, indent, problems, what)
    return node, list(problems)


def plain(node: Node | None) -> object:
    if isinstance(node, Mapping):
        return {key.text: plain(value) for key, value in node.pairs}
    if isinstance(node, Sequence):
        return [plain(item) for item in node.items]
    return None if node is None else node.text


@pytest.mark.usefixtures("parser")
class TestNodes:
    def test_scalars_stay_as_written(self) -> None:
        text = "a: on\nb: 010\nc: 12:30\nd: 2.4e9\ne: 2026-05-09\nf: ~\ng:\nh: 'it''s'\ni: \"x\\ty\"\nj: 0x1F\n"
        node, problems = read(text)
        assert plain(node) == {
            "a": "on",
            "b": "010",
            "c": "12:30",
            "d": "2.4e9",
            "e": "2026-05-09",
            "f": "~",
            "g": "",
            "h": "it's",
            "i": "x\ty",
            "j": "0x1F",
        }
        assert not problems

    def test_the_blocks_of_a_logbook(self) -> None:
        text = (
            "results:\n  noise_floor: -118.4(3) dBm\nreads: {accuracy: ± 1.5 dB, floor: -150 dBm/Hz}\n"
            "stages:\n  - {name: lna, gain: 18 ± 0.5 dB}\nrepeated: [41.8 dB, 41.9 dB]\nfit: -96.4 ± 0.6 dBm (k=2)\n"
        )
        node, problems = read(text)
        assert plain(node) == {
            "results": {"noise_floor": "-118.4(3) dBm"},
            "reads": {"accuracy": "± 1.5 dB", "floor": "-150 dBm/Hz"},
            "stages": [{"name": "lna", "gain": "18 ± 0.5 dB"}],
            "repeated": ["41.8 dB", "41.9 dB"],
            "fit": "-96.4 ± 0.6 dBm (k=2)",
        }
        assert not problems

    def test_places_are_those_in_the_file(self) -> None:
        node, _ = read("a: 1\nµ: [x, 'y']\nm:\n  k: \"v\"\n  e:\n", first_line=10, indent=4)
        assert isinstance(node, Mapping)
        assert node.place == Place("e.md", 10, 5)
        assert node.key_place("µ") == Place("e.md", 11, 5)
        listed = node.get("µ")
        assert isinstance(listed, Sequence)
        # A quoted text's place is that of its first letter.
        assert [item.place for item in listed.items] == [Place("e.md", 11, 9), Place("e.md", 11, 13)]
        assert listed.place == Place("e.md", 11, 8)
        inner = node.get("m")
        assert isinstance(inner, Mapping)
        assert inner.place == Place("e.md", 13, 7)
        assert inner.get("k") == Scalar("v", Place("e.md", 13, 11))
        assert inner.get("e") == Scalar("", Place("e.md", 14, 9))
        assert node.get("nothing") is None
        assert node.key_place("nothing") == node.place

    def test_places_behind_letters_beyond_the_basic_plane(self) -> None:
        node, _ = read("{\U0001f4fb: a, b: c}", first_line=1, indent=0)
        assert isinstance(node, Mapping)
        assert node.key_place("b") == Place("e.md", 1, 8)

    def test_line_ends_of_yaml_1_1_do_not_shift_lines(self) -> None:
        node, _ = read("a: x\u2028y\x85z\nb: 1\n")
        assert isinstance(node, Mapping)
        assert node.key_place("b").line == 11
        assert plain(node) == {"a": "x y z", "b": "1"}

    def test_at_least_needs_no_quotes(self) -> None:
        text = "limit: >= 6 dB\nl:   >=6 dB\nall: [>= 3 dB,>= 4 dB, '>= 5 dB']\nm: {limit: >= 1 dB}\n"
        node, problems = read(text + "n: |\n  x >= 3\no: a >= b # >= c\np: >\n  folded\n  text\nq:\n  - >= 7 dB\n")
        assert plain(node) == {
            "limit": ">= 6 dB",
            "l": ">=6 dB",
            "all": [">= 3 dB", ">= 4 dB", ">= 5 dB"],
            "m": {"limit": ">= 1 dB"},
            "n": "x >= 3\n",
            "o": "a >= b",
            "p": "folded text\n",
            "q": [">= 7 dB"],
        }
        assert not problems

    def test_lists_and_texts_at_the_root(self) -> None:
        assert plain(read("- a\n- b: 1\n")[0]) == ["a", {"b": "1"}]
        assert plain(read("just words\n")[0]) == "just words"
        assert plain(read("--- \na: 1\n")[0]) == {"a": "1"}

    @pytest.mark.parametrize(
        ("text", "line", "column", "code", "words"),
        [
            ("", 9, 5, "empty-block", "The block is empty."),
            ("# a remark\n", 9, 5, "empty-block", "The block is empty."),
            ("---\n", 9, 5, "empty-block", "The block is empty."),
            ("b: *x\n", 10, 8, "yaml-alias", "'*x' is an alias"),
            ("*x : 1\n", 10, 5, "yaml-alias", "'*x' is an alias"),
            ("<<: *x\na: 1\n", 10, 5, "merge-key", "'<<' merges"),
            ("<<: {b: 1}\na: 1\n", 10, 5, "merge-key", "'<<' merges"),
            ("? [a]\n: 1\n", 10, 7, "complex-key", "A key that is a list"),
            ("{{a: 1}: 2}\n", 10, 6, "complex-key", "A key that is a list"),
            ("a: 1\n---\nb: 2\n", 11, 5, "several-documents", "A second document"),
            ("a: 1\n...\nb\n", 12, 5, "several-documents", "'b' stands behind the end"),
            ("[" * 30, 10, 25, "yaml-depth", "More than 20"),
            ("{a: " * 30, 10, 85, "yaml-depth", "More than 20"),
            ("a: \x01\n", 10, 8, "control-character", "U+0001"),
            ("a: 1\nb: x\ufeffy\n", 11, 9, "control-character", "U+FEFF"),
            ("a: !x!y b\n", 10, 8, "yaml-tag", "begins with '!'"),
            ("a:\n\tb: 1\n", 11, 5, "yaml-syntax", "A tab stands in the indentation"),
            ("a:\n  \tb: 1\n", 11, 7, "yaml-syntax", "A tab stands in the indentation"),
            ("\u00a0a: 1\n b: 2\n", 10, 5, "yaml-syntax", "A space of an unusual sort"),
            ("a: 1\ngain:12 dB\n", 11, 10, "yaml-syntax", "A space is missing behind the colon in 'gain:12 dB'."),
            ("gain:12 dB\na: 1\n", 10, 10, "yaml-syntax", "A space is missing behind the colon in 'gain:12 dB'."),
            ("{gain:12 dB, nf: 2 dB}", 10, 6, "yaml-syntax", "A space is missing behind the colon"),
            ("a: 1\nnonsense\nb: 1\n", 11, 5, "yaml-syntax", "'nonsense' is no key"),
            ("note: gain: 3 dB\n", 10, 11, "yaml-syntax", "A second colon stands in the value of 'note'."),
            ("note: see here: it\n", 10, 11, "yaml-syntax", "A second colon stands in the value of 'note'."),
            ("a: 1\n  b: 2\n", 11, 7, "yaml-syntax", "This key does not fit the line above it."),
            ("note: @home\n", 10, 11, "yaml-syntax", "'@home' begins with '@'"),
            ("note: `x`\n", 10, 11, "yaml-syntax", "'`x`' begins with '`'"),
            ("- `x`\n", 10, 7, "yaml-syntax", "'`x`' begins with '`'"),
            ("note: % x\n", 10, 11, "yaml-syntax", "'% x' begins with '%'"),
            ("note: *much* of it\n", 10, 11, "yaml-syntax", "'*much* of it' begins with '*'"),
            ("limit: > 6 dB\n", 10, 12, "yaml-syntax", "'> 6 dB' begins with '>'"),
            ("limit: |x\n", 10, 12, "yaml-syntax", "'|x' begins with '|'"),
            ("level: - 96 dBm\n", 10, 12, "yaml-syntax", "The '- ' here begins a list"),
            ('note: "abc\nb: 1\n', 10, 11, "yaml-syntax", 'The quote (") that opens here'),
            ("note: 'abc\nb: 1\n", 10, 11, "yaml-syntax", "The quote (') that opens here"),
            ('note: "a\\qb"\n', 10, 13, "yaml-syntax", "The backslash here"),
            ('note: "a" b\n', 10, 15, "yaml-syntax", "'b' stands behind the closing quote."),
            ("a: {b: 1\nc: 2\n", 10, 8, "yaml-syntax", "The '{' that opens here is not closed."),
            ("a: [1, 2\n", 10, 8, "yaml-syntax", "The '[' that opens here is not closed."),
            ("a: [1,\n\n", 10, 8, "yaml-syntax", "The '[' that opens here is not closed."),
            ("[", 10, 5, "yaml-syntax", "The '[' that opens here is not closed."),
            ("a: [{b: 1}, {c", 10, 17, "yaml-syntax", "The '{' that opens here is not closed."),
            ("a: {b: 1 c: 2}\n", 10, 15, "yaml-syntax", "A comma or '}' is missing"),
            ("a: }\n", 10, 8, "yaml-syntax", "The '}' here does not belong"),
            ("a:\n  b: 1\n c: 2\n", 12, 6, "yaml-syntax", "'c: 2' does not fit the lines above it."),
            ("a: 1\n- b\n", 11, 5, "yaml-syntax", "An item of a list stands among keys."),
            ("- a\n- b\nc: 1\n", 12, 5, "yaml-syntax", "'c: 1' does not fit the lines above it."),
            (": x\n", 10, 5, "yaml-syntax", "A key is missing before the colon."),
            ("%YAML x\n---\na: 1\n", 10, 11, "yaml-syntax", "This is no YAML near '%YAML x'"),
        ],
    )
    def test_a_fault_that_leaves_nothing(self, text: str, line: int, column: int, code: str, words: str) -> None:
        node, problems = read(text)
        assert node is None
        assert [(p.place.line, p.place.column, p.code) for p in problems] == [(line, column, code)]
        assert words in problems[0].message
        assert problems[0].hint

    @pytest.mark.parametrize(
        ("text", "line", "column", "code", "rest"),
        [
            ("a: 1\nb: 2\na: 3\n", 12, 5, "duplicate-key", {"a": "1", "b": "2"}),
            ("m: {a: 1, a: 2}\n", 10, 15, "duplicate-key", {"m": {"a": "1"}}),
            ("a: &x 1\n", 10, 8, "yaml-anchor", {"a": "1"}),
            ("a: &x [1]\n", 10, 8, "yaml-anchor", {"a": ["1"]}),
            ("a: !!int 1\n", 10, 8, "yaml-tag", {"a": "1"}),
            ("a: !mine {b: 1}\n", 10, 8, "yaml-tag", {"a": {"b": "1"}}),
            ("a: !!python/object/apply:os.system [x]\n", 10, 8, "yaml-tag", {"a": ["x"]}),
            ("!important : 1\n", 10, 5, "yaml-tag", {"": "1"}),
        ],
    )
    def test_a_fault_that_leaves_the_rest(self, text: str, line: int, column: int, code: str, rest: object) -> None:
        node, problems = read(text)
        assert [(p.place.line, p.place.column, p.code) for p in problems] == [(line, column, code)]
        assert plain(node) == rest

    def test_all_faults_before_the_parser_gives_up(self) -> None:
        node, problems = read("a: 1\na: 2\nb: !t 3\nc: &y 4\nd: @\ne: 5\ne: 6\n")
        assert node is None
        assert [(p.place.line, p.code) for p in problems] == [
            (11, "duplicate-key"),
            (12, "yaml-tag"),
            (13, "yaml-anchor"),
            (14, "yaml-syntax"),
        ]

    def test_front_matter_is_called_so(self) -> None:
        _, problems = read("", first_line=2, indent=0, what="front matter")
        assert [(str(p.place), p.code) for p in problems] == [("e.md:1:1", "empty-front-matter")]
        assert problems[0].message == "The front matter is empty."

    @pytest.mark.parametrize("text", ["[" * 100_000, "a: [" * 5_000, "- " * 20_000, "{" * 100_000, "? " * 20_000])
    def test_a_bomb_of_brackets_is_a_problem(self, text: str) -> None:
        node, problems = read(text)
        assert node is None
        assert len(problems) == 1


PIECES = [
    "a",
    "b: ",
    "c:",
    ": ",
    "- ",
    "[",
    "]",
    "{",
    "}",
    ", ",
    "'",
    '"',
    "\n",
    "\n  ",
    "\n\t",
    "# ",
    "&x ",
    "*x",
    "!t ",
]
PIECES += [
    "<<: ",
    "|",
    ">",
    ">= 3 dB",
    "? ",
    "---\n",
    "...\n",
    "%",
    "@",
    "`",
    "\\",
    "12 dB",
    "±",
    "\u00a0",
    "\x85",
    "\ue000",
]


def check_anything(text: str) -> None:
    node, problems = read(text, first_line=5, indent=2)
    last_line = 5 + text.count("\n")
    assert node is not None or problems
    for problem in problems:
        assert 4 <= problem.place.line <= last_line
        assert problem.place.column >= 3
        assert problem.message
    codes = [problem.code for problem in problems]
    assert codes.count("yaml-syntax") <= 1 or "A space is missing" in " ".join(p.message for p in problems)


@given(st.lists(st.sampled_from(PIECES), max_size=16))
def test_any_pieces_of_yaml_are_nodes_or_problems(pieces: list[str]) -> None:
    check_anything("".join(pieces))


@given(st.text(max_size=40))
def test_any_text_is_nodes_or_problems(text: str) -> None:
    check_anything(text)


def test_without_the_parser_in_c_any_text_too(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(yaml_nodes, "_LOADER", yaml.SafeLoader)

    @given(st.lists(st.sampled_from(PIECES), max_size=16))
    def check(pieces: list[str]) -> None:
        check_anything("".join(pieces))

    check()


PLAIN = st.text(alphabet="abcdxyz0189.-_ ()±µ", min_size=1, max_size=12).map(lambda s: "v" + s.strip())
NESTED = st.recursive(
    PLAIN, lambda inner: st.lists(inner, min_size=1) | st.dictionaries(PLAIN, inner, min_size=1), max_leaves=12
)


@given(st.dictionaries(PLAIN, NESTED, min_size=1), st.booleans())
def test_what_yaml_writes_is_read_back(data: dict[str, object], flow: bool) -> None:
    text = yaml.safe_dump(data, default_flow_style=flow, allow_unicode=True, width=1000)
    node, problems = read(text)
    assert not problems
    assert plain(node) == data
