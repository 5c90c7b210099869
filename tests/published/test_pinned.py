"""Results without a published value stay as they are, and every public formula has a check or a reason for none."""

from __future__ import annotations

import inspect
from fractions import Fraction

import pytest

from fieldlog.assessment.gauge_readings import is_out_of_accuracy
from fieldlog.assessment.ten_percent import is_reduced
from fieldlog.hydraulics import formulas, pipe, supply
from fieldlog.hydraulics.formulas import friction_loss
from fieldlog.hydraulics.supply import SupplyCurve
from fieldlog.records.history import Reading
from fieldlog.units import Pressure
from tests.published.checks import Check, computed, label, pinned, published, tolerance
from tests.published.routes import metric_friction_loss

PINS = pinned()
FRICTION_PINS = [pin for pin in PINS if pin["formula"] == "formulas.friction_loss" and "route" not in pin]
PSI_PER_FT_IN_BAR_PER_M = 1 / (Pressure.sizes["bar"] * Fraction("0.3048"))

# Public functions and methods with no published value; each is held by the pin or the test named.
WITHOUT_A_PUBLISHED_VALUE = {
    "formulas.sprinkler_flow": "pinned; its inverse, the pressure, has a published value",
    "formulas.velocity_pressure": "pinned; constant from memory",
    "formulas.diameter_multiplier": "pinned; rule from memory",
    "formulas.drain_index": "pinned; our own quantity",
    "formulas.drain_flow": "pinned; the flow of an orifice",
    "formulas.drain_k": "pinned; derived from two published formulas",
    "pipe.fitting_length": "a table, held cell by cell in tests/hydraulics/test_tables.py",
    "pipe.c_factor": "a table, held cell by cell in tests/hydraulics/test_tables.py",
    "pipe.nominal_k": "a table, held cell by cell in tests/hydraulics/test_tables.py",
    "pipe.main_drain_size": "a table from memory, held in tests/hydraulics/test_tables.py",
    "pipe.nearest_nominal": "a look-up in the table of inside diameters, in tests/hydraulics/test_tables.py",
    "supply.is_extrapolated": "compares two flows, in tests/hydraulics/test_supply.py",
}


@pytest.mark.parametrize("pin", PINS, ids=label)
def test_a_pinned_value_stays(pin: Check) -> None:
    assert abs(computed(pin) - float(pin["expected"])) <= tolerance(pin)


@pytest.mark.parametrize("pin", PINS, ids=label)
def test_a_pin_says_that_it_is_one(pin: Check) -> None:
    assert pin["source"].startswith("pinned")
    assert pin["tolerance"] == "half last digit"


@pytest.mark.parametrize("pin", FRICTION_PINS, ids=label)
def test_the_metric_form_lies_0_019_percent_above(pin: Check) -> None:
    in_bar_per_m = friction_loss(**pin["inputs"]) * float(PSI_PER_FT_IN_BAR_PER_M)
    assert round(100 * (metric_friction_loss(**pin["inputs"]) / in_bar_per_m - 1), 3) == 0.019


def reading(value: str) -> Reading:
    exact = Pressure(value=value, unit="psi").exact()
    return Reading(psi=float(exact), exact_psi=exact, value=value, unit="psi")


# Pinned, no published source: 54.0 of 60.0 psi is a reduction of 10.000 percent, 54.1 of 9.833, 53.9 of 10.167.
@pytest.mark.parametrize(("residual", "is_flagged"), [("54.0", True), ("54.1", False), ("53.9", True)])
def test_a_reduction_of_ten_percent_exactly_is_flagged(residual: str, is_flagged: bool) -> None:
    assert is_reduced(reading(residual), reading("60.0"), Fraction(10)) is is_flagged


# Pinned, no published source: 9.0 psi is 3.000 percent of a 300 psi dial, 9.1 psi is 3.033.
@pytest.mark.parametrize(("error_psi", "is_out"), [(9.0, False), (9.1, True), (-9.0, False), (-9.1, True)])
def test_a_gauge_at_three_percent_of_its_dial_is_within(error_psi: float, is_out: bool) -> None:
    assert is_out_of_accuracy(error_psi, 300.0, 3.0) is is_out


def test_one_point_projections_of_one_hydrant_disagree_by_44_percent() -> None:
    flows = [float(pin["expected"]) for pin in PINS if pin["formula"] == "supply.SupplyCurve.flow_at"]
    assert round(100 * (max(flows) / min(flows) - 1)) == 44


def test_the_inverse_power_is_not_0_54_which_would_give_0_14_percent_less() -> None:
    # Pinned, no published source: 90 psi falling to 85 at 1140 gpm, to 20 psi: a ratio of drops of 14.
    flow_gpm = SupplyCurve.from_flow_test(90.0, 85.0, 1140.0).flow_at(20.0)
    assert round(1140 * 14**0.54, -1) == 4740
    assert round(100 * (flow_gpm / (1140 * 14**0.54) - 1), 2) == 0.14


def public_functions() -> set[str]:
    return {
        f"{module.__name__.rpartition('.')[2]}.{name}"
        for module in (formulas, pipe, supply)
        for name, one in inspect.getmembers(module, inspect.isfunction)
        if one.__module__ == module.__name__ and not name.startswith("_")
    }


def test_every_public_formula_has_a_published_check_or_a_reason_for_none() -> None:
    checked = {check["formula"] for check in published()}
    assert public_functions() - checked == set(WITHOUT_A_PUBLISHED_VALUE)


def test_what_is_said_to_be_pinned_is_pinned() -> None:
    said = {formula for formula, reason in WITHOUT_A_PUBLISHED_VALUE.items() if reason.startswith("pinned")}
    assert said <= {pin["formula"] for pin in PINS}
