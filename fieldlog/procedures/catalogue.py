"""All kinds of entries, and who may make which."""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType

from fieldlog.procedures import (
    deficiency,
    design_record,
    event,
    flow_test,
    forward_flow_test,
    gauge,
    gauge_comparison,
    gauge_reading,
    inspectors_test,
    main_drain_test,
    note,
    organisation,
    person,
    remedy,
    rule_profile,
    sign_off,
    site,
    supply,
    system,
    valve_status_test,
    visit,
)
from fieldlog.procedures.procedure import Procedure

PROCEDURES: Mapping[str, Procedure] = MappingProxyType(
    {
        module.PROCEDURE.kind: module.PROCEDURE
        for module in (
            organisation, person, site, supply, system, gauge, design_record, rule_profile, visit, main_drain_test,
            gauge_reading, inspectors_test, flow_test, forward_flow_test, valve_status_test, gauge_comparison,
            deficiency, remedy, note, sign_off, event,
        )
    }
)  # fmt: skip


def may_make(role: str, kind: str) -> bool:
    """Return whether people of that role may make entries of that kind."""
    return role in PROCEDURES[kind].makers


def withheld_from(role: str, kind: str) -> frozenset[str]:
    """Return the fields of a kind that people of that role may not state: an owner confirms no own remedy."""
    return next((names for other, names in PROCEDURES[kind].withheld.items() if other == role), frozenset())
