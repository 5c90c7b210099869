"""Gauge entries and their comparisons, read into gauges with a life."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from datetime import date
from typing import Any

from fieldlog.procedures.gauge import Gauge as GaugeBody
from fieldlog.procedures.gauge_comparison import GaugeComparison as ComparisonBody
from fieldlog.records.entries import Entry
from fieldlog.records.history import Gauge, GaugeComparison


def gauges_of(gauges: Sequence[Any], comparisons: Iterable[Any]) -> tuple[Gauge, ...]:
    """Return all gauges, by installation and entry; one that another replaces ends when that one begins."""
    replacing = [one.body for one in gauges if one.body.replaces is not None and one.body.installed_on is not None]
    # The earliest counts where two replace the same.
    ends = {body.replaces: body.installed_on for body in sorted(replacing, key=_installed_on, reverse=True)}
    ranges = {one.entry.subject: one.body.range for one in gauges}
    compared: dict[str, list[GaugeComparison]] = {}
    for one in comparisons:
        if one.body.points:
            compared.setdefault(one.body.gauge, []).append(_comparison(one.entry, one.body, ranges))
    found = [_gauge(one.entry, one.body, ends.get(one.entry.subject), compared) for one in gauges]
    return tuple(sorted(found, key=lambda gauge: (gauge.installed_on or date.min, gauge.entry)))


def _installed_on(body: GaugeBody) -> date:
    return body.installed_on or date.min


def _gauge(
    entry: Entry, body: GaugeBody, replaced_on: date | None, compared: dict[str, list[GaugeComparison]]
) -> Gauge:
    owner = {"system": entry.system, "supply": body.supply, "organisation": None}[body.of]
    comparisons = sorted(compared.get(entry.subject, ()), key=lambda one: (one.performed_on, one.entry))
    return Gauge(
        uid=entry.subject,
        entry=entry.number,
        of=body.of,
        owner=owner or "",
        side=body.side,
        tap=body.taps,
        behind=body.behind,
        full_scale_psi=None if body.range is None else body.range.psi,
        division_psi=None if body.division is None else body.division.psi,
        grade=body.grade,
        elevation_ft=None if body.elevation is None else body.elevation.ft,
        installed_on=body.installed_on,
        ended_on=body.ended_on or replaced_on,
        normal_low_psi=None if body.normal_low is None else body.normal_low.psi,
        normal_high_psi=None if body.normal_high is None else body.normal_high.psi,
        name=body.name,
        comparisons=tuple(comparisons),
    )


def _comparison(entry: Entry, body: ComparisonBody, ranges: dict[str, Any]) -> GaugeComparison:
    full_scale = ranges.get(body.reference or "")
    return GaugeComparison(
        entry=entry.number,
        performed_on=body.performed_on,
        points_psi=tuple((point.reference.psi, point.shown.psi) for point in body.points),
        outcome=body.outcome,
        reference_accuracy_percent=None if body.reference_accuracy is None else float(body.reference_accuracy),
        reference_full_scale_psi=None if full_scale is None else full_scale.psi,
        certificate_on=body.certificate_on,
    )
