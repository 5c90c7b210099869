"""A spreadsheet of twenty years and twelve systems, as an office would have kept it: invented, seeded, untidy."""

from __future__ import annotations

import random
from dataclasses import dataclass, field
from datetime import date, timedelta

from fieldlog.exchange.lookup import Named, Names

AUTHOR = "00000000-0000-4000-8000-0000000000aa"
HEADER = (
    "Site", "System", "Kind", "Date", "Static before", "Residual (full flow)", "Static after", "Unit",
    "Return time (s)", "Drain fully open", "Remarks", "Inspector's car",
)  # fmt: skip
_PSI_IN = {"psi": 1.0, "bar": 14.5038, "kPa": 0.145038}
_SPACES = ("", " ", "  ", "\u00a0", "\u202f")


def uid(number: int) -> str:
    return f"00000000-0000-4000-8000-{number:012x}"


@dataclass
class Sheet:
    """The lines of the file, which of them are good, and which column of which bad line is at fault."""

    lines: list[str] = field(default_factory=list)
    good: list[int] = field(default_factory=list)
    bad: dict[int, str] = field(default_factory=dict)

    def data(self, encoding: str = "utf-8") -> bytes:
        return "".join(f"{line}\r\n" for line in self.lines).encode(encoding)


def names() -> Names:
    sites = {uid(100 + s): Named((f"Works {s}", f"W-{s}")) for s in range(4)}
    systems = {uid(200 + n): Named((f"Wet system {n % 3 + 1}",), uid(100 + n // 3)) for n in range(12)}
    return Names(sites, systems)


def sheet(seed: int, delimiter: str = ";") -> Sheet:
    dice = random.Random(seed)
    made = Sheet()
    made.lines += ["Main drain tests of all works", delimiter.join(HEADER)]
    for year in range(2003, 2023):
        for system in range(12):
            cells = _row(dice, year, system)
            fault = _spoil(dice, cells) if dice.random() < 0.07 else None
            made.lines.append(delimiter.join(_quoted(cell, delimiter) for cell in cells))
            number = len(made.lines)
            if fault is None:
                made.good.append(number)
            else:
                made.bad[number] = fault
    return made


def _row(dice: random.Random, year: int, system: int) -> list[str]:
    unit = dice.choice(tuple(_PSI_IN))
    static_psi = 78 - 0.4 * (year - 2003) + dice.gauss(0, 1.5)
    residual_psi = static_psi - 11 - dice.random()
    day = date(year, 10, 3) + timedelta(days=dice.randrange(40))
    inside = dice.random() < 0.4
    values = [_reading(dice, psi, unit, inside) for psi in (static_psi, residual_psi, static_psi - 0.5)]
    return [
        dice.choice((f"Works {system // 3}", f"works  {system // 3} ", f"W_{system // 3}")),
        f"{dice.choice(_SPACES)}Wet system {system % 3 + 1}",
        dice.choice(("main drain test", "Main Drain", "main_drain_test")),
        dice.choice((day.isoformat(), day.strftime("%d.%m.%Y"), day.strftime("%d/%m/%Y"))),
        values[0],
        values[1],
        dice.choice((values[2], "", "-", "n/a")),
        "" if inside else dice.choice((unit, unit.upper())),
        dice.choice(("4", "6 s", "")),
        dice.choice(("yes", "Y", "")),
        dice.choice(("", "windy; cold", 'said "fine"', "=1+1")),
        "",
    ]


def _reading(dice: random.Random, psi: float, unit: str, inside: bool) -> str:
    number = f"{psi / _PSI_IN[unit]:.{ {'psi': 0, 'bar': 2, 'kPa': 0}[unit] }f}"
    if dice.random() < 0.5:
        number = number.replace(".", ",")
    return f"{dice.choice(_SPACES)}{number}{dice.choice(_SPACES)}{unit if inside else ''}"


def _spoil(dice: random.Random, cells: list[str]) -> str:
    column, wrong = dice.choice((
        ("Site", "Works 9"), ("System", "Wet system 7"), ("Kind", "leak test"), ("Date", "31.02.2011"),
        ("Date", "3/4/11"), ("Static before", "6O psi"), ("Residual (full flow)", ""),
        ("Static after", "1,034 kPa"), ("Unit", "mmHg"), ("Return time (s)", "soon"),
        ("Drain fully open", "nearly"),
    ))  # fmt: skip
    cells[HEADER.index(column)] = wrong
    if column == "Static before":
        cells[HEADER.index("Unit")] = ""
    return column


def _quoted(cell: str, delimiter: str) -> str:
    return '"' + cell.replace('"', '""') + '"' if delimiter in cell or '"' in cell else cell
