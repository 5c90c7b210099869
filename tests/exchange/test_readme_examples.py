"""The examples in the README can be imported as they stand."""

from __future__ import annotations

import io
import re
from pathlib import Path

from fieldlog.exchange.entries_jsonl import read_entries
from fieldlog.exchange.history_csv import read_rows
from fieldlog.exchange.lookup import Named, Names
from fieldlog.procedures.read import parse
from fieldlog.records.entries import Arrival

README = Path(__file__).resolve().parents[2] / "README.md"
AUTHOR, SITE, SYSTEM = (f"00000000-0000-4000-8000-00000000000{n}" for n in "abc")


def block(language: str) -> bytes:
    found = re.search(rf"```{language}\n(.*?)```", README.read_text(), re.DOTALL)
    assert found is not None
    return found[1].encode()


def test_the_lines_of_entries_in_the_readme_are_entries() -> None:
    found = [one for _, one in read_entries(io.BytesIO(block("jsonl")))]
    kinds = [parse(one.text).envelope.kind for one in found if isinstance(one, Arrival)]
    assert kinds == ["organisation", "site", "supply", "system", "main_drain_test"]


def test_the_rows_of_readings_in_the_readme_are_kept() -> None:
    names = Names(sites={SITE: Named(("Harbour Cold Store",))}, systems={SYSTEM: Named(("Wet system 2",), SITE)})
    found = list(read_rows(io.BytesIO(block("csv")), names, AUTHOR))
    assert [result.refusals for result in found] == [(), ()]
