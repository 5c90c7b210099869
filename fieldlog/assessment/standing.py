"""Which signs of an impairment stand: those of the newest test, or of an earlier one that none has answered."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

from fieldlog.assessment import constants
from fieldlog.assessment.codes import ReasonCode
from fieldlog.assessment.comparable import Comparisons, Conditions, comparisons
from fieldlog.assessment.expected import Expected
from fieldlog.assessment.impairment import answers, shows_by_itself, signs_of
from fieldlog.records.history import DrainTest
from fieldlog.records.statement import Reason

_SECTION = "8"


@dataclass(frozen=True, slots=True)
class _Signs:
    test: DrainTest
    reasons: tuple[Reason, ...]


def standing_signs(
    tests: Sequence[DrainTest], conditions: Conditions, bands_of: Callable[[Comparisons], Expected | None]
) -> tuple[Reason, ...]:
    """Return the signs of an impairment that stand after the last of the tests.

    Parameters
    ----------
    tests : Sequence[DrainTest]
        Tests of one system, oldest first [-].
    conditions : Conditions
        What they are compared under [-].
    bands_of : Callable[[Comparisons], Expected | None]
        Expected bands of the newest test of a comparison [psi].

    Returns
    -------
    tuple[Reason, ...]
        Signs, with the day they are from where that is not the newest test's [-].

    References
    ----------
    DEVELOPERS.md, Method §8: stands until a later test without it.
    """
    stands: _Signs | None = None
    read: list[DrainTest] = []
    for test in tests:
        is_low = test.residual is not None and _is_low(test, read)
        if test.residual is not None:
            read.append(test)
        if stands is None and not is_low and not shows_by_itself(test, conditions):
            continue  # most tests: nothing to compare for
        stands = _after(test, read, conditions, bands_of, stands)
    return () if stands is None else _reasons(stands, tests[-1])


def _after(
    test: DrainTest,
    read: Sequence[DrainTest],
    conditions: Conditions,
    bands_of: Callable[[Comparisons], Expected | None],
    stands: _Signs | None,
) -> _Signs | None:
    if test.residual is None:
        own = shows_by_itself(test, conditions)
        return _Signs(test, own) if own else stands
    compared = comparisons(read, conditions)
    signs = signs_of(compared, conditions, bands_of(compared))
    if signs:
        return _Signs(test, signs)
    return None if stands is None or answers(compared, stands.reasons, conditions) else stands


def _is_low(test: DrainTest, before: Sequence[DrainTest]) -> bool:
    """Return whether a residual may be down a quarter against any earlier one; the exact answer comes later."""
    residual = test.residual
    highest = max((one.residual.psi for one in before if one.residual is not None), default=0.0)
    return residual is not None and residual.psi <= (1.001 - constants.QUARTER_PERCENT / 100) * highest


def _reasons(signs: _Signs, newest: DrainTest) -> tuple[Reason, ...]:
    if signs.test is newest:
        return signs.reasons
    numbers = {"performed_on": signs.test.performed_on.isoformat()}
    return (*signs.reasons, Reason(ReasonCode.STANDS_FROM, numbers, (signs.test.entry,), _SECTION))
