"""Lines of text: words, verdicts, links."""

from __future__ import annotations

from logbook.html.context import Url
from logbook.html.elements import class_word, element, text
from logbook.pieces import Code, Line, Link, Muted, Span, Strong, Verdict


def line_html(line: Line, url: Url) -> str:
    """A line as HTML."""
    spans = line if isinstance(line, tuple) else (line,)
    return "".join(_span(span, url) for span in spans)


def line_words(line: Line) -> str:
    """A line as bare words, for labels."""
    spans = line if isinstance(line, tuple) else (line,)
    return "".join(_words(span) for span in spans)


def verdict_html(verdict: Verdict) -> str:
    """A verdict's word, with a shape beside it by the stylesheet, and its detail in a quieter voice."""
    if not verdict.word:
        return ""
    word = element("span", text(verdict.word), f"lb-verdict {class_word(verdict.word)}")
    return word + (" " + element("span", text(verdict.detail), "lb-muted") if verdict.detail else "")


def _span(span: Span, url: Url) -> str:
    match span:
        case str():
            return text(span)
        case Verdict():
            return verdict_html(span)
        case Link():
            href = url(span.to, span.anchor)
            return text(span.text) if href is None else element("a", text(span.text), href=href)
        case Strong():
            return element("strong", text(span.text))
        case Muted():
            return element("span", text(span.text), "lb-muted") if span.text else ""
        case Code():
            return element("code", text(span.text))


def _words(span: Span) -> str:
    match span:
        case str():
            return span
        case Verdict():
            return f"{span.word} {span.detail}".strip()
        case _:
            return span.text
