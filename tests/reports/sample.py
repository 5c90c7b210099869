"""A report of an invented visit at an invented site, with everything a report can hold; roles, no names."""

from __future__ import annotations

from datetime import UTC, date, datetime

from fieldlog.charts.history import ExpectedRange, HistoryChart, Reading, ReferenceLine, Series
from fieldlog.charts.supply import Curve, FlowPoint, SupplyChart
from fieldlog.reports import content

MADE_AT = datetime(2026, 10, 12, 14, 5, 37, tzinfo=UTC)
HEAD = "7c1fe0b3a95d24c86e1f50b7d9a23c4488e6f1073ab5cd92e04b6f8137d2a95e"
RECORDS = b'{"entries":["first entry","second entry"],"format":2}'

# Year, static and residual in psi: level for five years, then the supply declines.
TESTS = (
    (2010, 78, 66), (2011, 77, 66), (2012, 78, 65), (2013, 77, 66), (2014, 78, 65), (2015, 76, 64), (2018, 75, 63),
    (2019, 73, 62), (2020, 73, 61), (2021, 72, 60), (2022, 71, 60), (2023, 70, 58), (2024, 69, 57), (2025, 68, 57),
    (2026, 66, 55),
)  # fmt: skip
STROKES = (
    "M12 60 C20 10 40 8 38 40 C36 70 18 84 22 58 C28 30 60 22 66 48 C70 66 56 70 58 54 L74 40 "
    "C82 34 84 66 92 56 C100 46 104 30 110 44 C114 56 108 68 122 54 L150 46 M96 24 L99 22"
)


def supply_line(static: float, residual: float, flow: float) -> tuple[tuple[float, float], ...]:
    """Points of the 1.85-power line through static and residual at `flow`, to 1,200 gpm."""
    return tuple((q, static - (static - residual) * (q / flow) ** 1.85) for q in (0.0, 300.0, 600.0, 900.0, 1200.0))


def supply_picture() -> content.Picture:
    """The supply curve against the recorded demand."""
    curves = (
        Curve("flow test 9 Apr 2024", supply_line(70, 52, 940), 940.0, is_newest=True),
        Curve("flow test 3 Oct 2010", supply_line(78, 61, 1010), 1010.0),
    )
    chart = SupplyChart(
        "Supply against demand",
        "Two supply curves over flow to the power 1.85. At 620 gpm the newer one gives 61.7 psi; demand is 46.5 psi.",
        curves,
        "gpm",
        "psi",
        (FlowPoint(940.0, 52.0, "940 gpm at 52 psi"),),
        FlowPoint(620.0, 46.5, "demand 620 gpm, 46.5 psi"),
    )
    return content.Picture(
        "Supply against the recorded design demand",
        chart,
        "Both curves by flow tests at the street hydrant, moved to the base of riser; dashed beyond the "
        "measured flow. "
        "The upright stroke is the measured margin at the demand.",
    )


def history_picture() -> content.Picture:
    """Static and residual of all main drain tests."""
    residual = tuple(Reading(date(y, 10, 3 + y % 11), float(r), y != 2019) for y, _, r in TESTS)
    static = tuple(Reading(date(y, 10, 3 + y % 11), float(s)) for y, s, _ in TESTS)
    chart = HistoryChart(
        "Static and residual of every main drain test",
        "Residual fell from 66 psi at acceptance in 2010 to 55 psi in 2026; static from 78 to 66 psi.",
        "psi",
        (Series("residual 55", residual, is_main=True), Series("static 66", static)),
        (
            ReferenceLine("acceptance 66", 66.0, date(2010, 10, 10)),
            ReferenceLine("ten percent line 59.4", 59.4, date(2010, 10, 10), is_dashed=True),
        ),
        (ExpectedRange(53.0, 59.5, date(2025, 10, 4), date(2027, 1, 20), "expected"),),
    )
    return content.Picture(
        "Static and residual over time",
        chart,
        "Main drain tests through the 2 in. drain at riser 2. The ring is a test that is not comparable "
        "(pump running). "
        "The band is where the residual was expected.",
    )


def drain_test() -> content.TestRecord:
    """The main drain test of the visit."""
    gauge = "G-14 supply side, 0–300 psi, 5 psi divisions, grade B, compared 3 Mar 2026"
    return content.TestRecord(
        "Main drain test",
        "Wet system 2, 2 in. drain at riser 2 · 12 Oct 2026, 09:40 to 09:58 · technician, licence "
        "FS-2207 to 30 Jun 2028 · "
        "2023 edition, clause 13.2.5",
        (
            content.Reading("Static before", "68", "psi", gauge),
            content.Reading("Residual, full flow", "55", "psi", gauge, "confirmed by a second look"),
            content.Reading("Time to return", "6", "s", "stop clock"),
            content.Reading("Static after", "66", "psi", gauge, "steady: two looks, 30 s apart"),
        ),
        (
            content.Row("Flow", "fully open, 7 turns; running clear after 40 s"),
            content.Row("Outlet", "car park gully, 3 ft below the gauge"),
            content.Row("Pump state", "off", note="at all three readings"),
            content.Row("Drain", "unchanged since the last test"),
            content.Row(
                "Valves",
                "Post indicator valve 1, north side: found open, left open. Backflow preventer BF-2, "
                "both shut-off valves: "
                "found open, left open. Riser control valve 2: found open, left open, sealed.",
            ),
            content.Row("Restoration", "valves, pressures and alarm points normal", note="monitoring party told 10:12"),
        ),
        ("Static before is above static after: trapped or surge pressure bled off. Static after is used.",),
        "Entry 8127, received from a tablet 12 Oct 2026 10:31 UTC, signed by the device.",
    )


def alarm_test() -> content.TestRecord:
    """The inspector's test of the visit."""
    return content.TestRecord(
        "Inspector's test",
        "Waterflow switch WF-2, by the remote test connection, K 5.6 orifice · 12 Oct 2026, 10:20 · "
        "technician, FS-2207",
        (
            content.Reading("Alarm device", "31", "s", "stop clock"),
            content.Reading("Local bell", "38", "s", "stop clock"),
            content.Reading("Panel", "34", "s", "panel clock"),
            content.Reading("Monitoring", "52", "s", "by telephone"),
            content.Reading("Pressure, flowing", "61", "psi", "G-15 system side, 0–300 psi, 5 psi divisions"),
        ),
        (content.Row("Rule", "alarm within 90 s", note="2023 edition; approved by the office, 4 Feb 2026"),),
        (),
        "Entry 8129; corrects entry 8128 (panel time typed for the bell).",
    )


def comparison() -> content.Table:
    """The ten percent criterion against acceptance, previous and best."""
    columns = (
        content.Column("Compared with"), content.Column("Date"), content.Column("Residual", "psi", is_number=True),
        content.Column("Lower by", "percent", is_number=True), content.Column("Ten percent criterion"),
    )  # fmt: skip
    rows = (
        ("acceptance", "10 Oct 2010", "66", "16.7 ± 2.4", "ten percent or more: asks for the cause"),
        ("previous comparable test", "4 Oct 2025", "57", "3.5 ± 2.9", "less than ten percent"),
        ("best on file", "10 Oct 2010", "66", "16.7 ± 2.4", "shown without a flag"),
    )
    note = "On the readings as entered. The error beside it is one standard error of both readings."
    return content.Table("Residual compared", columns, rows, note)


def every_test(years: int = 0) -> content.Table:
    """Every main drain test on file, newest first; `years` of monthly rows more for a long one."""
    columns = (
        content.Column("Date"), content.Column("Static", "psi", is_number=True),
        content.Column("Residual", "psi", is_number=True), content.Column("Return", "s", is_number=True),
        content.Column("Drain index", "", is_number=True), content.Column("Remarks"),
        content.Column("Entry", "", is_number=True),
    )  # fmt: skip
    rows = [
        (
            f"{3 + y % 11} Oct {y}", str(s), str(r), str(4 + y % 4), f"{(s - r) / r**0.925:.3f}",
            {2010: "acceptance", 2019: "not comparable: pump running", 2015: "gauge replaced after this "
            "test"}.get(y, ""),
            str(300 + (y - 2010) * 470),
        )
        for y, s, r in reversed(TESTS)
    ]  # fmt: skip
    rows += [
        (f"7 {month} {1999 - year}", "77", "66", "5", "0.229", "old record", str(2000 + year))
        for year in range(years)
        for month in ("Dec", "Nov", "Oct", "Sep", "Aug", "Jul", "Jun", "May", "Apr", "Mar", "Feb", "Jan")
    ]
    return content.Table("Every main drain test on file", columns, tuple(rows))


def statements() -> tuple[content.StatedSystem, ...]:
    """Statements on two systems."""
    return (
        content.StatedSystem(
            "Wet system 2, cold store",
            "changed",
            "Changed. The residual is 16.7 % below acceptance. Measured margin at the recorded design "
            "demand: 15 psi "
            "(10 to 20), by the flow test of 9 April 2024. Next step: a flow test at the street hydrant.",
            (
                "The static of every system on this supply fell by about 1.0 psi each year since 2015: "
                "likely upstream "
                "of the lead-in. The drain index did not rise, so no restriction shows.",
                "The recorded design demand is 620 gpm at 46.5 psi at the base of riser. The demand is "
                "as recorded; it "
                "was not recalculated.",
            ),
            (
                "A loss of up to 12 psi at the design demand would not have shown. With a test gauge "
                "read to 0.5 psi: 9 psi.",
            ),
        ),
        content.StatedSystem(
            "Dry system 3, loading dock",
            "unproven",
            "Unproven. No design demand is on record. Next step: enter the hydraulic design record.",
            ("Two comparable tests are on file; the residual is as expected.",),
        ),
    )


def sample_report(**changes: object) -> content.VisitReport:
    """The whole report; `changes` replace parts of it."""
    parts: dict[str, object] = {
        "name": "Harbour Cold Store, 12 October 2026, revision 2",
        "heading": "Visit of 12 October 2026",
        "organisation": content.Party(
            "Reedbank Fire Protection",
            ("4 Mill Lane, Reedbank", "contractor licence C-4471", "telephone 555 0142"),
        ),
        "site": content.Party(
            "Harbour Cold Store", ("12 Quay Road, Reedbank", "owner's representative: facility office")
        ),
        "made_at": MADE_AT,
        "head": HEAD,
        "records_json": RECORDS,
        "summary": (
            content.Row("On site", "12 Oct 2026, 08:50 to 11:40"),
            content.Row("Technician", "field technician, licence FS-2207", note="to 30 Jun 2028"),
            content.Row("Witness", "owner's representative"),
            content.Row("Weather", "dry, 54 °F"),
            content.Row("Done", "2 main drain tests, 1 inspector's test, 6 gauge readings"),
            content.Row("Not done", "dry system 3 trip test", note="agreed for 19 Oct 2026: dock in use"),
            content.Row("Supply", "public main, 8 in., one lead-in from Quay Road", note="backflow preventer BF-2"),
        ),
        "statements": statements(),
        "sections": (
            content.Section(
                "Findings",
                (
                    content.Finding(
                        "Noncritical deficiency, proposed by the technician; not yet decided",
                        "Gauge G-15 on the system side reads 8 psi above a test gauge at zero flow. It "
                        "is to be replaced.",
                        (
                            content.Row("Found", "12 Oct 2026, 10:25"),
                            content.Row("Told", "owner's representative, in person, 11:30"),
                            content.Row("Due", "11 Nov 2026"),
                            content.Row("Photo", "1", note="received, in the record"),
                        ),
                    ),
                ),
            ),
            content.Section(
                "Wet system 2",
                (
                    supply_picture(),
                    history_picture(),
                    comparison(),
                    drain_test(),
                    alarm_test(),
                    every_test(),
                    content.Facts(
                        (
                            content.Row("Riser", "riser 2, pump room"),
                            content.Row("Installed", "2010"),
                            content.Row("Base of riser", "+4 ft", note="above the yard mark"),
                            content.Row("Drain", "2 in., K not measured"),
                        ),
                        "Particulars of the system",
                    ),
                ),
                "Cold store, 38 sprinklers in the design area; on the public main by the Quay Road lead-in",
            ),
        ),
        "cautions": (
            "Monitoring service told and panel on test before the first flow; back to normal at 11:30.",
            "The outlet took the full flow; nobody stood in its way.",
            "Gauge G-15 is not to be used for readings until it is replaced.",
        ),
        "standards": (
            "Inspection standard, 2023 edition, as adopted locally with amendments of 2024; profile "
            "approved by the office "
            "on 4 February 2026.",
            "Rows without approval are marked and are not requirements of a clause.",
        ),
        "cannot_show": (
            "A main drain test compares a system with its own past. It does not measure what the supply "
            "can give at the "
            "design demand, and it does not replace a flow test or a forward-flow test.",
            "An inspector's test is a test of the alarm or the valve. It is no evidence of capacity.",
        ),
        "limits": (
            "Estimates are estimates; only a flow test measures the supply.",
            "Local codes, the authority having jurisdiction, manufacturers' data and licensed practice "
            "come before "
            "anything stated here.",
            "Only the items listed were inspected or tested on this visit.",
        ),
        "signed_text": "The signers were shown: 2 main drain tests, 1 inspector's test, 6 gauge "
        "readings, 1 finding; 1 item "
        "not done. Only the items listed were inspected or tested on this visit.",
        "signatures": (
            content.Signature("Technician", "Field technician", ("licence FS-2207", "12 Oct 2026, 11:38"), STROKES),
            content.Signature(
                "Owner's representative", "Facility office", ("12 Oct 2026, 11:39",), "", "the screen was wet"
            ),
        ),
        "log": (content.Row("Entries", "8119 to 8131"), content.Row("Made", "12 Oct 2026, 14:05 UTC")),
        "revision": content.Revision(
            "Revision 2",
            "“Harbour Cold Store, 12 October 2026”",
            "Panel time of the inspector's test was corrected.",
        ),
        "verify_address": "https://log.reedbank.example/verify/7c1fe0b3a95d24c8",
    }
    return content.VisitReport(**(parts | changes))  # type: ignore[arg-type]
