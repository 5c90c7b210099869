"""Whatever was taken in can be read, judged, asked about and printed: bodies made at random from their types."""

from __future__ import annotations

import importlib.util
import random
from datetime import date, timedelta
from pathlib import Path
from typing import Any, Literal, get_args, get_origin, get_type_hints

import msgspec
import pytest

from fieldlog.assessment.due import due_lists
from fieldlog.assessment.judge import judge
from fieldlog.canonical import canonical_text
from fieldlog.errors import InputError
from fieldlog.procedures.bodies import decode_body
from fieldlog.procedures.catalogue import PROCEDURES
from fieldlog.procedures.fields import PressureReading
from fieldlog.procedures.histories import histories
from fieldlog.procedures.limits import metas_of
from fieldlog.procedures.questions import Earlier, questions
from fieldlog.procedures.read import parse
from fieldlog.procedures.rows import rows
from fieldlog.records.entries import Entry
from fieldlog.units import Quantity
from fieldlog.wording.questions import question_sentence

_spec = importlib.util.spec_from_file_location("test_kinds_of", Path(__file__).with_name("test_kinds.py"))
assert _spec is not None
assert _spec.loader is not None
kinds = importlib.util.module_from_spec(_spec)
_spec.loader.exec_module(kinds)

SITE, MAIN, TANK, WET, DRY, GAUGE = (f"{n:08x}-1111-4111-8111-111111111111" for n in (7, 11, 12, 21, 22, 31))
NUMBERS = (
    "0", "0.5", "1", "2", "5", "10", "12.5", "54", "60", "72", "100", "250", "600", "1200", "9999", "999999999",
    "0.000000001", "-1", "-40", "-0",
)  # fmt: skip
TEXTS = ("V1", "V2", "main drain", "x", "≥ 5 °C", "Zoë")
# By a part of the pattern that a text must follow; the first that is found.
BY_PATTERN: tuple[tuple[str, tuple[str, ...]], ...] = (
    ("[89ab]", (MAIN, TANK, WET, DRY, GAUGE)),
    ("{64}", ("a1" * 32,)),
    ("2[0-3]", ("00:01", "09:30", "23:59")),
    ("T[0-9]", ("2003-04-05T06:07Z", "2019-12-31T23:59:58-11:30", "2026-10-03T09:30+02:00")),
    (r"(0\.(?!", ("0.9", "1", "0.0001")),
    ("^[0-9](", ("0.5", "2")),
    ("[1-9][0-9]{0,8}", NUMBERS),
)


def made(hint: Any, rng: random.Random) -> Any:
    """Return a plain value of a type, odd but mostly within its limits."""
    metas, bare = metas_of(hint)
    if get_origin(bare) is Literal:
        return rng.choice(get_args(bare))
    if get_origin(bare) is tuple:
        return [made(get_args(bare)[0], rng) for _ in range(rng.choice((0, 1, 1, 2, 3)))]
    if get_origin(bare) is dict:
        return {rng.choice(("gate valve", "90 standard elbow", "a fitting of nobody")): rng.randint(1, 4)}
    if bare is bool:
        return rng.random() < 0.7
    if bare is int:
        least = next((meta.ge for meta in metas if meta.ge is not None), 0)
        return rng.randint(int(least), int(least) + 90)
    if bare is date:
        return (date(1995, 1, 1) + timedelta(days=rng.randint(-3000, 14000))).isoformat()
    if bare is str:
        wanted = " ".join(meta.pattern for meta in metas if meta.pattern)
        return rng.choice(next((texts for part, texts in BY_PATTERN if part in wanted), TEXTS))
    return made_struct(bare, rng)


def made_struct(bare: type[msgspec.Struct], rng: random.Random) -> dict[str, Any]:
    if issubclass(bare, Quantity) and bare is not PressureReading:
        return {"value": rng.choice(NUMBERS), "unit": rng.choice(bare.units())}
    hints = get_type_hints(bare, include_extras=True)
    return {
        info.encode_name: made(hints[info.name], rng)
        for info in msgspec.structs.fields(bare)
        if info.required or rng.random() < 0.45
    }


def taken(kind: str, rng: random.Random, **fixed: Any) -> dict[str, Any] | None:
    """Return a random body that is taken; None where none was found."""
    for _ in range(300):
        body = made_struct(PROCEDURES[kind].body, rng) | fixed
        if kind == "gauge":
            body.pop("replaces", None)
        try:
            decode_body(kind, body)
        except InputError as refused:
            assert refused.field  # noqa: PT017  refused by its field, or taken
        else:
            return body
    return None


def entry(number: int, kind: str, body: dict[str, Any], **envelope: str) -> Entry:
    own = envelope.pop("uid", f"{1000 + number:08x}-1111-4111-8111-111111111111")
    text = canonical_text({
        "uid": own, "subject": own, "author": GAUGE, "format": 1, "kind": kind, "body": body, "site": SITE,
        "made_at": "2026-10-03T09:00:00Z", **envelope,
    })  # fmt: skip
    read = parse(text).envelope
    return Entry(
        number=number, received_at="", sha256="", link="", via="import", text=text, uid=read.uid, kind=read.kind,
        subject=read.subject, author=read.author, made_at=read.made_at, body=read.body, site=read.site,
        system=read.system,
    )  # fmt: skip


def site_of(rng: random.Random) -> list[Entry]:
    wanted: list[tuple[str, dict[str, Any], dict[str, str]]] = [
        ("supply", {}, {"uid": MAIN}), ("supply", {}, {"uid": TANK}),
        ("system", {"supply": MAIN}, {"uid": WET}), ("system", {"supply": rng.choice((MAIN, TANK))}, {"uid": DRY}),
        ("gauge", {"of": "system"}, {"uid": GAUGE, "system": WET}),
    ]  # fmt: skip
    for kind in (
        "design_record", "gauge_reading", "inspectors_test", "flow_test", "forward_flow_test", "valve_status_test",
        "gauge_comparison", "deficiency", "remedy", *["main_drain_test"] * 4,
    ):  # fmt: skip
        fixed = {"supply": rng.choice((MAIN, TANK))} if kind == "flow_test" else {}
        wanted += [(kind, fixed, {"system": rng.choice((WET, DRY))})] * rng.randint(0, 3)
    bodies = [(kind, taken(kind, rng, **fixed), envelope) for kind, fixed, envelope in wanted]
    found = [(kind, body, envelope) for kind, body, envelope in bodies if body is not None]
    found.append(("rule_profile", kinds.examples.FULL["rule_profile"], {}))
    return [entry(101 + place, kind, body, **envelope) for place, (kind, body, envelope) in enumerate(found)]


@pytest.mark.slow
@pytest.mark.parametrize("seed", range(25))
def test_a_site_that_was_taken_in_can_be_read_and_judged(seed: int) -> None:
    for read in histories(site_of(random.Random(seed))):
        for as_of in (date(2005, 3, 1), date(2026, 10, 3)):
            due_lists(read, as_of)
            for profile in (None, *read.profiles):
                assert len(judge(read, as_of, profile, "1")) <= len(read.systems)


@pytest.mark.parametrize("kind", sorted(set(PROCEDURES) - {"rule_profile", "sign_off"}))
def test_a_body_that_was_taken_can_be_asked_about_and_printed(kind: str) -> None:
    rng = random.Random(kind)
    earlier = Earlier(values_psi={"residual": (64.0,)}, ranges_psi={GAUGE: 200.0}, today=date(2020, 2, 3))
    bodies = [body for body in (taken(kind, rng) for _ in range(12)) if body is not None]
    assert len(bodies) > 3
    for body in bodies:
        typed = decode_body(kind, body)
        assert all(row.label and row.value for row in rows(typed))
        assert all("{" not in question_sentence(one, kinds_units()) for one in questions(typed, earlier))


def kinds_units() -> Any:
    return decode_body("site", kinds.examples.FULL["site"]).units  # type: ignore[attr-defined]
