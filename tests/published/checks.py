"""The published checks as read from their files, how each is computed, and how far it may lie off."""

from __future__ import annotations

import tomllib
from functools import reduce
from pathlib import Path
from typing import Any

from fieldlog import units
from fieldlog.hydraulics import formulas, pipe, supply
from tests.published import routes

HERE = Path(__file__).parent
MODULES = {"formulas": formulas, "pipe": pipe, "supply": supply, "units": units}

Check = dict[str, Any]


def published() -> list[Check]:
    return [check for path in sorted(HERE.glob("*.toml")) if path.stem != "pinned" for check in checks_in(path)]


def pinned() -> list[Check]:
    return checks_in(HERE / "pinned.toml")


def checks_in(path: Path) -> list[Check]:
    return list(tomllib.loads(path.read_text(encoding="utf-8"))["check"])


def label(check: Check) -> str:
    return f"{check['row']}: {check['case']}"


def named(dotted: str) -> Any:
    """The function or method of fieldlog that a check names."""
    module, *rest = dotted.split(".")
    return reduce(getattr, rest, MODULES[module])


def computed(check: Check) -> float:
    called = getattr(routes, check["route"]) if "route" in check else named(check["formula"])
    return float(called(**check["inputs"]))


def half_last_digit(printed: str) -> float:
    return 0.5 * 10.0 ** -len(printed.partition(".")[2])


def tolerance(check: Check) -> float:
    """How far the result may lie from what is printed, in the printed unit."""
    stated = check["tolerance"]
    if stated == "half last digit":
        return half_last_digit(check["expected"])
    number, _, unit = stated.partition(" ")
    return float(number) / 100 * abs(float(check["expected"])) if unit == "%" else float(number)
