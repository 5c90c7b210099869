"""Published examples that are wrong: the right result comes out, and not the printed one."""

from __future__ import annotations

from datetime import date
from fractions import Fraction

import pytest

from fieldlog.assessment.alarm_times import alarm_findings
from fieldlog.assessment.constants import GRADE_PERCENT
from fieldlog.assessment.ten_percent import is_reduced
from fieldlog.hydraulics.formulas import c_multiplier, pitot_flow, sprinkler_flow, sprinkler_pressure
from fieldlog.hydraulics.supply import SupplyCurve, drop_fraction
from fieldlog.records.history import AlarmTest
from tests.assessment.made import AS_OF, PROFILE, read, system


def test_1178_gpm_is_the_flow_without_the_coefficient_it_claims() -> None:
    # 2.5 in. at 40 psi with "0.90": 1061 gpm, common practice (worked example of a hydrant flow test).
    assert round(pitot_flow(0.90, 2.5, 40)) == 1061
    # The printed 1178 gpm is 29.8 d^2 sqrt(p), without a coefficient.
    assert pitot_flow(1.0, 2.5, 40) == pytest.approx(1178, rel=0.002)
    assert pitot_flow(0.90, 2.5, 40) != pytest.approx(1178, rel=0.05)


def test_80_to_60_psi_at_1178_gpm_leaves_2132_gpm_and_not_2000() -> None:
    flow_gpm = SupplyCurve.from_flow_test(80, 60, 1178).flow_at(20)
    assert flow_gpm == pytest.approx(2132, rel=0.001)
    assert flow_gpm != pytest.approx(2000, rel=0.05)


def test_147_gpm_needs_18_58_psi_at_k_34_1_and_not_26_67() -> None:
    assert round(sprinkler_pressure(34.1, 147), 2) == 18.58
    assert sprinkler_pressure(34.1, 147) != pytest.approx(26.67, rel=0.3)
    assert sprinkler_flow(28.46, 26.67) == pytest.approx(147, abs=0.05)


# CEA 4001:2009, p. 134: 0.714 at C 100. One published list has the multipliers upside down.
@pytest.mark.parametrize(("c", "right", "wrong"), [(100, 0.714, 1.51), (150, 1.51, 0.713)])
def test_a_rough_pipe_shortens_the_equivalent_length(c: float, right: float, wrong: float) -> None:
    assert c_multiplier(c) == pytest.approx(right, abs=0.002)
    assert c_multiplier(c) != pytest.approx(wrong, rel=0.3)


def test_all_three_tests_and_not_only_the_second_had_a_drop_of_25_percent() -> None:
    # NFPA 291, 4.3.6 (2010 and earlier): 25 percent of the static.
    assert [drop_fraction(68, residual) >= 0.25 for residual in (50, 39, 13)] == [True, True, True]


def test_ten_percent_is_no_limit_for_the_drop_from_static_to_residual() -> None:
    static, residual, residual_then = read("81"), read("66"), read("67")
    assert drop_fraction(static.psi, residual.psi) > 0.10
    assert not is_reduced(residual, residual_then, Fraction(10))


def test_the_inspection_standard_has_no_limit_of_60_seconds_for_a_dry_system() -> None:
    # A trade association's article of 2019: NFPA 25 compares with acceptance and has no such criterion.
    tests = [
        AlarmTest(
            entry=year, performed_on=date(year, 6, 3), item="remote", is_dry=True, is_full_flow=True,
            delivery_s=seconds, standing=standing,
        )
        for year, seconds, standing in ((2017, 90.0, "acceptance"), (2023, 100.0, None))
    ]  # fmt: skip
    assert PROFILE.delivery_limit_s() is None
    assert alarm_findings(system(alarm_tests=tuple(tests)), PROFILE, AS_OF) == ()


def test_a_tenth_of_a_percent_is_grade_4a_and_not_a() -> None:
    # ASME B40.100: grade A is 2, 1, 2 percent of span; 4A is 0.1 (from memory).
    assert GRADE_PERCENT["A"] == (2.0, 1.0)
    assert GRADE_PERCENT["4A"] == (0.1, 0.1)
