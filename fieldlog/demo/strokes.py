"""Drawn signatures of nobody: a squiggle as path text."""

from __future__ import annotations

import numpy as np

from fieldlog.demo.simulator import dice


def squiggle(person: str, occasion: str) -> str:
    """Return a person's squiggle of M and C in a box of 300 by 90: alike each time, never the same."""
    usual, today = dice(person, "signature"), dice(person, occasion)
    x, y = 12.0, 50.0
    parts = [f"M {x:.1f} {y:.1f}"]
    for _ in range(9):
        points = [
            (x + 29 * share + _moved(usual, today, 5), 45 + _moved(usual, today, 17)) for share in (0.35, 0.7, 1.0)
        ]
        parts.append("C " + " ".join(f"{px:.1f} {min(max(py, 4), 86):.1f}" for px, py in points))
        x, y = points[-1]
    return " ".join(parts)


def _moved(usual: np.random.Generator, today: np.random.Generator, size: float) -> float:
    return float(usual.normal(0, size) + today.normal(0, size / 8))
