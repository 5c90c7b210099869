"""Drawn signatures of nobody: a squiggle as path text."""

from __future__ import annotations

import numpy as np


def squiggle(seed: int) -> str:
    """Return a squiggle of M and C in a box of 300 by 90."""
    noise = np.random.default_rng(seed)
    x, y = 12.0, 50.0
    parts = [f"M {x:.1f} {y:.1f}"]
    for _ in range(9):
        points = [
            (x + 29 * share + float(noise.normal(0, 5)), 45 + float(noise.normal(0, 17))) for share in (0.35, 0.7, 1.0)
        ]
        parts.append("C " + " ".join(f"{px:.1f} {min(max(py, 4), 86):.1f}" for px, py in points))
        x, y = points[-1]
    return " ".join(parts)
