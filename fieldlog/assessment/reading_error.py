"""How sure a gauge reading is: division, heaped readings, and the bias of the gauge itself."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from datetime import date
from operator import itemgetter

from fieldlog.assessment import constants
from fieldlog.records.history import DrainTest, Gauge, GaugeComparison, GaugeReading, Reading, SupplyHistory
from fieldlog.units import pressure_in

_Place = tuple[date, int, int]  # day, entry, order within it


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
        return max((size for size in known if size is not None and size > 0), default=None)

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
    half_swing_psi : float | None
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

    References
    ----------
    DEVELOPERS.md, Method §1.
    """
    gauges = {gauge.uid: gauge for gauge in (*history.supply_gauges, *history.organisation_gauges)}
    runs: dict[str, dict[_Place, list[Reading]]] = {}
    for name, place, reading in _placed(history, as_of):
        runs.setdefault(name, {}).setdefault(place, []).append(reading)
    for system in history.systems:
        gauges |= {gauge.uid: gauge for gauge in system.gauges}
    heaps: dict[int, float] = {}
    for run in runs.values():
        heaps |= _heaps([readings for _, readings in sorted(run.items(), key=itemgetter(0))])
    return Instruments(gauges, heaps)


def heap_psi(newest: Sequence[Reading]) -> float | None:
    """Return the largest step that all of the newest readings of a gauge are multiples of.

    Parameters
    ----------
    newest : Sequence[Reading]
        The newest six readings of the gauge; fewer tell nothing [-].

    Returns
    -------
    float | None
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
    gauge : Gauge | None
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
    if gauge is not None and gauge.full_scale_psi is not None and gauge.full_scale_psi > 0:
        full_scale = gauge.full_scale_psi
    compared = _newest_comparison(gauge, on)
    if compared is not None and gauge is not None:
        return _bias_found(gauge, compared, full_scale, on)
    return Bias(0.0, _grade_percent(gauge, mean_psi / full_scale) / 100 * full_scale / 2)


def replaced_sigma(newest: Reading, earlier: Sequence[Reading], found: Instruments, on: date) -> float:
    """Return by how much a gauge that none of the earlier readings was made with may read differently.

    Parameters
    ----------
    newest : Reading
        A reading with the gauge in question [psi].
    earlier : Sequence[Reading]
        Earlier readings of the same quantity, oldest first [psi].
    found : Instruments
        The gauges [-].
    on : date
        Day of the newest reading [-].

    Returns
    -------
    float
        1 sigma; 0 where the gauge is the same or not named [psi].

    References
    ----------
    DEVELOPERS.md, Method §1: a replaced gauge is a new bias.
    """
    before = {reading.gauge for reading in earlier}
    if newest.gauge is None or not before or before & {newest.gauge, None}:
        return 0.0
    biases = [gauge_bias(found.gauge(reading), reading.psi, on) for reading in (newest, earlier[-1])]
    return math.hypot(*(bias.sigma_psi for bias in biases))


def _grade_percent(gauge: Gauge | None, place: float) -> float:
    if gauge is None or gauge.grade is None:
        return constants.UNKNOWN_GRADE_PERCENT
    outer, middle = constants.GRADE_PERCENT[gauge.grade]
    return middle if 0.25 <= place <= 0.75 else outer


def _newest_comparison(gauge: Gauge | None, on: date) -> GaugeComparison | None:
    if gauge is None:
        return None
    kept = [
        one for one in gauge.comparisons if one.performed_on <= on and one.outcome in {"kept", None} and one.points_psi
    ]
    return max(kept, key=lambda one: (one.performed_on, one.entry), default=None)


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


def _placed(history: SupplyHistory, as_of: date) -> Iterator[tuple[str, _Place, Reading]]:
    """Return every reading by its gauge and its place in time; a test that serves a header stands there once."""
    for routine in history.gauge_readings:
        yield from _of_gauge("", routine, as_of)
    for system in history.systems:
        for routine in system.gauge_readings:
            yield from _of_gauge(system.uid, routine, as_of)
        for test in system.drain_tests:
            if test.performed_on <= as_of:
                yield from _of_test(system.uid, test)


def _of_gauge(system: str, routine: GaugeReading, as_of: date) -> Iterator[tuple[str, _Place, Reading]]:
    if routine.performed_on <= as_of:
        yield _name(system, routine.reading), (routine.performed_on, routine.entry, 0), routine.reading


def _of_test(system: str, test: DrainTest) -> Iterator[tuple[str, _Place, Reading]]:
    for order, reading in enumerate((test.static_before, test.residual, test.static_after)):
        if reading is not None:
            yield _name(system, reading), (test.performed_on, test.entry, order), reading


def _name(system: str, reading: Reading) -> str:
    """Return the gauge; the readings of a system that name none are taken as of one gauge."""
    return reading.gauge or f"of {system}"


def _heaps(run: Sequence[Sequence[Reading]]) -> dict[int, float]:
    """Return the heap of each reading of the newest run of multiples; it applies from the run's first reading."""
    step = heap_psi([readings[0] for readings in run[-constants.HEAP_RUN :]])
    if step is None:
        return {}
    found: dict[int, float] = {}
    for readings in reversed(run):
        if not _is_multiple(readings[0], step, "psi"):
            break
        found |= {id(reading): step for reading in readings}
    return found


def _is_multiple(reading: Reading, step: float, unit: str) -> bool:
    steps = pressure_in(reading.psi, unit) / step
    return abs(steps - round(steps)) <= constants.HEAP_TOLERANCE
