"""Readings of past years: every good row is kept, every bad one is listed with line, column and mend."""

from __future__ import annotations

import io
import json
import time
from datetime import date

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.errors import InputError
from fieldlog.exchange.columns import KINDS
from fieldlog.exchange.history_cells import Options
from fieldlog.exchange.history_csv import RowResult, open_history, read_rows
from fieldlog.exchange.lookup import Named, Names
from fieldlog.procedures.read import parse
from tests.exchange.past_years import AUTHOR, HEADER, names, sheet, uid

SITE, SYSTEM, SUPPLY, GAUGE = (uid(n) for n in (11, 12, 13, 14))
NAMES = Names(
    sites={SITE: Named(("Harbour Cold Store",))},
    systems={SYSTEM: Named(("Wet system 2",), SITE, SUPPLY)},
    supplies={SUPPLY: Named(("Street main",), SITE)},
    gauges={GAUGE: Named(("G-7",), SITE)},
)
DMY = Options(dates="dmy")


def results(text: str, options: Options | None = None) -> list[RowResult]:
    return list(read_rows(io.BytesIO(text.encode()), NAMES, AUTHOR, options))


def only(header: str, row: str, options: Options | None = None) -> RowResult:
    (result,) = results(f"{header}\n{row}\n", options)
    return result


def body(result: RowResult) -> dict[str, object]:
    assert result.refusals == ()
    found: dict[str, object] = json.loads(result.text)["body"]
    return found


def refusal(result: RowResult) -> tuple[str, str]:
    (found,) = result.refusals
    return found.field, found.message


@pytest.mark.parametrize("delimiter", [";", "\t", ","])
@pytest.mark.parametrize("seed", [3, 17, 2026])
def test_twenty_years_of_twelve_systems_keep_every_good_row_and_name_every_bad_one(seed: int, delimiter: str) -> None:
    made = sheet(seed, delimiter)
    assert len(made.good) + len(made.bad) == 240
    assert len(made.bad) > 8
    found = {result.line: result for result in read_rows(io.BytesIO(made.data()), names(), AUTHOR, DMY)}
    assert [line for line, result in found.items() if not result.refusals] == made.good
    assert {line: result.refusals[0].field for line, result in found.items() if result.refusals} == made.bad
    assert all(refused.line == line and refused.message for line, r in found.items() for refused in r.refusals)


@pytest.mark.parametrize("encoding", ["utf-8-sig", "utf-16", "cp1252"])
def test_the_encoding_changes_nothing(encoding: str) -> None:
    made = sheet(5)
    plain = made.data().decode().replace("\u202f", "\u00a0")
    expected = [r.uid for r in read_rows(io.BytesIO(plain.encode()), names(), AUTHOR, DMY)]
    assert [r.uid for r in read_rows(io.BytesIO(plain.encode(encoding)), names(), AUTHOR, DMY)] == expected


def test_each_kept_row_is_an_entry_that_intake_can_parse() -> None:
    for result in read_rows(io.BytesIO(sheet(8).data()), names(), AUTHOR, DMY):
        if not result.refusals:
            envelope = parse(result.arrival.text).envelope
            assert (envelope.uid, envelope.subject, envelope.author) == (result.uid, result.uid, AUTHOR)
            assert envelope.made_at == f"{envelope.body['performed_on']}T00:00:00Z"
            assert envelope.body["source"] == "old record"


def test_importing_again_gives_the_same_uids_and_adds_nothing() -> None:
    data = sheet(4).data()
    first = {r.uid for r in read_rows(io.BytesIO(data), names(), AUTHOR, DMY) if r.uid}
    again = list(read_rows(io.BytesIO(data), names(), uid(99), DMY, first.__contains__))
    assert len(first) == sum(1 for r in again if r.is_on_file)
    assert all(r.is_on_file != bool(r.refusals) for r in again)


def test_equal_rows_are_tests_of_their_own_and_stay_so() -> None:
    row = "Wet system 2,main drain,2019-03-12,66 psi,55 psi\n"
    header = "system,kind,date,static,residual\n"
    one, two, three = results(header + row * 3)
    assert len({one.uid, two.uid, three.uid}) == 3
    assert [len(result.notes) for result in (one, two, three)] == [0, 1, 1]
    assert [result.uid for result in results(header + row * 2)] == [one.uid, two.uid]


def test_the_order_of_equal_quality_rows_does_not_change_their_uids() -> None:
    header = "system,kind,date,static,residual\n"
    rows = [f"Wet system 2,main drain,20{n}-03-12,66 psi,5{n % 7} psi\n" for n in range(11, 19)]
    forward, backward = results(header + "".join(rows)), results(header + "".join(reversed(rows)))
    assert {r.uid for r in forward} == {r.uid for r in backward}


@pytest.mark.parametrize(
    ("header", "cell", "kept"),
    [
        ("static before (psi)", "66", {"value": "66", "unit": "psi"}),
        ("Static_Before [bar]", "4,50", {"value": "4.50", "unit": "bar"}),
        ("STATIC BEFORE, kPa", "1 034", {"value": "1034", "unit": "kPa"}),
        ("static", "4,5 bar", {"value": "4.5", "unit": "bar"}),
        ("static before (psi)", "4.5 bar", {"value": "4.5", "unit": "bar"}),
    ],
)
def test_a_reading_is_kept_as_entered_with_the_unit_of_cell_or_header(
    header: str, cell: str, kept: dict[str, str]
) -> None:
    result = only(f"system;kind;date;{header};residual (psi)", f"Wet system 2;main drain;2019-03-12;{cell};55")
    assert body(result)["static_before"] == kept


def test_the_unit_comes_from_cell_then_header_then_row_then_file() -> None:
    header = "system;kind;date;unit;static;residual (kPa);static after"
    result = only(header, "Wet system 2;main drain;2019-03-12;kPa;66 psi;3,9 bar;450")
    assert [body(result)[name]["unit"] for name in ("static_before", "residual", "static_after")] == [  # type: ignore[index]
        "psi", "bar", "kPa",
    ]  # fmt: skip
    bare = "system;kind;date;static;residual"
    row = "Wet system 2;main drain;2019-03-12;66;55"
    assert refusal(only(bare, row.replace("66", "66 psi"))) == (
        "residual", "residual: no unit; add one of psi, bar, kPa",
    )  # fmt: skip
    assert body(only(bare, row, Options(pressure_unit="psi")))["residual"] == {"value": "55", "unit": "psi"}


def test_a_header_and_a_row_that_name_two_units_are_not_decided_between() -> None:
    header = "system;kind;date;unit;static (psi);residual (psi)"
    found = only(header, "Wet system 2;main drain;2019-03-12;bar;66;55").refusals
    assert [one.field for one in found] == ["static (psi)", "residual (psi)"]
    assert "the header says psi and the row bar" in found[0].message


@pytest.mark.parametrize(
    ("kind", "header", "row", "kept"),
    [
        (
            "gauge_reading", "gauge,kind,date,pressure,fire pump", "G-7,gauge reading,2019-03-12,64 psi,off",
            {"readings": [{"pressure": {"value": "64", "unit": "psi", "gauge": GAUGE}}], "pump_state": "off"},
        ),
        (
            "inspectors_test", "system,kind,date,seconds to alarm,static",
            "Wet system 2,inspector’s test,2019-03-12,42 s,66 psi",
            {"to_device": {"seconds": 42}, "static": {"value": "66", "unit": "psi"}},
        ),
        (
            "inspectors_test", "system,kind,date,trip (s),delivery (s)",
            "Wet system 2,Inspector's test,2019-03-12,21,1:05",
            {"kind": "trip", "trip": {"seconds": 21}, "delivery": {"seconds": 65}},
        ),
        (
            "flow_test",
            "system,kind,date,at,static (psi),residual (psi),flow (gpm),residual 2 (psi),flow 2 (gpm)",
            "Wet system 2,flow test,2019-03-12,street,78,66,1000,60,1240",
            {
                "supply": SUPPLY, "at": "street", "static": {"value": "78", "unit": "psi"},
                "points": [
                    {"residual": {"value": "66", "unit": "psi"}, "flow": {"value": "1000", "unit": "gpm"}},
                    {"residual": {"value": "60", "unit": "psi"}, "flow": {"value": "1240", "unit": "gpm"}},
                ],
            },
        ),
        (
            "forward_flow_test", "system,kind,date,item,flow (L/min),at riser (bar)",
            "Wet system 2,forward flow test,2019-03-12,BFP-1,2300,3.6",
            {
                "item": "BFP-1", "flow": {"value": "2300", "unit": "L/min"},
                "at_riser": {"value": "3.6", "unit": "bar"},
            },
        ),
    ],
)  # fmt: skip
def test_each_kind_is_read_from_its_own_columns(kind: str, header: str, row: str, kept: dict[str, object]) -> None:
    result = only(header, row)
    assert body(result) == kept | {"performed_on": "2019-03-12"}
    envelope = parse(result.text).envelope
    assert (envelope.kind, envelope.site) == (kind, SITE)


HEAD = "site,system,kind,date,static (psi),residual (psi),pressure (psi),gauge,source"
GOOD = ["Harbour Cold Store", "Wet system 2", "main drain", "2019-03-12", "66", "55", "", "", ""]


@pytest.mark.parametrize(
    ("place", "cell", "field", "says"),
    [
        (0, "Old Mill", "site", "enter the site first and import again"),
        (1, "Wet system 9", "system", "no system on Harbour Cold Store"),
        (1, "", "system", "names its system"),
        (2, "", "kind", "main_drain_test"),
        (3, "12/03/2019", "date", "--dates dmy"),
        (3, "2091-03-12", "date", "not a day of the past"),
        (3, "1492-10-12", "date", "not a day of the past"),
        (4, "66-67", "static (psi)", "no unit of pressure"),
        (4, "66 mmHg", "static (psi)", "no unit of pressure"),
        (5, "", "residual (psi)", "is needed"),
        (6, "64", "pressure (psi)", "no such field"),
        (7, "G-8", "gauge", "no gauge"),
        (8, "hearsay", "source", "witnessed, information sign, old record"),
        (8, "witnessed", "fully_open", "is needed"),
    ],
)
def test_each_fault_is_refused_with_its_column_and_what_to_do(place: int, cell: str, field: str, says: str) -> None:
    cells = [*GOOD[:place], cell, *GOOD[place + 1 :]]
    column, message = refusal(only(HEAD, ",".join(cells), Options(newest=date(2026, 5, 4))))
    assert column == field
    assert says in message


def test_all_faults_of_a_row_are_listed_at_once() -> None:
    cells = ["Harbour Cold Store", "Wet system 9", "main drain", "12/03/2019", "66-67", "5x", "", "", ""]
    assert [one.field for one in only(HEAD, ",".join(cells)).refusals] == [
        "date", "system", "static (psi)", "residual (psi)",
    ]  # fmt: skip


def test_a_gauge_without_a_pressure_of_it_is_not_dropped_silently() -> None:
    header = "system,kind,date,to device (s),gauge"
    assert refusal(only(header, "Wet system 2,inspectors test,2019-03-12,42,G-7"))[0] == "gauge"


def test_an_unquoted_decimal_comma_makes_a_row_too_wide_and_is_said() -> None:
    header = "system,kind,date,static (bar),residual (bar)"
    _, message = refusal(only(header, "Wet system 2,main drain,2019-03-12,4,5,3,9"))
    assert "7 cells" in message
    assert "decimal comma in quotation marks" in message


def test_titles_above_the_header_unknown_columns_and_a_delimiter_line_are_shown_in_the_layout() -> None:
    text = 'sep=;\n"Main drain tests; all works"\n\nSystem;Kind;Date;Static\n(psi);Colour;Residual (psi)\n'
    opened = open_history(io.BytesIO(text.replace("Static\n(psi)", '"Static\n(psi)"').encode()))
    layout = opened.layout
    assert (layout.encoding, layout.delimiter, layout.header_line) == ("UTF-8", ";", 4)
    assert layout.unknown == ("Colour",)
    assert [one.header for one in layout.columns] == ["System", "Kind", "Date", "Static (psi)", "Residual (psi)"]


@pytest.mark.parametrize(
    ("text", "field"),
    [
        ("", "header"),
        ("nothing of the kind\n1,2,3\n", "header"),
        ("system,kind,static (psi)\n", "performed_on"),
        ("date,kind,static (psi)\n", "system"),
        ("system,date,static (psi)\n", "kind"),
        ("system,kind,date,residual (psi),residual (bar)\n", "residual (bar)"),
        ("system,kind,date,day,residual\n", "day"),
    ],
)
def test_a_file_without_a_usable_header_is_refused_as_a_whole(text: str, field: str) -> None:
    with pytest.raises(InputError) as refused:
        open_history(io.BytesIO(text.encode()))
    assert refused.value.field == field


def test_a_fields_own_name_holds_against_an_alias_in_the_same_file() -> None:
    header = "system,kind,date,static before (psi),residual (psi),static (psi),at,flow (gpm)"
    drain, flow = results(
        f"{header}\nWet system 2,main drain,2019-03-12,66,55,,,\nWet system 2,flow test,2019-03-13,,60,78,street,900\n"
    )
    assert body(drain)["static_before"] == {"value": "66", "unit": "psi"}
    assert body(flow)["static"] == {"value": "78", "unit": "psi"}


def test_hostile_cells_are_kept_as_text_or_refused_never_run() -> None:
    header = "system,kind,date,static (psi),residual (psi),note"
    kept = only(header, 'Wet system 2,main drain,2019-03-12,66,55,"=HYPERLINK(""x"")"')
    assert body(kept)["note"] == '=HYPERLINK("x")'
    assert refusal(only(header, "Wet system 2,main drain,2019-03-12,=66,55,"))[0] == "static (psi)"
    assert refusal(only(header, f"Wet system 2,main drain,2019-03-12,66,55,{'x' * 4001}"))[0] == "note"


@pytest.mark.parametrize("cell", ["1" + " " * 60_000 + "-", "1," * 30_000, "12 Mar " * 8_000, "(" * 60_000])
def test_a_cell_of_any_length_is_answered_shortly(cell: str) -> None:
    for place in range(1, 6):
        row = [*GOOD[:place], cell, *GOOD[place + 1 :]]
        (found,) = only(HEAD, ",".join(f'"{one}"' for one in row)).refusals
        assert len(found.message) < 500


def test_odd_but_possible_readings_are_kept_and_noted() -> None:
    header = "system,kind,date,static (psi),residual (psi)"
    result = only(header, "Wet system 2,main drain,2019-03-12,55,66")
    assert result.uid
    assert any("Residual is above static before" in note for note in result.notes)
    after = only(f"{header},static after (psi)", "Wet system 2,main drain,2019-03-12,66,55,59.3")
    assert any("ten percent below static before" in note for note in after.notes)
    partly = only(f"{header},fully open", "Wet system 2,main drain,2019-03-12,66,55,no")
    assert any("will not be compared" in note for note in partly.notes)
    assert only(header, "Wet system 2,main drain,2019-03-12,66,55").notes == ()


def test_what_a_row_becomes_is_said_for_the_dry_run() -> None:
    said = only("system,kind,date,static,residual", "Wet system 2,main drain,2019-03-12,4.5 bar,55 psi").says
    assert said == (
        "Main drain test of 12 March 2019, Wet system 2, Harbour Cold Store: static before 4.5 bar, residual 55 psi"
    )


texts = st.text(st.characters(exclude_categories=["Cs"]), max_size=12)
cells = st.one_of(
    texts, st.sampled_from(["66", "4,5 bar", "2019-03-12", "Wet system 2", "main drain", '"', "a\nb", "x,y"])
)


@given(st.binary(max_size=600))
def test_arbitrary_bytes_give_rows_or_one_refusal_of_the_file(data: bytes) -> None:
    for prefix in (b"", b"system,kind,date,static (psi),residual (psi),note\n"):
        try:
            found = list(read_rows(io.BytesIO(prefix + data), NAMES, AUTHOR, DMY))
        except InputError:
            continue
        assert all(bool(result.refusals) != bool(result.text) for result in found)


@given(st.lists(st.lists(cells, min_size=1, max_size=9), max_size=8), st.sampled_from([",", ";", "\t"]))
def test_arbitrary_cells_give_an_entry_or_refusals_each_with_its_line(table: list[list[str]], delimiter: str) -> None:
    header = delimiter.join(
        ["system", "kind", "date", "static (psi)", "residual", "unit", "turns", "note", "return (s)"]
    )
    data = f"{header}\n" + "\n".join(delimiter.join(row) for row in table)
    for result in read_rows(io.BytesIO(data.encode()), NAMES, AUTHOR, DMY):
        assert bool(result.refusals) != bool(result.text)
        assert all(refused.line == result.line and refused.message for refused in result.refusals)
        if result.text:
            parse(result.text)


@given(st.sampled_from(KINDS), st.dictionaries(st.sampled_from(HEADER), cells))
def test_any_mix_of_columns_gives_no_traceback(kind: str, row: dict[str, str]) -> None:
    text = ";".join(HEADER) + "\n" + ";".join({**row, "Kind": kind}.get(name, "") for name in HEADER) + "\n"
    results(text, DMY)


@pytest.mark.slow
def test_a_hundred_thousand_rows_are_read_one_by_one(capsys: pytest.CaptureFixture[str]) -> None:
    header = "site;system;kind;date;static;residual;static after;unit;return (s);note\n"
    row = "Harbour Cold Store;Wet system 2;main drain;{:02d}.{:02d}.{};4,{:02d};3,9;4,5 bar;bar;4 s;windy\n"
    days = ((1 + i % 28, 1 + i // 28 % 12, 1900 + i // 336 % 120, i % 98) for i in range(100_000))
    data = header + "".join(row.format(*day) for day in days)
    began = time.process_time()
    kept = sum(1 for result in read_rows(io.BytesIO(data.encode()), NAMES, AUTHOR, DMY) if result.text)
    took_s = time.process_time() - began
    assert kept == 100_000
    with capsys.disabled():
        print(f"\n100,000 rows read in {took_s:.1f} s of processor time: {kept / took_s:.0f} a second")
