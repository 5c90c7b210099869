"""What a report of a visit says: worded text and chart inputs, ready to print, in the order they are printed.

Nothing here computes, words or looks up: every string is display text in the reader's units, dates spelled out,
decimals as entered. Whoever fills it in decides what is said; `pages` only decides where it stands. Text is plain:
markup in it is printed as typed.

Order on paper: organisation and site, then the statements (what is so, how sure, since when, what next), then the
sections (the picture, then every number), then cautions, adopted standard, what the tests do not show, signatures,
and where the record can be checked.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from datetime import datetime

from fieldlog.charts.history import HistoryChart
from fieldlog.charts.margin import MarginChart
from fieldlog.charts.supply import SupplyChart


@dataclass(frozen=True, slots=True)
class Party:
    """The organisation or the site: its name, and lines under it (address; licence; telephone)."""

    name: str
    lines: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Row:
    """One fact: label, value and unit as entered, and a note in softer ink (which gauge, what state)."""

    label: str
    value: str
    unit: str = ""
    note: str = ""


@dataclass(frozen=True, slots=True)
class Facts:
    """A block of facts in two columns, for particulars of a visit, supply, system, drain or valve."""

    rows: tuple[Row, ...]
    title: str = ""


@dataclass(frozen=True, slots=True)
class Column:
    """A column of a table: its heading, a unit printed under it; numbers are set to the right."""

    heading: str
    unit: str = ""
    is_number: bool = False


@dataclass(frozen=True, slots=True)
class Table:
    """A table with one text per column in each row; it runs over pages with its headings repeated.

    Used for the comparison with acceptance, previous and best; for every test on file; for what is due and what
    was not done. `note` stands under the title.
    """

    title: str
    columns: tuple[Column, ...]
    rows: tuple[tuple[str, ...], ...]
    note: str = ""


Chart = SupplyChart | HistoryChart | MarginChart


@dataclass(frozen=True, slots=True)
class Picture:
    """A chart with its heading above and a caption below that says what is drawn and how far to trust it."""

    heading: str
    chart: Chart
    caption: str = ""


@dataclass(frozen=True, slots=True)
class Reading:
    """One reading of a test, printed large: value and unit as entered, the gauge and its state, a remark.

    `gauge` is such as "G-14, 0–300 psi, 5 psi divisions, compared 3 Mar 2026"; `remark` such as "confirmed by a
    second look" or "needle swung 52 to 56".
    """

    label: str
    value: str
    unit: str = ""
    gauge: str = ""
    remark: str = ""


@dataclass(frozen=True, slots=True)
class TestRecord:
    """One test with all that was entered.

    `title` is the kind ("Main drain test"), `subtitle` item, time, technician and licence, edition and clause;
    `facts` the rest of the fields (drain, valves found and left, pump state, restoration); `remarks` whole
    sentences (a note, a kept question, how the entry came in); `entry` its number, and what it corrects and why.
    """

    title: str
    subtitle: str
    readings: tuple[Reading, ...] = ()
    facts: tuple[Row, ...] = ()
    remarks: tuple[str, ...] = ()
    entry: str = ""


@dataclass(frozen=True, slots=True)
class Finding:
    """One deficiency, impairment or remedy: heading (its class, and by whom proposed or decided), text, facts."""

    heading: str
    text: str
    facts: tuple[Row, ...] = ()


@dataclass(frozen=True, slots=True)
class Words:
    """Paragraphs under an optional title."""

    paragraphs: tuple[str, ...]
    title: str = ""


@dataclass(frozen=True, slots=True)
class Items:
    """A list of short sentences under an optional title."""

    items: tuple[str, ...]
    title: str = ""


Block = Facts | Table | Picture | TestRecord | Finding | Words | Items


@dataclass(frozen=True, slots=True)
class Section:
    """A part under its own heading: findings; then one per supply and per system, its pictures first."""

    title: str
    blocks: tuple[Block, ...]
    subtitle: str = ""


@dataclass(frozen=True, slots=True)
class StatedSystem:
    """The statement on one system.

    `statement` is one of the six names, and chooses the shape; `sentence` is printed large: state, size,
    certainty, next step; `reasons` follow in softer ink; `cannot_show` says what these tests could have missed.
    """

    system: str
    statement: str
    sentence: str
    reasons: tuple[str, ...] = ()
    cannot_show: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Signature:
    """A person's signature: drawn strokes as SVG path text (M, L, C), or the name typed and the reason for it.

    `strokes` empty means typed. `lines` stand under the name: licence, employer, when signed.
    """

    role: str
    name: str
    lines: tuple[str, ...] = ()
    strokes: str = ""
    typed_reason: str = ""


@dataclass(frozen=True, slots=True)
class Revision:
    """A later revision: its own name, the name of the report it replaces, and why."""

    label: str
    replaces: str
    reason: str


@dataclass(frozen=True, slots=True)
class VisitReport:
    """Everything on the pages and in the file.

    Attributes
    ----------
    name
        What the report is called everywhere, with its revision; stands at the foot of each page.
    heading
        The line under the site's name, such as "Visit of 12 October 2026".
    made_at
        When the content was settled (the sign-off, or the photo that completed it): same content, same bytes.
    summary
        Facts of the visit: when, who and licence, witness, weather, what was done and what was not.
    statements
        The most worrying first.
    sections
        Findings, then a section per supply and system.
    cautions
        Cautions that were ticked, and those still to heed.
    standards
        Adopted standard, edition, amendments and who approved the rule profile; or that none is recorded.
    cannot_show
        What these tests do not show, for the whole report.
    limits
        Sentences of every report: estimates are estimates, and what comes before anything stated here.
    signed_text
        The summary the signers were shown.
    log
        Number of the newest entry covered, and other facts of the log.
    head
        Hash of the newest link of the log, in hexadecimal; on every page.
    verify_address
        Address of the verify page of this report; empty where none is set.
    draft
        Not empty for a report that is not sealed: says so at the top of every page.
    records_json
        The entries themselves, put into the file as `records.json`.
    """

    name: str
    heading: str
    organisation: Party
    site: Party
    made_at: datetime
    head: str
    records_json: bytes
    summary: tuple[Row, ...] = ()
    statements: tuple[StatedSystem, ...] = ()
    sections: tuple[Section, ...] = ()
    cautions: tuple[str, ...] = ()
    standards: tuple[str, ...] = ()
    cannot_show: tuple[str, ...] = ()
    limits: tuple[str, ...] = ()
    signatures: tuple[Signature, ...] = ()
    signed_text: str = ""
    log: tuple[Row, ...] = ()
    revision: Revision | None = None
    verify_address: str = ""
    draft: str = ""
    language: str = field(default="en")


def charts_of(sections: Sequence[Section]) -> list[Chart]:
    """Return every chart of the sections, in order."""
    return [block.chart for section in sections for block in section.blocks if isinstance(block, Picture)]
