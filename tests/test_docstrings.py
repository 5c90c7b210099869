"""Public functions of hydraulics and assessment state their parameters, units and references."""

from __future__ import annotations

import importlib
import inspect
import pkgutil
import re
from collections.abc import Callable, Iterator
from typing import Any

import pytest

import fieldlog.assessment
import fieldlog.hydraulics

SECTION = re.compile(r"^(\w[\w ]*)\n-{3,}\n", re.MULTILINE)
UNIT = re.compile(r"\[[^\]\s][^\]]*\]\.?$")
TYPED_NAME = re.compile(r"^(\*{0,2}\w+) : (\S.*)$")

# Public functions that say less, each with its reason: one sentence does where no quantity goes in or comes out.
EXCEPTIONS = {
    "assessment.applies.unstated_facts": "looks up facts on record",
    "assessment.curve_at_base.unusable": "makes a reason of a name and an entry",
    "assessment.done.events": "looks up entries",
    "assessment.done.is_kept": "looks up whether a kind of event is kept",
    "assessment.done.last_done": "looks up entries",
    "assessment.done.stood": "compares days",
    "assessment.due.profiles_in_force": "compares days",
    "assessment.windows.add": "adds to a day of the calendar",
    "assessment.windows.add_months": "adds to a day of the calendar",
    "assessment.windows.is_in_season": "compares months",
    "hydraulics.ranges.above_zero": "checks a number of any unit",
    "hydraulics.ranges.as_given": "keeps a number of any unit",
    "hydraulics.ranges.finite": "checks a number of any unit",
    "hydraulics.ranges.not_negative": "checks a number of any unit",
    "hydraulics.tables.cell": "looks up what a table holds",
}


def functions() -> Iterator[tuple[str, Callable[..., Any]]]:
    for package in (fieldlog.hydraulics, fieldlog.assessment):
        for found in pkgutil.iter_modules(package.__path__, f"{package.__name__}."):
            module = importlib.import_module(found.name)
            for name, one in inspect.getmembers(module, inspect.isfunction):
                if one.__module__ == found.name and not name.startswith("_"):
                    yield f"{found.name.removeprefix('fieldlog.')}.{name}", one


FUNCTIONS = dict(functions())
DETAILED = sorted(set(FUNCTIONS) - set(EXCEPTIONS))


def sections(name: str) -> dict[str, str]:
    parts = SECTION.split(inspect.getdoc(FUNCTIONS[name]) or "")
    return {"Summary": parts[0], **dict(zip(parts[1::2], parts[2::2], strict=True))}


def entries(section: str) -> dict[str, str]:
    """What stands at the margin of a section, each with its indented text."""
    found: dict[str, str] = {}
    for line in section.splitlines():
        if line and not line.startswith(" "):
            found[line] = ""
        elif line.strip():
            last = next(reversed(found))
            found[last] = f"{found[last]} {line.strip()}".strip()
    return found


@pytest.mark.parametrize("name", DETAILED)
def test_every_parameter_stands_in_order_with_its_unit(name: str) -> None:
    stated = entries(sections(name).get("Parameters", ""))
    names = [match[1] for line in stated if (match := TYPED_NAME.match(line))]
    assert names == list(inspect.signature(FUNCTIONS[name]).parameters)
    assert len(names) == len(stated)
    assert [line for line, text in stated.items() if not UNIT.search(text)] == []


@pytest.mark.parametrize("name", DETAILED)
def test_what_is_returned_stands_with_its_unit(name: str) -> None:
    returned = entries(sections(name).get("Returns", ""))
    assert returned
    assert [line for line, text in returned.items() if not re.search(r"\[[^\]\s][^\]]*\]", text)] == []


@pytest.mark.parametrize("name", DETAILED)
def test_the_source_is_named(name: str) -> None:
    assert len(sections(name).get("References", "").strip()) > 10


@pytest.mark.parametrize("name", sorted(FUNCTIONS))
def test_the_first_line_is_one_sentence(name: str) -> None:
    first = sections(name)["Summary"].split("\n\n")[0]
    assert first.strip().endswith(".")


@pytest.mark.parametrize("name", sorted(EXCEPTIONS))
def test_an_exception_is_a_function_that_says_no_more_than_a_sentence(name: str) -> None:
    assert set(sections(name)) == {"Summary"}


def test_there_is_something_to_look_at() -> None:
    assert len([name for name in FUNCTIONS if name.startswith("hydraulics.")]) > 15
    assert len([name for name in FUNCTIONS if name.startswith("assessment.")]) > 40
