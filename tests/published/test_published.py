"""Every published value is met within half its last printed digit, or a coarser tolerance given with a reason."""

from __future__ import annotations

import inspect
import re

import pytest

from fieldlog.hydraulics.formulas import FrictionLaw, friction_loss
from tests.published import routes
from tests.published.checks import (
    HERE,
    Check,
    checks_in,
    computed,
    half_last_digit,
    label,
    named,
    published,
    tolerance,
)

CHECKS = published()
COARSE = [check for check in CHECKS if "tolerance_reason" in check]
FRICTION_CHART = [check for check in CHECKS if check["formula"] == "formulas.friction_loss"]
FIELDS = {"row", "case", "formula", "inputs", "expected", "unit", "tolerance", "source"}
# Common practice: the handbooks' form gives ft of head in 100 ft of pipe; the chart turns it into psi at 0.433 psi/ft.
HANDBOOK_FORM = FrictionLaw(coefficient=1043.94, flow_exponent=1.852, diameter_exponent=4.8655)


@pytest.mark.parametrize("check", CHECKS, ids=label)
def test_a_published_value_is_met_within_its_tolerance(check: Check) -> None:
    assert abs(computed(check) - float(check["expected"])) <= tolerance(check)


@pytest.mark.parametrize("check", CHECKS, ids=label)
def test_a_check_is_complete_and_names_a_formula_and_no_web_site(check: Check) -> None:
    assert set(check) - {"route", "tolerance_reason"} == FIELDS
    assert (check["tolerance"] != "half last digit") == ("tolerance_reason" in check)
    assert callable(named(check["formula"]))
    assert not re.search(r"www|\.(com|org|net|gov)\b", check["source"])


@pytest.mark.parametrize("check", COARSE, ids=label)
def test_a_coarse_tolerance_stands_only_where_half_the_last_digit_does_not_do(check: Check) -> None:
    assert abs(computed(check) - float(check["expected"])) > half_last_digit(check["expected"])


@pytest.mark.parametrize("check", FRICTION_CHART, ids=label)
def test_the_friction_chart_is_reproduced_to_its_last_digit_by_its_own_form(check: Check) -> None:
    psi_per_100_ft = 0.433 * friction_loss(**check["inputs"], law=HANDBOOK_FORM)
    assert f"{psi_per_100_ft:.2f}" == check["expected"]


def test_no_published_row_is_checked_twice_or_lost() -> None:
    rows = [check["row"] for check in CHECKS]
    assert len(rows) == len(set(rows)) == 79
    assert len(FRICTION_CHART) == 10


def test_every_route_is_used_by_a_check_or_a_pin() -> None:
    own = {name for name, one in inspect.getmembers(routes, inspect.isfunction) if one.__module__ == routes.__name__}
    assert own == {check["route"] for path in HERE.glob("*.toml") for check in checks_in(path) if "route" in check}


@pytest.mark.parametrize(("printed", "half"), [("23.6", 0.05), ("627.50", 0.005), ("94", 0.5)])
def test_half_the_last_digit_follows_the_printed_text(printed: str, half: float) -> None:
    assert half_last_digit(printed) == pytest.approx(half)
