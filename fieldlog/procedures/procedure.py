"""The frame of a kind of entry: its body type with labels, its cautions, who makes it, its cross-checks."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any, Literal

import msgspec

from fieldlog.procedures.envelope import Envelope

Role = Literal["technician", "office", "owner", "instance"]


class Body(msgspec.Struct, frozen=True, forbid_unknown_fields=True, omit_defaults=True, kw_only=True):
    """Base of every body: strict, absent is absent."""


@dataclass(frozen=True, slots=True)
class Caution:
    """A caution to tick before or after the work; kept by its code, never a block."""

    code: str
    text: str
    when: Literal["before", "after"] = "before"


@dataclass(frozen=True, slots=True)
class Problem:
    """A field that can't be an honest record as it is, and the mend."""

    field: str
    message: str


def no_problems(_body: Any) -> list[Problem]:  # noqa: ANN401  a body of any kind
    """Return no problem: the type alone says what can be."""
    return []


def in_its_place(_envelope: Envelope, _body: Any) -> list[Problem]:  # noqa: ANN401
    """Return no problem: what the kind needs is named in the envelope, and the body adds nothing to it."""
    return []


@dataclass(frozen=True, slots=True)
class Procedure:
    """One kind of entry."""

    kind: str
    label: str
    body: type[msgspec.Struct]
    makers: frozenset[Role]
    needs: frozenset[str] = frozenset()  # of site, system, visit: what the envelope must name
    is_test: bool = False
    steps: tuple[str, ...] = ()
    cautions: tuple[Caution, ...] = ()
    check: Callable[[Any], list[Problem]] = no_problems
    check_place: Callable[[Envelope, Any], list[Problem]] = in_its_place
    withheld: Mapping[Role, frozenset[str]] = field(default_factory=dict)  # fields that a role may not state
