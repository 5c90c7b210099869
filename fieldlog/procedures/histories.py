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
from fieldlog.procedures.system_versions import SuppliesInTime, drain_changed_on, versions_of
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
        All versions, for what only they tell: on which supply a system was before, and when its drain changed.
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
        self.supply = supply
        self.gauges = gauges_of(by_kind["gauge"], by_kind["gauge_comparison"])
        self.versions = {one.entry.subject: versions_of(one.entry, versions) for one in by_kind["system"]}
        self.supplies = {system: SuppliesInTime(versions) for system, versions in self.versions.items()}

    def history(self, through_number: int) -> SupplyHistory:
        site = str(self.supply.entry.site)
        uid = self.supply.entry.subject
        systems = [
            self._system(one) for one in self.by_kind["system"] if self.supplies[one.entry.subject].has_been_on(uid)
        ]
        flow_tests = [
            flow_test(one.entry, one.body)
            for one in self.by_kind["flow_test"]
            if one.body.supply == uid and one.body.static is not None and one.body.points
        ]
        return SupplyHistory(
            site=site,
            supply=supply_record(self.supply.entry, self.supply.body),
            systems=tuple(sorted(systems, key=lambda system: (system.name, system.uid))),
            flow_tests=tuple(sorted(flow_tests, key=_when)),
            supply_gauges=self._gauges("supply", uid),
            gauge_readings=self._readings(self._gauges("supply", uid)),
            organisation_gauges=tuple(gauge for gauge in self.gauges if gauge.of == "organisation"),
            profiles=self._profiles(site),
            through_number=through_number,
        )

    def _system(self, one: Typed) -> System:
        body: SystemBody = one.body
        uid = one.entry.subject
        found = self._design(uid)
        changed_on = [day for day in (drain_changed_on(self.versions[uid]), self._restored_on(uid, "drain")) if day]
        system = System(
            uid=uid,
            entry=one.entry.number,
            name=body.name,
            type=body.type,
            base_elevation_ft=None if body.base_elevation is None else body.base_elevation.ft,
            drain=drain(body, max(changed_on, default=None)),
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
            on_supply_since=self.supplies[uid].since(self.supply.entry.subject),
            on_supply_until=self.supplies[uid].left_on(self.supply.entry.subject),
            feed_changed_on=body.feed_changed_on,
            design=None if found is None else design(found.entry, found.body),
            gauges=self._gauges("system", uid),
            repairs=self._repairs(uid),
            impairments=self._impairments(uid),
        )
        return self._with_tests(system)

    def _with_tests(self, system: System) -> System:
        on, here = self.supplies[system.uid].on, self.supply.entry.subject

        def of(kind: str, read: Any) -> tuple[Any, ...]:  # noqa: ANN401  a reader of one kind of test
            tests = [
                read(test.entry, test.body)
                for test in self.by_kind[kind]
                if (test.entry.system == system.uid or system.uid in getattr(test.body, "serves", ()))
                and test.body.done != "not"
                and on(test.body.performed_on) == here
            ]
            return tuple(sorted((test for test in tests if test is not None), key=_when))

        return replace(
            system,
            drain_tests=of("main_drain_test", drain_test),
            alarm_tests=of("inspectors_test", alarm_test),
            forward_flow_tests=of("forward_flow_test", forward_flow_test),
            valve_status_tests=of("valve_status_test", valve_status_test),
            gauge_readings=tuple(one for one in self._readings(system.gauges) if on(one.performed_on) == here),
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

    def _repairs(self, system: str) -> tuple[Repair, ...]:
        """Return the remedies of the system's deficiencies, and of those that name no system and so concern all."""
        about = {one.entry.subject: one for one in self.by_kind["deficiency"]}
        found = [
            Repair(one.entry.number, one.body.done_on, one.body.restores, system, one.body.confirmed_by is not None)
            for one in self.by_kind["remedy"]
            if one.body.deficiency in about and about[one.body.deficiency].entry.system in {None, system}
        ]
        return tuple(sorted(found, key=lambda repair: (repair.done_on, repair.entry)))

    def _restored_on(self, system: str, what: str) -> date | None:
        days = [repair.done_on for repair in self._repairs(system) if repair.restores == what]
        return max(days, default=None)

    def _impairments(self, system: str) -> tuple[OpenImpairment, ...]:
        """Return what has begun and not ended: neither an end is recorded nor a remedy confirmed."""
        remedied = {one.body.deficiency for one in self.by_kind["remedy"] if one.body.confirmed_by is not None}
        return tuple(
            OpenImpairment(one.entry.number, one.entry.system, one.body.began_at, one.body.text)
            for one in self.by_kind["deficiency"]
            if one.entry.system in {None, system}
            and one.body.class_ == "impairment"
            and one.body.ended_at is None
            and one.entry.subject not in remedied
        )


def _when(record: Any) -> tuple[date, int]:  # noqa: ANN401  any record of a test
    return record.performed_on, record.entry


def _design_order(one: Typed) -> tuple[date, int]:
    body: DesignRecord = one.body
    return body.made_on or date.min, one.entry.number
