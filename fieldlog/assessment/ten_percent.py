"""The ten percent criterion, exact in the decimals as entered."""

from __future__ import annotations

import math
from collections.abc import Iterator
from fractions import Fraction

from fieldlog.assessment import constants
from fieldlog.assessment.comparable import Comparisons
from fieldlog.assessment.reading_error import Instruments
from fieldlog.records.history import DrainTest, Reading
from fieldlog.records.rules import RuleProfile
from fieldlog.records.statement import TenPercent


def ten_percent(compared: Comparisons, instruments: Instruments, profile: RuleProfile | None) -> tuple[TenPercent, ...]:
    """Return the fall of the residual against reference, previous and best; the best carries no flag.

    Parameters
    ----------
    compared : Comparisons
        The newest test and what it is held against [-].
    instruments : Instruments
        The gauges, for the error of the reduction [-].
    profile : RuleProfile | None
        The rules: another percentage than ten [-].

    Returns
    -------
    tuple[TenPercent, ...]
        Reductions as shares, with flags [-].

    References
    ----------
    NFPA 25, 13.2.5 (2011 to 2017), from memory: a reduction of ten percent asks for the cause.
    """
    return tuple(_rows(compared, instruments, percent_of(profile)))


def percent_of(profile: RuleProfile | None) -> Fraction:
    """Return the percentage of the profile, or ten where it names none.

    Parameters
    ----------
    profile : RuleProfile | None
        The rules [-].

    Returns
    -------
    Fraction
        Percentage [%].

    References
    ----------
    DEVELOPERS.md, Method §3: the criterion is always computed and shown.
    """
    stated = None if profile is None else profile.reduction_percent()
    return Fraction(constants.TEN_PERCENT) if stated is None else stated


def is_reduced(residual: Reading, reference: Reading, percent: Fraction) -> bool:
    """Return whether a residual is down by the percentage or more: `10 R <= 9 R_ref` for ten.

    Parameters
    ----------
    residual : Reading
        The newer residual [psi].
    reference : Reading
        The residual it is held against [psi].
    percent : Fraction
        Percentage [%].

    Returns
    -------
    bool
        True at the percentage exactly, too [-].

    References
    ----------
    DEVELOPERS.md, Method §3: exact fractions; binary floats miss 35 of 90 exact tens.
    """
    return 100 * residual.exact_psi <= (100 - percent) * reference.exact_psi


def _rows(compared: Comparisons, instruments: Instruments, percent: Fraction) -> Iterator[TenPercent]:
    name = "new reference" if compared.is_new_reference else "acceptance"
    for against, test in ((name, compared.reference), ("previous", compared.previous), ("best", compared.best)):
        if test is not None:
            row = _row(against, compared.newest, test, instruments, percent)
            if row is not None:
                yield row


def _row(
    against: str, newest: DrainTest, other: DrainTest, instruments: Instruments, percent: Fraction
) -> TenPercent | None:
    now, then = newest.residual, other.residual
    if now is None or then is None or then.exact_psi <= 0:
        return None
    flagged = None if against == "best" else is_reduced(now, then, percent)
    ratio = now.psi / then.psi
    sigma = math.hypot(instruments.sigma_psi(now), ratio * instruments.sigma_psi(then)) / then.psi
    return TenPercent(against, 1 - ratio, flagged, other.entry, sigma)
