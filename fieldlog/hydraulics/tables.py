"""The tables shipped in `data/`, each with its source and how that was read; no table is written in code."""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from functools import cache
from importlib.resources import files
from typing import Any

from fieldlog.errors import OutOfRangeError


@cache
def table(name: str) -> Mapping[str, Any]:
    """Return what stands in one file of `data/`."""
    return tomllib.loads(files("fieldlog.hydraulics.data").joinpath(f"{name}.toml").read_text(encoding="utf-8"))


def cell(row: Mapping[str, Any], key: str, what: str) -> Any:  # noqa: ANN401  a number or a small table
    """Return what a row holds under a key; an unknown one is refused with the known ones."""
    if key in row:
        return row[key]
    raise OutOfRangeError(f"{what}: no value for {key!r}; known: {', '.join(row)}")
