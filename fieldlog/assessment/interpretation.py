"""The trade's table of how readings differ and what to look at, read from data."""

from __future__ import annotations

import math
import tomllib
from collections.abc import Mapping, Sequence
from collections.abc import Set as AbstractSet
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Any

from fieldlog.assessment import constants
from fieldlog.assessment.codes import CheckCode, ReasonCode
from fieldlog.assessment.drain_index import Index

# A residual up by this share of the earlier drop is "much higher": the drain flowed less.
_MUCH_HIGHER_SHARE = 0.5
_DIFFERS_SIGMAS = 2.0
_LEAST_DIFFERENCE_PSI = 3.0  # less is day to day, common practice


@dataclass(frozen=True, slots=True)
class Difference:
    """How the newest test differs from an earlier one, in words of the table."""

    static: str  # same, lower, higher
    residual: str  # same, lower, higher, much higher, near zero
    by: str = "same"  # same: both fell alike; more: the residual fell by more
    returned: str = "quick"  # quick, slow, never


def places_to_look(newest: Index, earlier: Index) -> tuple[str, ...]:
    """Return codes of likely places to look, by the table; empty where nothing differs.

    Parameters
    ----------
    newest : Index
        The newest test [-].
    earlier : Index
        The test it is held against [-].

    Returns
    -------
    tuple[str, ...]
        CheckCodes [-].

    References
    ----------
    interpretation.toml: common practice; a qualified person decides.
    """
    return checks_for(difference(newest, earlier))


def places_by_signs(signs: AbstractSet[str], *, is_bled_off: bool) -> tuple[str, ...]:
    """Return codes of likely places to look that one test tells by itself.

    Parameters
    ----------
    signs : AbstractSet[str]
        Codes of the signs of an impairment in it [-].
    is_bled_off : bool
        Static after stood under static before [-].

    Returns
    -------
    tuple[str, ...]
        CheckCodes [-].

    References
    ----------
    interpretation.toml.
    """
    if signs & {ReasonCode.RESIDUAL_NEAR_ZERO, ReasonCode.NOT_RECOVERED}:
        return checks_for(Difference("any", "near zero", returned="never"))
    return checks_for(Difference("after below before", "any")) if is_bled_off else ()


def difference(newest: Index, earlier: Index) -> Difference:
    """Return how two tests differ, beyond twice their errors and 3 psi.

    Parameters
    ----------
    newest : Index
        The newest test [-].
    earlier : Index
        The test it is held against [-].

    Returns
    -------
    Difference
        Words of the table [-].

    References
    ----------
    DEVELOPERS.md, Method §8.
    """
    static_limit = _limit((newest.static.sigma_psi, earlier.static.sigma_psi))
    residual_limit = _limit((newest.residual_sigma_psi, earlier.residual_sigma_psi))
    static_psi = newest.static.psi - earlier.static.psi
    residual_psi = newest.residual_psi - earlier.residual_psi
    residual = _word(residual_psi, residual_limit)
    if residual == "higher" and residual_psi > max(_MUCH_HIGHER_SHARE * earlier.drop_psi, static_psi + residual_limit):
        residual = "much higher"
    is_slow = newest.test.return_s is not None and newest.test.return_s >= constants.SLOW_RETURN_S
    by = "more" if static_psi - residual_psi > residual_limit else "same"
    return Difference(_word(static_psi, static_limit), residual, by, "slow" if is_slow else "quick")


def checks_for(difference: Difference) -> tuple[str, ...]:
    """Return the codes of the first row of the table that fits.

    Parameters
    ----------
    difference : Difference
        How the tests differ [-].

    Returns
    -------
    tuple[str, ...]
        CheckCodes [-].

    References
    ----------
    interpretation.toml.
    """
    for row in _rows():
        if _fits(row, difference):
            return tuple(CheckCode(code) for code in row["checks"])
    return ()


def _fits(row: Mapping[str, Any], found: Difference) -> bool:
    if row["static"] not in {"any", found.static} or row["residual"] != found.residual:
        return False
    return bool(row.get("return", found.returned) == found.returned and row.get("by", found.by) == found.by)


def _word(difference_psi: float, limit_psi: float) -> str:
    if abs(difference_psi) <= limit_psi:
        return "same"
    return "higher" if difference_psi > 0 else "lower"


def _limit(sigmas: Sequence[float]) -> float:
    return max(_DIFFERS_SIGMAS * math.hypot(*sigmas), _LEAST_DIFFERENCE_PSI)


@cache
def _rows() -> Sequence[Mapping[str, Any]]:
    text = files("fieldlog.assessment").joinpath("interpretation.toml").read_text(encoding="utf-8")
    rows: Sequence[Mapping[str, Any]] = tomllib.loads(text)["row"]
    return rows
