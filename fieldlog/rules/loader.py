"""Catalogues by name, and what makes an approved rule profile of one: adoption, overrides, approval row by row."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import date
from importlib.resources.abc import Traversable
from itertools import pairwise
from typing import Literal

import msgspec

from fieldlog.canonical import canonical_text, sha256_hex
from fieldlog.errors import InputError, NotFoundError
from fieldlog.records.rules import Approval, Override, ProfileValues, Rule
from fieldlog.rules.catalogue_files import (
    LocalExample,
    names,
    read_examples,
    read_header,
    read_rules,
    shipped,
)
from fieldlog.rules.row_fields import with_field


@dataclass(frozen=True, slots=True)
class Catalogue:
    """One edition of one standard, every row typed; `sha256` is of its canonical text."""

    id: str
    title: str
    standard: str
    edition: str
    rules: tuple[Rule, ...]
    sha256: str

    def row_ids(self) -> tuple[str, ...]:
        """Return the ids of all rows in order."""
        return tuple(rule.id for rule in self.rules)

    def rule(self, row_id: str) -> Rule:
        """Return the row of that id.

        Raises
        ------
        NotFoundError
            If the catalogue has no such row.
        """
        for rule in self.rules:
            if rule.id == row_id:
                return rule
        raise NotFoundError(f"catalogue {self.id} has no row {row_id!r}")


class Adoption(msgspec.Struct, frozen=True, forbid_unknown_fields=True, kw_only=True):
    """Who adopts a catalogue from when, and which of its rows that person has checked with the edition."""

    approved_by: str
    approved_on: date
    in_force_from: date
    judged_on: Literal["low_day", "on_the_day"]
    approved_rows: tuple[str, ...] = ()
    in_force_until: date | None = None
    jurisdiction: str | None = None
    amendment: str | None = None


def catalogues(folder: Traversable | None = None) -> list[str]:
    """Return the names of the catalogues that can be loaded."""
    where = folder or shipped()
    return [name for name in names(where) if read_header(where, name).edition is not None]


def load(catalogue_id: str, folder: Traversable | None = None) -> Catalogue:
    """Return the catalogue of that name.

    Raises
    ------
    NotFoundError
        If there is none of that name.
    ConfigError
        If a file or row is not as it must be; names the file and the row.
    """
    header, rules = read_rules(folder or shipped(), catalogue_id)
    edition = header.edition or ""
    said = {"edition": edition, "rules": msgspec.to_builtins(rules), "standard": header.standard}
    return Catalogue(
        id=catalogue_id,
        title=header.title,
        standard=header.standard,
        edition=edition,
        rules=rules,
        sha256=sha256_hex(canonical_text(said)),
    )


def local_examples(folder: Traversable | None = None) -> dict[str, LocalExample]:
    """Return the examples of local overrides by id; none is applied unless it is named."""
    return {example.id: example for example in read_examples(folder or shipped())}


def resolve(catalogue: Catalogue, adoption: Adoption, overrides: Sequence[Override] = ()) -> ProfileValues:
    """Return the values of a rule profile: the catalogue's rows with overrides and approvals in them.

    A later catalogue changes nothing in it. Only the rows named in `adoption.approved_rows` become approved; a row
    that is overridden must be among them, since its value is then that person's and nobody else's.

    Raises
    ------
    InputError
        If a row or field is unknown, named twice, or overridden without approval.
    """
    _require_rows(catalogue, adoption.approved_rows, overrides)
    rules = {rule.id: rule for rule in catalogue.rules}
    for override in overrides:
        rules[override.rule] = with_field(rules[override.rule], override.field, override.value)
    approved = [_approved(rule, adoption) for rule in rules.values()]
    values = ProfileValues(
        standard=catalogue.standard,
        edition=catalogue.edition,
        catalogue_id=catalogue.id,
        catalogue_sha256=catalogue.sha256,
        overrides=tuple(overrides),
        rules=tuple(approved),
        approved_by=adoption.approved_by,
        approved_on=adoption.approved_on,
        in_force_from=adoption.in_force_from,
        in_force_until=adoption.in_force_until,
        judged_on=adoption.judged_on,
        jurisdiction=adoption.jurisdiction,
        amendment=adoption.amendment,
    )
    canonical_text(msgspec.to_builtins(values))  # refuses an override that has no canonical form
    return values


def _require_rows(catalogue: Catalogue, approved_rows: tuple[str, ...], overrides: Sequence[Override]) -> None:
    for row_id in (*approved_rows, *(override.rule for override in overrides)):
        if row_id not in catalogue.row_ids():
            raise InputError(f"catalogue {catalogue.id} has no row {row_id!r}; name one of its rows", field="rule")
    for override in overrides:
        if override.rule not in approved_rows:
            raise InputError(
                f"row {override.rule} is overridden but not approved; name it among the approved rows",
                field="rule",
            )
    _require_apart(sorted(f"{override.rule} {override.field}." for override in overrides))


def _require_apart(places: list[str]) -> None:
    # Sorted, a field stands right before the fields within it.
    for place, after in pairwise(places):
        if after.startswith(place):
            raise InputError(
                f"{after.rstrip('.')}: overridden twice; give one override for each field", field="overrides"
            )


def _approved(rule: Rule, adoption: Adoption) -> Rule:
    if rule.id not in adoption.approved_rows or rule.mark == "approved":
        return rule
    approval = Approval(by=adoption.approved_by, on=adoption.approved_on, before=rule.mark)
    return msgspec.structs.replace(rule, mark="approved", approval=approval)
