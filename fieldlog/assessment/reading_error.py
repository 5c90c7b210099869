"""How sure a gauge reading is: division, heaped readings, and the bias of the gauge itself."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import date

from fieldlog.assessment import constants
from fieldlog.records.history import DrainTest, Gauge, GaugeComparison, Reading, SupplyHistory, System
from fieldlog.units import pressure_in


@dataclass(frozen=True, slots=True)
class Bias:
    """Error of a gauge that all its readings share: what was found, and its 1 sigma, psi."""

    offset_psi: float
    sigma_psi: float


@dataclass(frozen=True, slots=True)
class Instruments:
    """The gauges of a history and the steps their readings are heaped on."""

    gauges: Mapping[str, Gauge]
    heaps: Mapping[int, float]  # by id of the reading, psi

    def gauge(self, reading: Reading) -> Gauge | None:
        """Return the gauge a reading was made with; None where it is not on record."""
        return self.gauges.get(reading.gauge or "")

    def division_psi(self, reading: Reading) -> float | None:
        """Return the larger of the recorded division and the heap; None where neither is known."""
        gauge = self.gauge(reading)
        known = [gauge.division_psi if gauge is not None else None, self.heaps.get(id(reading))]
        return max((size for size in known if size is not None), default=None)

    def sigma_psi(self, reading: Reading, division_psi: float | None = None) -> float:
        """Return the 1-sigma error of a reading; `division_psi` asks what another gauge would give."""
        division = division_psi or self.division_psi(reading) or constants.UNKNOWN_DIVISION_PSI
        return reading_sigma(division, _half_swing_psi(reading))


def reading_sigma(division_psi: float, half_swing_psi: float | None = None) -> float:
    r"""Return the 1-sigma error of a dial reading.

    .. math:: s_r = \sqrt{(d/\sqrt{12})^2 + f^2}

    Parameters
    ----------
    division_psi : float
        Smallest division, or the step that readings are heaped on [psi].
    half_swing_psi : float, optional
        Half the noted swing of the needle, in place of the usual 0.5 psi [psi].

    Returns
    -------
    float
        1-sigma error, 0.25 psi at the least [psi].

    References
    ----------
    JCGM 100:2008, 4.3.7 (rectangular distribution).

    Examples
    --------
    >>> round(reading_sigma(5), 3)
    1.528
    """
    random_psi = constants.READING_SIGMA_PSI if half_swing_psi is None else half_swing_psi
    return max(math.hypot(division_psi / math.sqrt(12), random_psi), constants.LEAST_DIAL_SIGMA_PSI)


def instruments(history: SupplyHistory, as_of: date) -> Instruments:
    """Return the gauges of a history, and the heaps of their readings up to a day.

    Parameters
    ----------
    history : SupplyHistory
        What is on record about one supply [-].
    as_of : date
        The last day whose readings count [-].

    Returns
    -------
    Instruments
        Gauges by uid, heaps by reading [psi].
    """
    gauges = {gauge.uid: gauge for gauge in (*history.supply_gauges, *history.organisation_gauges)}
    runs: dict[str, list[tuple[date, int, Reading]]] = {}
    for system in history.systems:
        gauges |= {gauge.uid: gauge for gauge in system.gauges}
        for on, entry, reading in _readings(system):
            if on <= as_of and reading.gauge is not None:
                runs.setdefault(reading.gauge, []).append((on, entry, reading))
    heaps: dict[int, float] = {}
    for run in runs.values():
        run.sort(key=lambda item: item[:2])
        heaps |= _heaps([reading for _, _, reading in run])
    return Instruments(gauges, heaps)


def heap_psi(newest: Sequence[Reading]) -> float | None:
    """Return the largest step that all of the newest readings of a gauge are multiples of.

    Parameters
    ----------
    newest : sequence of Reading
        The newest six readings of the gauge; fewer tell nothing [-].

    Returns
    -------
    float or None
        The step; None where there is none [psi].

    References
    ----------
    DEVELOPERS.md, Method §1.
    """
    if len(newest) < constants.HEAP_RUN:
        return None
    steps = [
        step / pressure_in(1.0, unit)
        for unit, sizes in constants.HEAP_STEPS.items()
        for step in sizes
        if all(_is_multiple(reading, step, unit) for reading in newest)
    ]
    return max(steps, default=None)


def gauge_bias(gauge: Gauge | None, mean_psi: float, on: date) -> Bias:
    """Return the bias of a gauge: from its grade, or from the newest comparison with a certified gauge.

    Parameters
    ----------
    gauge : Gauge or None
        The gauge; None where it is not on record [-].
    mean_psi : float
        Mean reading of the gauge: its quarter of the range decides the percent [psi].
    on : date
        The day for which it is asked: a comparison ages [-].

    Returns
    -------
    Bias
        Error found and 1 sigma [psi].

    References
    ----------
    ASME B40.100 (percent of span by quarter); DEVELOPERS.md, Method §1.
    """
    full_scale = constants.UNKNOWN_FULL_SCALE_PSI
    if gauge is not None and gauge.full_scale_psi is not None:
        full_scale = gauge.full_scale_psi
    compared = _newest_comparison(gauge, on)
    if compared is not None and gauge is not None:
        return _bias_found(gauge, compared, full_scale, on)
    return Bias(0.0, _grade_percent(gauge, mean_psi / full_scale) / 100 * full_scale / 2)


def _grade_percent(gauge: Gauge | None, place: float) -> float:
    if gauge is None or gauge.grade is None:
        return constants.UNKNOWN_GRADE_PERCENT
    outer, middle = constants.GRADE_PERCENT[gauge.grade]
    return middle if 0.25 <= place <= 0.75 else outer


def _newest_comparison(gauge: Gauge | None, on: date) -> GaugeComparison | None:
    if gauge is None:
        return None
    kept = [
        one for one in gauge.comparisons if one.performed_on <= on and one.outcome == "kept" and one.points_psi
    ]
    return kept[-1] if kept else None


def _bias_found(gauge: Gauge, compared: GaugeComparison, full_scale_psi: float, on: date) -> Bias:
    errors = [shown - reference for reference, shown in compared.points_psi]
    years = max((on - compared.performed_on).days, 0) / 365.25
    accuracy = compared.reference_accuracy_percent or 0.5
    reference_psi = accuracy / 100 * (compared.reference_full_scale_psi or full_scale_psi) / 2
    read_psi = reading_sigma(gauge.division_psi or constants.UNKNOWN_DIVISION_PSI)
    ageing_psi = constants.COMPARISON_AGEING_PERCENT / 100 * full_scale_psi * math.sqrt(years)
    return Bias(sum(errors) / len(errors), math.hypot(reference_psi, read_psi, ageing_psi))


def _half_swing_psi(reading: Reading) -> float | None:
    if reading.low_psi is None or reading.high_psi is None:
        return None
    return abs(reading.high_psi - reading.low_psi) / 2


def _readings(system: System) -> list[tuple[date, int, Reading]]:
    found = [(one.performed_on, one.entry, one.reading) for one in system.gauge_readings]
    for test in system.drain_tests:
        found += [(test.performed_on, test.entry, reading) for reading in _of_test(test)]
    return found


def _of_test(test: DrainTest) -> list[Reading]:
    return [reading for reading in (test.static_before, test.residual, test.static_after) if reading is not None]


def _heaps(run: Sequence[Reading]) -> dict[int, float]:
    """Return the heap of each reading of the newest run of multiples; it applies from the run's first reading."""
    step = heap_psi(run[-constants.HEAP_RUN :])
    if step is None:
        return {}
    found = {}
    for reading in reversed(run):
        if not _is_multiple(reading, step, "psi"):
            break
        found[id(reading)] = step
    return found


def _is_multiple(reading: Reading, step: float, unit: str) -> bool:
    steps = pressure_in(reading.psi, unit) / step
    return abs(steps - round(steps)) <= constants.HEAP_TOLERANCE
