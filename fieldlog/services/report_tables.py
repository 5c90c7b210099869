"""Tables of a system for its report: the newest test beside earlier ones, and every test on file."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from datetime import date

from fieldlog.assessment.due import DueItem, due_lists
from fieldlog.hydraulics import formulas
from fieldlog.records.history import DrainTest, Reading, SupplyHistory, System
from fieldlog.records.statement import SystemStatement, TenPercent
from fieldlog.reports.content import Column, Table
from fieldlog.units import SiteUnits
from fieldlog.wording.notices import UNAPPROVED_RULE
from fieldlog.wording.quantities import day, percent, rounded

_NOTHING = "–"
_READINGS = (Column("static before"), Column("residual"), Column("static after"))


def comparison_table(system: System, said: SystemStatement, units: SiteUnits) -> Iterator[Table]:
    """Return the newest main drain test beside acceptance, previous and best."""
    tests = {test.entry: test for test in system.drain_tests}
    newest = _newest(system, said)
    if newest is None or not said.ten_percent:
        return
    rows = [("this test", *_cells(newest), "", f"#{newest.entry}")]
    rows += [
        (_name(one), *_cells(tests[one.entry]), _fall(one), f"#{one.entry}")
        for one in said.ten_percent
        if one.entry in tests
    ]
    yield Table("Comparison", _columns("compared with", "this residual is", units), tuple(rows))


def every_test_table(system: System, said: SystemStatement, units: SiteUnits) -> Iterator[Table]:
    """Return every main drain test on file up to the day judged, the newest first, to the last digit."""
    tests = [test for test in system.drain_tests if test.performed_on <= said.as_of]
    rows = [(day(test.performed_on), *_cells(test), _index(test), _entry(test)) for test in reversed(tests)]
    if rows:
        note = "Readings as entered. The drain index is static less residual over residual to the 0.925."
        yield Table("Every main drain test on file", _columns("date", "drain index", units), tuple(rows), note)


def _newest(system: System, said: SystemStatement) -> DrainTest | None:
    tests = [t for t in system.drain_tests if t.performed_on <= said.as_of and t.residual is not None]
    return tests[-1] if tests else None


def _columns(first: str, last: str, units: SiteUnits) -> tuple[Column, ...]:
    readings = tuple(Column(one.heading, units.pressure, is_number=True) for one in _READINGS)
    return (
        Column(first),
        *readings,
        Column("return", "s", is_number=True),
        Column(last, is_number=True),
        Column("entry"),
    )


def _cells(test: DrainTest) -> tuple[str, ...]:
    seconds = "did not" if test.did_not_recover else _NOTHING if test.return_s is None else f"{test.return_s:g}"
    return (*(_as_entered(reading) for reading in (test.static_before, test.residual, test.static_after)), seconds)


def _as_entered(reading: Reading | None) -> str:
    """Return the value with its own unit: a column may hold readings in several."""
    return _NOTHING if reading is None else f"{reading.value} {reading.unit}"


def _index(test: DrainTest) -> str:
    static, residual = test.static_after or test.static_before, test.residual
    if static is None or residual is None or not residual.psi > 0 or static.psi < residual.psi:
        return _NOTHING
    return rounded(float(formulas.drain_index(static.psi, residual.psi)), 3)


def _entry(test: DrainTest) -> str:
    remarks: list[str] = []
    if test.standing != "routine":
        remarks.append(test.standing)
    if test.fully_open is False:
        remarks.append("not fully open")
    if test.corrected:
        remarks.append("corrected")
    return " ".join([f"#{test.entry}", *remarks])


def _name(one: TenPercent) -> str:
    return {"best": "best on file (shown only)"}.get(one.against, one.against)


def _fall(one: TenPercent) -> str:
    if one.reduction < 0:
        return f"{percent(-one.reduction)} above"
    return f"{percent(one.reduction, reaches=one.flagged)} below" + (" · flagged" if one.flagged else "")


def due_table(history: SupplyHistory, system: System, as_of: date, name_of: Callable[[str], str]) -> Iterator[Table]:
    """Return what is due at a system by each rule profile in force; a row nobody approved is called so."""
    for one in due_lists(history, as_of):
        items = [item for item in one.items if system.uid in item.systems]
        if items:
            title = f"What is due by {one.standard}, edition {one.edition}"
            columns = (Column("item"), Column("state"), Column("due"), Column("last done"), Column("asked by"))
            yield Table(title, columns, tuple(_due_row(item, name_of) for item in items))


def _due_row(item: DueItem, name_of: Callable[[str], str]) -> tuple[str, ...]:
    part = item.valve or (name_of(item.gauge) if item.gauge else "")
    dates = (item.due, item.last_done)
    due, last = (_NOTHING if when is None else day(when) for when in dates)
    return (
        f"{item.item} ({part})" if part else item.item,
        item.state + (f", if {', '.join(item.unstated)}".replace("_", " ") if item.unstated else ""),
        due,
        last + (f" #{item.last_entry}" if item.last_entry else ""),
        item.clause or ("the approved profile" if item.required else UNAPPROVED_RULE),
    )
