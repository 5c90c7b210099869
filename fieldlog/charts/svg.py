"""A drawing as SVG text for a page: classes and plain attributes, which a style sheet may overrule."""

from __future__ import annotations

import re
from collections.abc import Iterable
from xml.sax.saxutils import escape, quoteattr

from fieldlog.charts.scene import COLOURS, Band, Dot, Ink, Line, Point, Poly, Scene, Shape, Text
from fieldlog.errors import InputError

# What XML 1.0 can't hold at all (W3C, XML 1.0, 2.2 "Characters").
_NOT_XML = re.compile("[^\t\n\r\x20-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")


def svg(scene: Scene, prefix: str) -> str:
    """Return the drawing as one `svg` element; `prefix` makes its ids unique on a page.

    Raises
    ------
    InputError
        If `prefix` is no plain name.
    """
    if not re.fullmatch(r"[A-Za-z][\w-]*", prefix, re.ASCII):
        raise InputError(f"{prefix!r} can't begin an id; use letters, digits and hyphens", field="prefix")
    head = (
        f'<svg xmlns="http://www.w3.org/2000/svg" class="chart" '
        f'viewBox="0 0 {_number(scene.w)} {_number(scene.h)}" '
        f'role="img" aria-labelledby="{prefix}-title {prefix}-desc" font-family="system-ui, sans-serif">'
        f'<title id="{prefix}-title">{_words(scene.title)}</title>'
        f'<desc id="{prefix}-desc">{_words(scene.desc)}</desc>'
    )
    return head + "".join(part for shape in scene.shapes for part in _parts(shape)) + "</svg>"


def _parts(shape: Shape) -> Iterable[str]:
    match shape:
        case Line():
            return (f"<path {_stroke(shape)} d={quoteattr(_path((shape.start, shape.end)))}/>",)
        case Poly():
            return (f'<path {_stroke(shape)} stroke-linejoin="round" d={quoteattr(_path(shape.points))}/>',)
        case Band():
            return (f"<path {_fill(shape.ink)} d={quoteattr(_path(shape.points) + 'Z')}/>",)
        case Dot():
            return (_dot(shape),)
        case Text():
            return _text(shape)


def _stroke(shape: Line | Poly) -> str:
    dash = f' stroke-dasharray="{" ".join(map(_number, shape.dash))}"' if shape.dash else ""
    return (
        f'class="stroke-{shape.ink}" fill="none" stroke="{COLOURS[shape.ink]}" '
        f'stroke-width="{_number(shape.width)}"{dash}'
    )


def _fill(ink: Ink) -> str:
    return f'class="fill-{ink}" fill="{COLOURS[ink]}"'


def _dot(dot: Dot) -> str:
    place = f'cx="{_number(dot.centre[0])}" cy="{_number(dot.centre[1])}" r="{_number(dot.radius)}"'
    if not dot.is_open:
        return f"<circle {_fill(dot.ink)} {place}/>"
    ring = f'stroke="{COLOURS[dot.ink]}" stroke-width="{_number(dot.radius * 0.45)}"'
    return f'<circle class="stroke-{dot.ink} fill-paper" fill="{COLOURS[Ink.PAPER]}" {ring} {place}/>'


def _text(text: Text) -> Iterable[str]:
    bold = ' font-weight="bold"' if text.is_bold else ""
    place = (
        f'x="{_number(text.at[0])}" y="{_number(text.at[1])}" font-size="{_number(text.size)}" '
        f'text-anchor="{text.anchor}"{bold}'
    )
    words = _words(text.text)
    if text.has_halo:
        paper = COLOURS[Ink.PAPER]
        yield (
            f'<text class="halo" aria-hidden="true" fill="none" stroke="{paper}" stroke-width="3" '
            f'stroke-linejoin="round" {place}>{words}</text>'
        )
    yield f"<text {_fill(text.ink)} {place}>{words}</text>"


def _path(points: tuple[Point, ...]) -> str:
    return "M" + "L".join(f"{_number(x)} {_number(y)}" for x, y in points)


def _number(value: float) -> str:
    text = f"{value:.2f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text


def _words(text: str) -> str:
    return escape(_NOT_XML.sub("\ufffd", text))
