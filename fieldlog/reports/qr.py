"""A QR code as one filled path, so that no hairlines show between its squares."""

from __future__ import annotations

from itertools import groupby

import segno
from reportlab.pdfgen.canvas import Canvas
from reportlab.platypus.flowables import Flowable

_INK = (0x16 / 255, 0x18 / 255, 0x1B / 255)


class QrCode(Flowable):
    """The code of a text, `size` points wide; the page leaves four squares of white round it (ISO/IEC 18004)."""

    def __init__(self, text: str, size: float) -> None:
        super().__init__()
        self.size = self.width = self.height = size
        self.rows = [bytes(row) for row in segno.make(text, error="m", micro=False).matrix]

    def wrap(self, aW: float, aH: float) -> tuple[float, float]:  # noqa: ARG002, N803  reportlab's names
        """Return width and height."""
        return self.size, self.size

    def draw(self) -> None:
        """Put the code on the canvas."""
        canvas: Canvas = self.canv
        square = self.size / len(self.rows)
        path = canvas.beginPath()
        for down, row in enumerate(self.rows):
            across = 0
            for is_dark, run in groupby(row):
                length = len(list(run))
                if is_dark:
                    path.rect(across * square, self.size - (down + 1) * square, length * square, square)
                across += length
        canvas.setFillColorRGB(*_INK)
        canvas.drawPath(path, stroke=0, fill=1)
