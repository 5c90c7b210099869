"""The vectors of canonical text, hash and link, which other languages read too."""

from __future__ import annotations

import json
import re
from pathlib import Path
from typing import Any

import pytest

from fieldlog.canonical import canonical_text, sha256_hex
from fieldlog.errors import InputError
from fieldlog.procedures.envelope import parse_envelope
from fieldlog.records.entries import Arrival
from fieldlog.storage import entries, log
from fieldlog.storage.chain import FIRST_LINK, link
from fieldlog.storage.connection import Connection, transaction

VECTORS = Path(__file__).resolve().parents[1] / "vectors"
CANONICAL: dict[str, list[dict[str, Any]]] = json.loads((VECTORS / "canonical.json").read_text())
ENTRIES: list[dict[str, Any]] = json.loads((VECTORS / "entries.json").read_text())["entries"]


@pytest.mark.parametrize("case", CANONICAL["cases"], ids=lambda case: case["name"])
def test_canonical_text_and_hash(case: dict[str, Any]) -> None:
    assert canonical_text(case["value"]) == case["text"]
    assert sha256_hex(case["text"]) == case["sha256"]
    assert canonical_text(json.loads(case["text"])) == case["text"]


@pytest.mark.parametrize("case", CANONICAL["refused"], ids=lambda case: case["name"])
def test_what_has_no_canonical_text(case: dict[str, Any]) -> None:
    with pytest.raises(InputError) as refused:
        canonical_text(case["value"])
    assert refused.value.field == case["field"]


def test_text_hash_and_link_of_entries() -> None:
    previous = FIRST_LINK
    for number, vector in enumerate(ENTRIES, start=1):
        assert vector["number"] == number
        assert canonical_text(vector["value"]) == vector["text"]
        assert sha256_hex(vector["text"]) == vector["sha256"]
        assert vector["previous"] == previous
        previous = link(number, vector["received_at"], previous, vector["sha256"])
        assert vector["link"] == previous


def test_the_log_gives_the_same_links(empty: Connection) -> None:
    for vector in ENTRIES:
        with transaction(empty):
            arrival = (parse_envelope(vector["text"]), Arrival(vector["text"]))
            (receipt,) = log.append(empty, [arrival], "import", vector["received_at"]).result.receipts
        assert (receipt.number, receipt.sha256, receipt.head) == tuple(
            vector[name] for name in ("number", "sha256", "link")
        )
    stored = entries.after(empty, 0)
    assert [(each.text, each.link) for each in stored] == [(each["text"], each["link"]) for each in ENTRIES]


def test_the_files_are_plain_ascii_so_that_no_editor_changes_them() -> None:
    for name in ("canonical.json", "entries.json"):
        assert re.fullmatch(rb"[\n\x20-\x7e]+", (VECTORS / name).read_bytes())
