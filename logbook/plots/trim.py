"""Matplotlib's SVG, trimmed to what a page needs: paths and words, in colours of the page's stylesheet."""

from __future__ import annotations

import re

from logbook.plots.shapes import Look, Shape, Sheet, Words
from logbook.plots.style import FONT

_SHAPE = re.compile(r'<g id="lb(\d+)">\s*<(path|text)\s([^>]*?)/?>(?:([^<]*)</text>)?\s*</g>')
_ATTRIBUTE = re.compile(r'\b([a-z]+)="([^"]*)"')
_NUMBER = re.compile(r"-?[\d.]+(?:e-?\d+)?")
_HALO = "paint-order:stroke;stroke:var(--lb-paper,transparent);stroke-width:4;stroke-linejoin:round"


def trimmed(svg: str, sheet: Sheet) -> str:
    """The drawing without head, metadata, styles and ids: several may stand on one page, and one may stand twice."""
    size = f"0 0 {_number(sheet.width)} {_number(sheet.height)}"
    head = f'<svg class="lb-plot" xmlns="http://www.w3.org/2000/svg" viewBox="{size}" font-size="{FONT:g}">'
    body = [_shape(sheet.shapes[int(found.group(1))], found) for found in _SHAPE.finditer(svg)]
    return "\n".join([head, *body, "</svg>"])


def _shape(shape: Shape, found: re.Match[str]) -> str:
    attributes = dict(_ATTRIBUTE.findall(found.group(3)))
    if isinstance(shape, Words):
        return _words(shape, attributes, found.group(4) or "")
    return f'<path d="{_path(attributes["d"])}" style="{_line_style(shape.look)}"/>'


def _words(shape: Words, attributes: dict[str, str], text: str) -> str:
    where = f'x="{_rounded(attributes["x"])}" y="{_rounded(attributes["y"])}"'
    if shape.angle:
        where += f' transform="rotate({_number(-shape.angle)} {_rounded(attributes["x"])} {_rounded(attributes["y"])})"'
    if shape.anchor != "start":
        where += f' text-anchor="{shape.anchor}"'
    style = [f"fill:{_colour(shape.look)}"]
    if shape.look.opacity < 1:
        style.append(f"fill-opacity:{_number(shape.look.opacity)}")
    if shape.halo:
        style.append(_HALO)
    return f'<text {where} style="{";".join(style)}">{text}</text>'


def _line_style(look: Look) -> str:
    colour = _colour(look)
    fill = {"none": "none", "paper": "var(--lb-paper,none)", "colour": colour}[look.fill]
    style = [f"fill:{fill}", f"stroke:{colour}"]
    if look.width != 1:
        style.append(f"stroke-width:{_number(look.width)}")
    if look.dash:
        style.append("stroke-dasharray:" + " ".join(map(_number, look.dash)))
    if look.opacity < 1:
        style.append(f"stroke-opacity:{_number(look.opacity)}")
    if look.cap != "butt":
        style.append(f"stroke-linecap:{'square' if look.cap == 'projecting' else look.cap}")
    return ";".join([*style, "stroke-linejoin:round"])


def _colour(look: Look) -> str:
    return f"var(--lb-{look.colour},currentColor)" if look.colour else "currentColor"


def _path(data: str) -> str:
    """Each part as a point and the steps from it, in tenths: half the bytes of the points themselves."""
    return "".join(_part(part) for part in data.split("M") if part.strip())


def _part(part: str) -> str:
    tenths = [round(10 * float(number)) for number in _NUMBER.findall(part)]
    steps = [now - before for before, now in zip(tenths, tenths[2:], strict=False)]
    start = f"M{_tenths(tenths[0])} {_tenths(tenths[1])}"
    if not steps:
        return start
    return f"{start}l{' '.join(map(_tenths, steps)).replace(' -', '-')}{'z' if 'z' in part else ''}"


def _tenths(number: int) -> str:
    """-3 as `-.3`, 20 as `2`."""
    whole, tenth = divmod(abs(number), 10)
    digits = f"{whole or ''}.{tenth}" if tenth else str(whole)
    return f"-{digits}" if number < 0 else digits


def _rounded(number: str) -> str:
    return _number(round(float(number), 1))


def _number(number: float) -> str:
    return f"{number:g}"
