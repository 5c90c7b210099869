"""A whole statement as lines of text: what is so, how sure, what next, why, and what the tests could not show."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

from fieldlog.records.statement import SystemStatement
from fieldlog.units import SiteUnits
from fieldlog.wording.notices import DEFER, ESTIMATE
from fieldlog.wording.statements import (
    blind_loss_sentence,
    deciding_margin,
    demand_sentence,
    digits_of,
    expected_sentence,
    standing_sentence,
    statement_sentence,
    system_sentences,
    trend_sentence,
)
from fieldlog.wording.steps import cannot_show_sentence, next_sentence, what_to_check


def of_statement(
    said: SystemStatement,
    units: SiteUnits,
    names: Mapping[str, str] | None = None,
    *,
    with_reasons: bool = False,
) -> tuple[str, ...]:
    """Return the lines of a statement; `with_reasons` adds all that it rests on."""
    lines = [statement_sentence(said, units, names)]
    if said.blind_loss is not None:
        lines.append(blind_loss_sentence(said.blind_loss, units, finer=digits_of(said, units)))
    lines.append(standing_sentence(said))
    if with_reasons:
        lines += _reasons(said, units, names)
    return tuple(lines)


def _reasons(said: SystemStatement, units: SiteUnits, names: Mapping[str, str] | None) -> Iterator[str]:
    margin = deciding_margin(said)
    if margin is not None:
        yield demand_sentence(margin, units)
    yield from system_sentences(said, units, names)
    yield from (expected_sentence(band, units) for band in said.expected)
    yield from (trend_sentence(trend, units) for trend in said.trends)
    if said.misread:
        yield f"Looks misread, and is kept: {', '.join(f'#{number}' for number in said.misread)}."
    yield from (f"Then: {next_sentence(code)}." for code in said.next[1:])
    if said.checks:
        yield f"Likely places to look, for a qualified person: {'; '.join(what_to_check(said.checks))}."
    yield from (cannot_show_sentence(code) for code in said.cannot_show)
    yield ESTIMATE
    yield DEFER
