"""Blind loss against many simulated tests; no published value: the formula is the project's own."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from fieldlog.assessment.blind_loss import Look, smallest_loss
from tests.assessment.made import DESIGN, GAUGE, acceptance, said, steady_years

# Static, residual, sigma of static and residual, K, demand, earlier tests; and the outlet's height.
CASES = [
    Look(81.0, 66.0, 66.0, 0.41, 0.58, 42.0, 420.0, 8),
    Look(81.0, 66.0, 66.0, 0.41, 0.58, 42.0, 600.0, 1),
    Look(75.0, 50.0, 50.0, 1.08, 1.53, 42.0, 450.0, 4),
    Look(62.0, 52.0, 58.0, 0.41, 0.58, 36.0, 500.0, 5),
    Look(95.0, 80.0, 80.0, 0.41, 0.58, 19.0, 400.0, 6),
    Look(70.0, 58.0, 58.0, 0.54, 0.76, 42.0, 300.0, 3),
]


def share_found(look: Look, loss_psi: float, draws: int = 40_000) -> float:
    """The share of restrictions of that size found one-sided at 5 percent, by drawing readings and tests."""
    rng = np.random.default_rng(11)
    head = look.outlet_residual_psi - look.residual_psi
    true_x = (look.static_psi - look.residual_psi) / look.outlet_residual_psi**0.925

    def residual_with(loss_at_demand_psi: float) -> float:
        """The residual at which the drain's flow uses up static, old resistance and the new loss (square law)."""
        low, high = 0.0, look.static_psi
        for _ in range(60):
            middle = (low + high) / 2
            flow = look.drain_k * np.sqrt(max(middle + head, 0.0))
            lost = true_x * max(middle + head, 0.0) ** 0.925 + loss_at_demand_psi * (flow / look.demand_flow_gpm) ** 2
            low, high = (middle, high) if middle + lost < look.static_psi else (low, middle)
        return (low + high) / 2

    def read_index(residual_psi: float, count: int) -> np.ndarray:
        model = 0.06 * true_x * rng.standard_normal((draws, count))
        static = look.static_psi + look.static_sigma_psi * rng.standard_normal((draws, count))
        residual = residual_psi + look.residual_sigma_psi * rng.standard_normal((draws, count))
        return (static - residual) / (residual + head) ** 0.925 + model

    def statistic(residual_psi: float) -> np.ndarray:
        return read_index(residual_psi, 1)[:, 0] - read_index(residual_with(0.0), look.tests).mean(axis=1)

    limit = np.quantile(statistic(residual_with(0.0)), 0.95)
    return float((statistic(residual_with(loss_psi)) > limit).mean())


def simulated(look: Look) -> float:
    low, high = 0.1, 300.0
    for _ in range(22):
        middle = (low + high) / 2
        low, high = (middle, high) if share_found(look, middle, 8_000) < 0.9 else (low, middle)
    return (low + high) / 2


@pytest.mark.parametrize("look", CASES, ids=[f"case {n}" for n in range(1, 7)])
def test_the_formula_is_within_fifteen_percent_of_what_simulation_finds(look: Look) -> None:
    loss = smallest_loss(look)
    assert loss is not None
    assert loss == pytest.approx(simulated(look), rel=0.15)


def test_nine_in_ten_of_such_losses_are_found() -> None:
    loss = smallest_loss(CASES[0])
    assert loss is not None
    assert 0.86 < share_found(CASES[0], loss) < 0.94
    assert share_found(CASES[0], loss / 3) < 0.5


@pytest.mark.parametrize("look", CASES, ids=[f"case {n}" for n in range(1, 7)])
def test_the_loss_is_the_rest_of_its_own_iteration(look: Look) -> None:
    # Written out once more, with R at the outlet in the root and in D/R only: DEVELOPERS.md, Method §8.
    loss, head = smallest_loss(look), look.outlet_residual_psi - look.residual_psi
    assert loss is not None
    static_var, read_var = look.static_sigma_psi**2, look.residual_sigma_psi**2
    residual, drop = look.residual_psi, look.static_psi - look.residual_psi
    ratio = look.drain_k * look.outlet_residual_psi**0.5 / look.demand_flow_gpm
    d = loss * ratio**2
    lowered = residual - d / (1 + d / residual)
    before = static_var + read_var * (1 + 0.925 * drop / look.outlet_residual_psi) ** 2
    now = static_var + read_var * (1 + 0.925 * (drop + residual - lowered) / (lowered + head)) ** 2
    s = (now + before / look.tests + (0.06 * drop) ** 2 * (1 + 1 / look.tests)) ** 0.5
    assert loss == pytest.approx(2.93 * s / ratio**2 * (1 + 0.35 * d / residual), abs=1e-4)


def test_a_coarse_gauge_on_a_weak_supply_leaves_no_finite_loss() -> None:
    assert smallest_loss(Look(40.0, 20.0, 20.0, 2.1, 2.93, 42.0, 900.0, 1)) is None
    assert smallest_loss(Look(40.0, -2.0, -2.0, 0.4, 0.6, 42.0, 900.0, 3)) is None


@pytest.mark.parametrize(
    "worse",
    [
        {"residual_sigma_psi": 2.0},
        {"tests": 1},
        {"demand_flow_gpm": 700.0},
        {"drain_k": 30.0},
        {"gauge_sigma_psi": 4.0},
    ],
)
def test_whatever_tells_less_raises_it(worse: dict[str, float]) -> None:
    base, raised = smallest_loss(CASES[0]), smallest_loss(replace(CASES[0], **worse))
    assert base is not None
    assert raised is not None
    assert raised > base


def test_a_finer_gauge_at_the_newest_test_lowers_it() -> None:
    coarse = replace(GAUGE, division_psi=5.0)
    blind = said(*steady_years(), gauges=(coarse,)).blind_loss
    assert blind is not None
    assert blind.loss_psi is not None
    assert blind.with_half_psi_gauge_psi is not None
    assert blind.with_half_psi_gauge_psi < 0.7 * blind.loss_psi


def test_the_outlet_s_height_changes_the_drain_s_flow_and_not_the_drop() -> None:
    plain, low = (smallest_loss(replace(CASES[0], outlet_residual_psi=psi)) for psi in (66.0, 70.0))
    assert plain is not None
    assert low is not None
    # More flow through the drain shows more: roughly as the flow squared, 66/70.
    assert 0.88 < low / plain < 0.99


def test_the_demand_counted_is_the_flow_in_the_riser_with_inside_hose() -> None:
    excluded = replace(DESIGN, includes_inside_hose=False)
    included, more = (said(*steady_years(), design=one).blind_loss for one in (DESIGN, excluded))
    assert included is not None
    assert more is not None
    assert (included.demand_flow_gpm, more.demand_flow_gpm) == (420.0, 470.0)


def test_tests_count_since_the_reference() -> None:
    again = acceptance("2021-01-14", "81", "66")
    blind = said(*steady_years(), again).blind_loss
    assert blind is not None
    assert blind.tests == 3  # the acceptance of January 2021, May 2021 and 2022; 2023 is the newest
