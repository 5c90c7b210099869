"""An ICC version 2 profile of the sRGB colour space, as PDF/A wants one beside device colours.

A matrix profile is a table of tags: white point, three primaries, one tone curve. The numbers are those of
IEC 61966-2-1 (primaries adapted from D65 to the D50 of profiles); the layout is that of ICC.1:2001-04.
"""

from __future__ import annotations

import struct

# Profile connection space and adapted primaries of sRGB, XYZ under D50 (ICC.1:2001-04, sRGB characterisation).
_WHITE = (0.9642, 1.0, 0.8249)
_RED = (0.43607, 0.22249, 0.01392)
_GREEN = (0.38515, 0.71687, 0.09708)
_BLUE = (0.14307, 0.06061, 0.71410)
_CURVE_POINTS = 1024


def srgb_profile() -> bytes:
    """Return the profile; the same bytes each time."""
    tags = {
        b"desc": _description("sRGB"),
        b"cprt": b"text\0\0\0\0No rights reserved.\0",
        b"wtpt": _xyz(_WHITE),
        b"rXYZ": _xyz(_RED),
        b"gXYZ": _xyz(_GREEN),
        b"bXYZ": _xyz(_BLUE),
        b"rTRC": _tone_curve(),
    }
    table, body = _tag_table(tags)
    return _header(128 + len(table) + len(body)) + table + body


def _tag_table(tags: dict[bytes, bytes]) -> tuple[bytes, bytes]:
    start = 128 + 4 + 12 * (len(tags) + 2)
    places, body = {}, b""
    for name, content in tags.items():
        places[name] = (start + len(body), len(content))
        body += content + b"\0" * (-len(content) % 4)
    # One curve serves all three colours.
    places |= {b"gTRC": places[b"rTRC"], b"bTRC": places[b"rTRC"]}
    rows = b"".join(struct.pack(">4sII", name, *place) for name, place in places.items())
    return struct.pack(">I", len(places)) + rows, body


def _header(size: int) -> bytes:
    made = (2000, 1, 1, 0, 0, 0)
    head = struct.pack(">I4sI4s4s4s6H4s", size, b"\0\0\0\0", 0x02100000, b"mntr", b"RGB ", b"XYZ ", *made, b"acsp")
    return (head + b"\0" * 28 + b"".join(map(_fixed, _WHITE))).ljust(128, b"\0")


def _fixed(number: float) -> bytes:
    return struct.pack(">i", round(number * 65536))


def _xyz(point: tuple[float, float, float]) -> bytes:
    return b"XYZ \0\0\0\0" + b"".join(map(_fixed, point))


def _description(name: str) -> bytes:
    text = name.encode("ascii") + b"\0"
    return b"desc\0\0\0\0" + struct.pack(">I", len(text)) + text + b"\0" * (4 + 4 + 2 + 1 + 67)


def _tone_curve() -> bytes:
    values = [_linear(step / (_CURVE_POINTS - 1)) for step in range(_CURVE_POINTS)]
    return b"curv\0\0\0\0" + struct.pack(f">I{_CURVE_POINTS}H", _CURVE_POINTS, *(round(v * 65535) for v in values))


def _linear(encoded: float) -> float:
    """Return the linear light of an encoded value (IEC 61966-2-1)."""
    return float(encoded / 12.92 if encoded <= 0.04045 else ((encoded + 0.055) / 1.055) ** 2.4)
