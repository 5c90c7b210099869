"""The drain index of a test: the resistance between source and gauge, whatever the static does."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from fieldlog.assessment import constants
from fieldlog.assessment.codes import ReasonCode
from fieldlog.assessment.reading_error import Instruments
from fieldlog.assessment.statics import Static, static_of
from fieldlog.hydraulics import formulas
from fieldlog.hydraulics.pipe import inside_diameter, nearest_nominal
from fieldlog.records.history import Drain, DrainTest, Reading, System
from fieldlog.records.statement import Reason

_SECTION = "4"


@dataclass(frozen=True, slots=True)
class Index:
    """Static, residual and index of one test, each with its 1 sigma."""

    test: DrainTest
    static: Static
    residual_psi: float
    outlet_residual_psi: float  # at the drain's outlet, where its height is known
    residual_sigma_psi: float
    index: float
    sigma: float
    notes: tuple[Reason, ...] = ()
    level_psi: float = 0.0  # of a tank above its reference level: what its statics stand higher by

    @property
    def drop_psi(self) -> float:
        """Static less residual."""
        return self.static.psi - self.residual_psi

    @property
    def static_at_reference_psi(self) -> float:
        """Static as it would read at the tank's reference level; without a tank the static."""
        return self.static.psi - self.level_psi


def index_of(
    test: DrainTest, system: System, instruments: Instruments, reference_level_ft: float | None = None
) -> Index | None:
    """Return the drain index of a test; None without static or residual, with R above S, or a pump that started.

    Parameters
    ----------
    test : DrainTest
        The test [-].
    system : System
        Its system: the drain's outlet [-].
    instruments : Instruments
        Its gauges [-].
    reference_level_ft : float | None
        Level of a gravity tank to which its statics are brought [ft].

    Returns
    -------
    Index | None
        Index and 1 sigma [psi^0.075].

    References
    ----------
    DEVELOPERS.md, Method §4.
    """
    static = static_of(test, instruments)
    if static is None or test.residual is None or pump_started(test) is not None:
        return None
    residual_psi = residual_of(test.residual)
    outlet_psi = residual_psi + _outlet_head_psi(system.drain, instruments, test.residual)
    drop_psi = static.psi - residual_psi
    if not (outlet_psi > 0 and drop_psi >= 0):
        return None
    sigma_psi = instruments.sigma_psi(test.residual)
    index = float(formulas.drain_index(static.psi, residual_psi, outlet_psi))
    sigma = index_sigma(drop_psi, outlet_psi, static.sigma_psi, sigma_psi)
    notes = _notes(test, drop_psi, sigma_psi)
    level_psi = _level_psi(test.tank_level_ft, reference_level_ft)
    return Index(test, static, residual_psi, outlet_psi, sigma_psi, index, sigma, notes, level_psi)


def pump_started(test: DrainTest) -> Reason | None:
    """Return that the pump ran at the residual but not at the static, or the reverse; None where it did not.

    Parameters
    ----------
    test : DrainTest
        The test [-].

    Returns
    -------
    Reason | None
        Both states [-].

    References
    ----------
    DEVELOPERS.md, Method §4.
    """
    states = [
        None if reading is None else reading.pump_state or test.pump_state
        for reading in (test.static_before, test.residual)
    ]
    if None in states or (states[0] == "running") == (states[1] == "running"):
        return None
    numbers = {"static_state": str(states[0]), "residual_state": str(states[1])}
    return Reason(ReasonCode.PUMP_STARTED, numbers, (test.entry,), _SECTION)


def _level_psi(level_ft: float | None, reference_ft: float | None) -> float:
    if level_ft is None or reference_ft is None:
        return 0.0
    return float(formulas.elevation_pressure(level_ft - reference_ft))


def index_sigma(drop_psi: float, residual_psi: float, static_sigma_psi: float, residual_sigma_psi: float) -> float:
    r"""Return the 1 sigma of a drain index.

    .. math:: \sigma_x = \sqrt{s_S^2 + s_R^2 (1 + 0.925 D/R)^2} / R^{0.925}

    Parameters
    ----------
    drop_psi : float
        Static less residual [psi].
    residual_psi : float
        Residual at the outlet, above 0 [psi].
    static_sigma_psi : float
        1 sigma of the static [psi].
    residual_sigma_psi : float
        1 sigma of the residual [psi].

    Returns
    -------
    float
        1 sigma of the index [psi^0.075].

    References
    ----------
    DEVELOPERS.md, Method §4; first-order propagation, JCGM 100:2008, 5.1.2.

    Examples
    --------
    >>> round(index_sigma(15, 65, 0.5, 0.8), 4)
    0.023
    """
    slope = 1 + formulas.INDEX_EXPONENT * drop_psi / residual_psi
    return float(math.hypot(static_sigma_psi, residual_sigma_psi * slope) / residual_psi**formulas.INDEX_EXPONENT)


def residual_of(reading: Reading) -> float:
    """Return the residual; of a swinging needle the mean of its extremes.

    Parameters
    ----------
    reading : Reading
        The reading at full flow [psi].

    Returns
    -------
    float
        Residual [psi].

    References
    ----------
    DEVELOPERS.md, Method §4.
    """
    if reading.low_psi is None or reading.high_psi is None:
        return reading.psi
    return (reading.low_psi + reading.high_psi) / 2


def _outlet_head_psi(drain: Drain | None, instruments: Instruments, reading: Reading) -> float:
    gauge = instruments.gauge(reading)
    if drain is None or drain.outlet_elevation_ft is None or gauge is None or gauge.elevation_ft is None:
        return 0.0
    return float(formulas.elevation_pressure(gauge.elevation_ft - drain.outlet_elevation_ft))


def _notes(test: DrainTest, drop_psi: float, sigma_psi: float) -> tuple[Reason, ...]:
    if drop_psi >= 2 * sigma_psi:
        return ()
    numbers = {"drop_psi": drop_psi, "limit_psi": 2 * sigma_psi}
    return (Reason(ReasonCode.INDEX_SMALLER_THAN_READ, numbers, (test.entry,), _SECTION),)


def drain_k(drain: Drain | None, tests: Sequence[DrainTest] = ()) -> float | None:
    """Return the median K of a drain: as measured, by its newest pitot reading, by its pipe, or of its size class.

    Parameters
    ----------
    drain : Drain | None
        The drain [-].
    tests : Sequence[DrainTest]
        Comparable tests, oldest first: the newest with a pitot reading and a residual counts [-].

    Returns
    -------
    float | None
        K; None where not even the size is known [gpm/psi^0.5].

    References
    ----------
    DEVELOPERS.md, Method §5; NFPA 291, flow from outlets.
    """
    if drain is None or drain.k is not None:
        return None if drain is None else drain.k
    if drain.size_in is None or not drain.size_in > 0:
        return None
    pitoted = [test for test in tests if test.drain_pitot_psi is not None and test.residual is not None]
    for test in reversed(pitoted):
        k = _pitoted_k(drain.size_in, test)
        if k is not None:
            return k
    if drain.length_ft is not None and drain.length_ft >= 0:
        return float(formulas.drain_k(_inside_in(drain.size_in), drain.length_ft, constants.DRAIN_K_RESIDUAL_PSI))
    return next(k for size_in, k in constants.DRAIN_K_BY_SIZE if drain.size_in >= size_in)


def _pitoted_k(size_in: float, test: DrainTest) -> float | None:
    residual_psi = 0.0 if test.residual is None else residual_of(test.residual)
    if test.drain_pitot_psi is None or not (test.drain_pitot_psi > 0 and residual_psi > 0):
        return None
    flow = formulas.pitot_flow(constants.DRAIN_COEFFICIENT, _inside_in(size_in), test.drain_pitot_psi)
    return float(flow / math.sqrt(residual_psi))


def _inside_in(size_in: float) -> float:
    return inside_diameter(nearest_nominal(size_in), "40")
