"""A statement as lines for a terminal."""

from __future__ import annotations

import textwrap
from collections.abc import Iterator

from fieldlog.services.sites import SystemRow
from fieldlog.wording import notices
from fieldlog.wording.reasons import reason_with_entries
from fieldlog.wording.statements import (
    blind_loss_sentence,
    digits_of,
    standing_sentence,
    statement_sentence,
    ten_percent_sentence,
)
from fieldlog.wording.steps import cannot_show_sentence, next_sentence, what_to_check

_WIDTH = 106


def paragraphs(row: SystemRow, *, with_reasons: bool) -> Iterator[str]:
    """Return the statement on a system, wrapped; with its reasons where they are asked for."""
    for sentence in _sentences(row, with_reasons=with_reasons):
        yield from textwrap.wrap(sentence, _WIDTH, subsequent_indent="  ")


def _sentences(row: SystemRow, *, with_reasons: bool) -> Iterator[str]:
    said, units = row.said, row.units
    yield statement_sentence(said, units)
    if not with_reasons:
        return
    yield ten_percent_sentence(said.ten_percent)
    for reason in (*said.reasons, *said.findings):
        yield f"- {reason_with_entries(reason, units)}"
    if said.blind_loss is not None:
        yield blind_loss_sentence(said.blind_loss, units, finer=digits_of(said, units))
    yield from (f"next: {next_sentence(code)}" for code in said.next)
    yield from (f"look at: {place}" for place in what_to_check(said.checks))
    yield from (f"can't show: {cannot_show_sentence(code)}" for code in said.cannot_show)
    yield standing_sentence(said)
    yield notices.DEFER
