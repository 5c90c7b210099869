"""Refused texts are kept whole, whatever they hold."""

from __future__ import annotations

import pytest

from fieldlog.records.entries import Refusal
from fieldlog.storage import refusals
from fieldlog.storage.connection import Connection
from fieldlog.storage.refusals import RefusedText, refused_text
from tests.storage.made import AT, LATER, ORGANISATION, SITE, drain_test, uid

READING = Refusal(uid(31), "input", "body.residual", "body.residual: 540 psi is above the gauge's range; read it again")


@pytest.mark.parametrize(
    "text", ['{"uid":', "\ud83d half a character", "nul \x00 inside", "Kühlhaus\u2028", "\U0001f9ca", " "]
)
def test_any_text_comes_back_exactly(empty: Connection, text: str) -> None:
    given = refused_text(Refusal("", "input", "text", "the text is not JSON"), text, AT, "import")
    refusals.keep(empty, [given])
    (kept,) = refusals.kept(empty)
    assert kept.text == text
    assert (kept.refusal, kept.received_at, kept.via) == (given.refusal, AT, "import")
    assert (kept.author, kept.site, kept.device, kept.device_number) == (None, None, None, None)


def test_what_could_be_read_is_kept_beside_the_text(empty: Connection) -> None:
    envelope, arrival = drain_test(31, device=uid(90), device_number=7)
    refusals.keep(empty, [refused_text(READING, arrival.text, AT, "tablet", envelope)])
    assert refusals.kept_of(empty, uid(31)) == [
        RefusedText(READING, arrival.text, AT, "tablet", ORGANISATION, SITE, uid(90), 7, id=1)
    ]


def test_a_tablet_that_tries_again_adds_nothing(empty: Connection) -> None:
    envelope, arrival = drain_test(31)
    for at in (AT, LATER):
        refusals.keep(empty, [refused_text(READING, arrival.text, at, "tablet", envelope)])
    assert [each.received_at for each in refusals.kept(empty)] == [AT]
    other = Refusal(uid(31), "not_allowed", "site", "site: not granted; ask the office")
    refusals.keep(empty, [refused_text(other, arrival.text, LATER, "tablet", envelope)])
    assert refusals.count(empty) == 2


def test_paging(empty: Connection) -> None:
    texts = [refused_text(READING, f"text {number}", AT, "import") for number in range(5)]
    refusals.keep(empty, texts)
    page = refusals.kept(empty, limit=2)
    assert [each.text for each in page] == ["text 0", "text 1"]
    assert page[-1].id is not None
    assert [each.text for each in refusals.kept(empty, after=page[-1].id)] == ["text 2", "text 3", "text 4"]
