"""Friction loss of a single pipe against the network solver EPANET, under EPANET's own constants."""

from __future__ import annotations

from pathlib import Path

import pytest

from fieldlog.hydraulics.formulas import FrictionLaw, friction_loss
from fieldlog.units import Flow, Length

# EPANET 2.2 User Manual, Table 3.1: h = 4.727 L q^1.852 / (C^1.852 d^4.871), in ft and ft3/s.
GPM_PER_FT3_PER_S = 7.48051948 * 60
EPANET_FORM = FrictionLaw(coefficient=4.727 * 12**4.871 / GPM_PER_FT3_PER_S**1.852, flow_exponent=1.852,
                          diameter_exponent=4.871)  # fmt: skip
FT_PER_M = float(Length.sizes["m"])
M_PER_IN = 0.0254
M3_PER_S_PER_GPM = 1 / float(Flow.sizes["L/min"]) / 60_000


def epanet_loss_ft(tmp_path: Path, flow_gpm: float, c: float, diameter_in: float, length_ft: float) -> float:
    import wntr  # takes a second

    network = wntr.network.WaterNetworkModel()
    network.options.hydraulic.headloss = "H-W"
    network.options.hydraulic.accuracy = 1e-6
    network.add_reservoir("main", base_head=90.0)
    network.add_junction("riser", base_demand=flow_gpm * M3_PER_S_PER_GPM, elevation=2.0)
    network.add_pipe(
        "lead-in", "main", "riser", length=length_ft / FT_PER_M, diameter=diameter_in * M_PER_IN, roughness=c
    )
    results = wntr.sim.EpanetSimulator(network).run_sim(file_prefix=str(tmp_path / "single"))
    return float(90.0 - results.node["head"]["riser"].iloc[0]) * FT_PER_M


@pytest.mark.slow
@pytest.mark.parametrize(
    ("flow_gpm", "c", "diameter_in", "length_ft"),
    [
        (100.0, 120.0, 2.067, 230.0),
        (26.0, 120.0, 1.049, 80.0),
        (500.0, 100.0, 4.260, 610.0),
        (1000.0, 140.0, 8.27, 1700.0),
        (750.0, 130.0, 6.065, 450.0),
    ],
)
def test_friction_agrees_with_epanet_under_the_same_law(
    tmp_path: Path, flow_gpm: float, c: float, diameter_in: float, length_ft: float
) -> None:
    ours_ft = length_ft * friction_loss(flow_gpm, c, diameter_in, law=EPANET_FORM)
    assert ours_ft == pytest.approx(epanet_loss_ft(tmp_path, flow_gpm, c, diameter_in, length_ft), rel=1e-3)
