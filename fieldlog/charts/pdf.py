"""A drawing on a PDF page: the same shapes by reportlab, as a flowable."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from reportlab.lib.colors import Color, HexColor
from reportlab.pdfgen.canvas import Canvas
from reportlab.platypus.flowables import Flowable

from fieldlog.charts.scene import COLOURS, Band, Dot, Ink, Line, Point, Poly, Scene, Shape, Text

_PAINTS: dict[Ink, Color] = {ink: HexColor(colour) for ink, colour in COLOURS.items()}


def _unchanged(text: str) -> str:
    return text


@dataclass(frozen=True, slots=True)
class Typefaces:
    """Names under which the typefaces are registered, and what turns a text into one they can draw."""

    regular: str
    bold: str
    printable: Callable[[str], str] = _unchanged


class Drawing(Flowable):
    """A drawing in the flow of a page, as large as it was made, or scaled to `width`."""

    def __init__(self, scene: Scene, typefaces: Typefaces, width: float | None = None) -> None:
        super().__init__()
        self.scene, self.typefaces = scene, typefaces
        self.scale = (width or scene.w) / scene.w
        self.width, self.height = scene.w * self.scale, scene.h * self.scale

    def wrap(self, aW: float, aH: float) -> tuple[float, float]:  # noqa: ARG002, N803  reportlab's names
        """Return width and height."""
        return self.width, self.height

    def draw(self) -> None:
        """Put every shape on the canvas, first to last."""
        canvas: Canvas = self.canv
        canvas.saveState()
        canvas.translate(0, self.height)
        canvas.scale(self.scale, self.scale)
        for shape in self.scene.shapes:
            _draw(canvas, shape, self.typefaces)
        canvas.restoreState()


def _draw(canvas: Canvas, shape: Shape, typefaces: Typefaces) -> None:
    match shape:
        case Line():
            _stroke(canvas, (shape.start, shape.end), shape)
        case Poly():
            _stroke(canvas, shape.points, shape)
        case Band():
            canvas.setFillColor(_PAINTS[shape.ink])
            canvas.drawPath(_path(canvas, shape.points, is_closed=True), stroke=0, fill=1)
        case Dot():
            _dot(canvas, shape)
        case Text():
            _text(canvas, shape, typefaces)


def _path(canvas: Canvas, points: tuple[Point, ...], *, is_closed: bool = False) -> object:
    path = canvas.beginPath()
    path.moveTo(points[0][0], -points[0][1])
    for x, y in points[1:]:
        path.lineTo(x, -y)
    if is_closed:
        path.close()
    return path


def _stroke(canvas: Canvas, points: tuple[Point, ...], shape: Line | Poly) -> None:
    canvas.setStrokeColor(_PAINTS[shape.ink])
    canvas.setLineWidth(shape.width)
    canvas.setLineJoin(1)
    canvas.setDash(list(shape.dash))
    canvas.drawPath(_path(canvas, points), stroke=1, fill=0)


def _dot(canvas: Canvas, dot: Dot) -> None:
    canvas.setDash([])
    canvas.setLineWidth(dot.radius * 0.45)
    canvas.setStrokeColor(_PAINTS[dot.ink])
    canvas.setFillColor(_PAINTS[Ink.PAPER if dot.is_open else dot.ink])
    canvas.circle(dot.centre[0], -dot.centre[1], dot.radius, stroke=int(dot.is_open), fill=1)


def _text(canvas: Canvas, text: Text, typefaces: Typefaces) -> None:
    words = typefaces.printable(text.text)
    canvas.setFont(typefaces.bold if text.is_bold else typefaces.regular, text.size)
    put = {"start": canvas.drawString, "middle": canvas.drawCentredString, "end": canvas.drawRightString}[text.anchor]
    if text.has_halo:
        canvas.setDash([])
        canvas.setLineJoin(1)
        canvas.setLineWidth(3)
        canvas.setStrokeColor(_PAINTS[Ink.PAPER])
        put(text.at[0], -text.at[1], words, mode=1)
    canvas.setFillColor(_PAINTS[text.ink])
    put(text.at[0], -text.at[1], words, mode=0)
