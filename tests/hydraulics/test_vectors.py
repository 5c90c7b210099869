"""The vector file for other implementations holds what the formulas give, and what they are defined to give."""

from __future__ import annotations

import json
from collections import Counter
from pathlib import Path
from typing import Any

import pytest

from fieldlog.hydraulics import formulas
from fieldlog.hydraulics.supply import SupplyCurve

CASES = json.loads((Path(__file__).parent.parent / "vectors" / "hydraulics.json").read_text(encoding="utf-8"))["cases"]

Inputs = dict[str, float]


def label(case: dict[str, Any]) -> str:
    return f"{case['formula']} {case['inputs']}"


def curve(given: Inputs) -> SupplyCurve:
    return SupplyCurve.from_flow_test(given["static_psi"], given["residual_psi"], given["flow_gpm"])


def computed(formula: str, given: Inputs) -> float:
    if formula == "pressure_at":
        return curve(given).pressure_at(given["at_gpm"])
    if formula == "flow_at":
        return curve(given).flow_at(given["pressure_psi"])
    return getattr(formulas, formula)(**given)


def by_definition(formula: str, given: Inputs) -> float:
    """The published formulas once more in plain Python, as another implementation would write them."""
    static, residual, flow = (given.get(name, 0.0) for name in ("static_psi", "residual_psi", "flow_gpm"))
    match formula:
        case "pressure_at":
            return static - (static - residual) * (given["at_gpm"] / flow) ** 1.85
        case "flow_at":
            return flow * (max(static - given["pressure_psi"], 0.0) / (static - residual)) ** (1 / 1.85)
        case "pitot_flow":
            share = given["coefficient"] * given["outlet_factor"]
            return 29.83 * share * given["diameter_in"] ** 2 * given["pitot_psi"] ** 0.5
        case "sprinkler_flow":
            return given["k"] * given["pressure_psi"] ** 0.5
        case "elevation_pressure":
            return 0.433 * given["height_ft"]
        case "drain_index":
            return (static - residual) / given["outlet_residual_psi"] ** 0.925
    raise AssertionError(formula)


@pytest.mark.parametrize("case", CASES, ids=label)
def test_a_vector_is_what_the_formula_gives(case: dict[str, Any]) -> None:
    assert computed(case["formula"], case["inputs"]) == pytest.approx(case["expected"], rel=1e-9, abs=1e-9)


@pytest.mark.parametrize("case", CASES, ids=label)
def test_a_vector_is_what_the_definition_gives(case: dict[str, Any]) -> None:
    assert by_definition(case["formula"], case["inputs"]) == pytest.approx(case["expected"], rel=1e-9, abs=1e-9)


def test_each_formula_of_the_browser_has_several_vectors() -> None:
    counted = Counter(case["formula"] for case in CASES)
    names = {"pressure_at", "flow_at", "pitot_flow", "sprinkler_flow", "elevation_pressure", "drain_index"}
    assert set(counted) == names
    assert min(counted.values()) > 3
