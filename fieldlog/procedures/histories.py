"""Entries read into what judgement is given: one history a supply, in psi, gpm, ft and in."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from datetime import date
from typing import Any

import msgspec

from fieldlog.procedures.catalogue import PROCEDURES
from fieldlog.procedures.design_record import DesignRecord
from fieldlog.procedures.read_gauges import gauges_of
from fieldlog.procedures.read_systems import design, drain, feed, supply_record
from fieldlog.procedures.read_tests import (
    alarm_test,
    drain_test,
    flow_test,
    forward_flow_test,
    gauge_readings,
    valve_status_test,
)
from fieldlog.procedures.rule_profile import rule_profile
from fieldlog.procedures.system import System as SystemBody
from fieldlog.records.entries import Entry
from fieldlog.records.history import (
    Gauge,
    OpenImpairment,
    Repair,
    SupplyHistory,
    System,
)
from fieldlog.records.rules import RuleProfile


@dataclass(frozen=True, slots=True)
class Typed:
    """An entry with its typed body."""

    entry: Entry
    body: Any


def histories(in_force: Iterable[Entry], earlier: Iterable[Entry] = ()) -> tuple[SupplyHistory, ...]:
    """Return one history a supply of a site.

    Parameters
    ----------
    in_force : iterable of Entry
        The versions in force of the site's subjects and of the organisation's; order does not matter.
    earlier : iterable of Entry
        All versions, for what only they tell: on which supply a system was before.
    """
    typed = [typed_entry(entry) for entry in sorted(in_force, key=lambda entry: entry.number)]
    by_kind: dict[str, list[Typed]] = {kind: [] for kind in PROCEDURES}
    for one in typed:
        by_kind[one.entry.kind].append(one)
    versions = {entry.uid: entry for entry in earlier if entry.kind == "system"}
    through = max((one.entry.number for one in typed), default=0)
    return tuple(
        _Reader(by_kind, versions, supply).history(through)
        for supply in by_kind["supply"]
        if supply.entry.site is not None
    )


def typed_entry(entry: Entry) -> Typed:
    """Return the entry with its typed body; bodies on file were checked when they came."""
    return Typed(entry, msgspec.convert(entry.body, PROCEDURES[entry.kind].body))


class _Reader:
    """Reads the entries of one site for one of its supplies."""

    def __init__(self, by_kind: Mapping[str, Sequence[Typed]], versions: Mapping[str, Entry], supply: Typed) -> None:
        self.by_kind = by_kind
        self.versions = versions
        self.supply = supply
        self.gauges = gauges_of(by_kind["gauge"], by_kind["gauge_comparison"])

    def history(self, through_number: int) -> SupplyHistory:
        site = str(self.supply.entry.site)
        systems = [self._system(one) for one in self.by_kind["system"] if self._stays(one)]
        flow_tests = [
            flow_test(one.entry, one.body)
            for one in self.by_kind["flow_test"]
            if one.body.supply == self.supply.entry.subject and one.body.static is not None and one.body.points
        ]
        return SupplyHistory(
            site=site,
            supply=supply_record(self.supply.entry, self.supply.body),
            systems=tuple(sorted(systems, key=lambda system: (system.name, system.uid))),
            flow_tests=tuple(sorted(flow_tests, key=_when)),
            supply_gauges=self._gauges("supply", self.supply.entry.subject),
            gauge_readings=self._readings(self._gauges("supply", self.supply.entry.subject)),
            organisation_gauges=tuple(gauge for gauge in self.gauges if gauge.of == "organisation"),
            profiles=self._profiles(site),
            through_number=through_number,
        )

    def _stays(self, system: Typed) -> bool:
        """Return whether the system is on this supply now, or was before, in an earlier version."""
        return any(body.supply == self.supply.entry.subject for _, body in self._spans(system))

    def _spans(self, system: Typed) -> list[tuple[date, SystemBody]]:
        """Return from which day on which version of the system held, newest first."""
        spans: list[tuple[date, SystemBody]] = []
        entry: Entry | None = system.entry
        while entry is not None:
            body = msgspec.convert(entry.body, SystemBody)
            spans.append((body.on_supply_since or date.min, body))
            entry = self.versions.get(entry.based_on or "")
        return spans

    def _is_on(self, system: Typed, on: date) -> bool:
        """Return whether the system was on this supply on that day."""
        for since, body in self._spans(system):
            if since <= on:
                return bool(body.supply == self.supply.entry.subject)
        return False

    def _left_on(self, system: Typed) -> date | None:
        """Return from which day the system was on another supply; None while it is on this one."""
        left = None
        for since, body in self._spans(system):
            if body.supply == self.supply.entry.subject:
                return left
            left = since
        return left

    def _system(self, one: Typed) -> System:
        body: SystemBody = one.body
        uid = one.entry.subject
        found = self._design(uid)
        system = System(
            uid=uid,
            entry=one.entry.number,
            name=body.name,
            type=body.type,
            base_elevation_ft=None if body.base_elevation is None else body.base_elevation.ft,
            drain=drain(body, self._restored_on(uid, "drain")),
            feed=feed(body),
            hose_point=body.hose_point,
            header=body.header,
            installed_on=body.installed_on,
            occupancy=body.occupancy,
            heated=body.heated,
            air_supervised=body.air_supervised,
            alarm=body.alarm,
            valves=tuple(valve.id for valve in body.valves),
            normally_shut=tuple(valve.id for valve in body.valves if valve.normal != "open"),
            on_supply_since=body.on_supply_since,
            on_supply_until=self._left_on(one),
            feed_changed_on=body.feed_changed_on,
            design=None if found is None else design(found.entry, found.body),
            gauges=self._gauges("system", uid),
            repairs=self._repairs(uid),
            impairments=self._impairments(uid),
        )
        return self._with_tests(system, one)

    def _with_tests(self, system: System, one: Typed) -> System:
        def of(kind: str, read: Any) -> tuple[Any, ...]:  # noqa: ANN401  a reader of one kind of test
            tests = [
                read(test.entry, test.body)
                for test in self.by_kind[kind]
                if (test.entry.system == system.uid or system.uid in getattr(test.body, "serves", ()))
                and test.body.done != "not"
                and self._is_on(one, test.body.performed_on)
            ]
            return tuple(sorted(tests, key=_when))

        return replace(
            system,
            drain_tests=of("main_drain_test", drain_test),
            alarm_tests=of("inspectors_test", alarm_test),
            forward_flow_tests=tuple(test for test in of("forward_flow_test", forward_flow_test) if test is not None),
            valve_status_tests=of("valve_status_test", valve_status_test),
            gauge_readings=self._readings(system.gauges),
        )

    def _readings(self, gauges: Iterable[Gauge]) -> tuple[Any, ...]:
        wanted = {gauge.uid for gauge in gauges}
        found = [
            reading
            for one in self.by_kind["gauge_reading"]
            for reading in gauge_readings(one.entry, one.body)
            if reading.reading.gauge in wanted
        ]
        return tuple(sorted(found, key=_when))

    def _gauges(self, of: str, owner: str) -> tuple[Gauge, ...]:
        return tuple(gauge for gauge in self.gauges if gauge.of == of and gauge.owner == owner)

    def _profiles(self, site: str) -> tuple[RuleProfile, ...]:
        found = [
            rule_profile(one.body, one.entry.uid, one.entry.number)
            for one in self.by_kind["rule_profile"]
            if one.entry.site in {None, site}
        ]
        return tuple(sorted(found, key=lambda profile: (profile.in_force_from, profile.entry)))

    def _design(self, system: str) -> Typed | None:
        found = [one for one in self.by_kind["design_record"] if one.entry.system == system]
        return max(found, key=_design_order, default=None)

    def _deficiency(self, uid: str) -> Typed | None:
        return next((one for one in self.by_kind["deficiency"] if one.entry.subject == uid), None)

    def _repairs(self, system: str) -> tuple[Repair, ...]:
        found = []
        for one in self.by_kind["remedy"]:
            about = self._deficiency(one.body.deficiency)
            if about is not None and about.entry.system == system:
                confirmed = one.body.confirmed_by is not None
                found.append(Repair(one.entry.number, one.body.done_on, one.body.restores, system, confirmed))
        return tuple(sorted(found, key=lambda repair: (repair.done_on, repair.entry)))

    def _restored_on(self, system: str, what: str) -> date | None:
        days = [repair.done_on for repair in self._repairs(system) if repair.restores == what]
        return max(days, default=None)

    def _impairments(self, system: str) -> tuple[OpenImpairment, ...]:
        return tuple(
            OpenImpairment(one.entry.number, system, one.body.began_at, one.body.text)
            for one in self.by_kind["deficiency"]
            if one.entry.system == system and one.body.class_ == "impairment" and one.body.ended_at is None
        )


def _when(record: Any) -> tuple[date, int]:  # noqa: ANN401  any record of a test
    return record.performed_on, record.entry


def _design_order(one: Typed) -> tuple[date, int]:
    body: DesignRecord = one.body
    return body.made_on or date.min, one.entry.number
