"""The rule_profile entry: one adopted standard with its resolved values, as a qualified person approved it.

The body holds every value, so that a later catalogue of the program changes nothing in a profile once approved.
"""

from __future__ import annotations

import msgspec

from fieldlog.errors import InputError
from fieldlog.procedures.procedure import Problem, Procedure
from fieldlog.records.rules import ProfileValues, Rule, RuleProfile
from fieldlog.rules.row_fields import with_field


class RuleProfileBody(ProfileValues, frozen=True, kw_only=True):
    """Body of a rule_profile entry; a site may have several, each judged and printed by itself."""


def check_rule_profile(body: RuleProfileBody) -> None:
    """Refuse a profile that contradicts itself.

    Raises
    ------
    InputError
        If it ends before it begins, a row stands twice, or an override is not in the row it names.
    """
    if body.in_force_until is not None and body.in_force_until < body.in_force_from:
        raise InputError(
            f"in_force_until: {body.in_force_until} is before in_force_from {body.in_force_from}; mend one",
            field="in_force_until",
        )
    rules = {rule.id: rule for rule in body.rules}
    if len(rules) < len(body.rules):
        raise InputError("rules: a row stands twice; give each row one id", field="rules")
    for place, override in enumerate(body.overrides):
        _require_in_row(rules.get(override.rule), override.field, override.value, f"overrides[{place}]")


def rule_profile(body: RuleProfileBody, uid: str, entry: int) -> RuleProfile:
    """Return the profile that is judged by, given the uid and number of the entry that holds `body`."""
    return RuleProfile(**msgspec.structs.asdict(body), uid=uid, entry=entry)


def _require_in_row(rule: Rule | None, path: str, value: object, where: str) -> None:
    if rule is None:
        raise InputError(f"{where}: no row of that id; name a row of this profile", field=where)
    if rule.mark != "approved":
        raise InputError(
            f"{where}: row {rule.id} is changed but not approved; approve it by name and date", field=where
        )
    if with_field(rule, path, value) != rule:
        raise InputError(f"{where}: row {rule.id} does not hold this value at {path}; resolve it again", field=where)


def _problems(body: RuleProfileBody) -> list[Problem]:
    try:
        check_rule_profile(body)
    except InputError as error:
        return [Problem(error.field, error.message)]
    return []


PROCEDURE = Procedure("rule_profile", "Rule profile", RuleProfileBody, frozenset({"office"}), check=_problems)
