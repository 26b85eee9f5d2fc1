"""Radiation of a body without inner gradients against the closed solutions.

TH-09, Incropera et al. 5.3, eqs 5.18-5.19: R 25 mm, 7800 kg/m3, 650 J/(kg K), so rho c R/2 = 63375 J/(m2 K);
emissivity 0.8. The conductivity of 1e6 W/(m K) makes the body one temperature. Values computed from the closed forms.
"""

import numpy as np
import pytest
from tools import last_of, uniform_edges

from thermal.crosscheck.problem import Problem, constant_flux, convection, heating, left_alone, radiation
from thermal.geometry.shapes import cylinder
from thermal.interfaces import BoundaryLoss
from thermal.loop import run
from thermal.results.history import History
from thermal.schedule import Stage, Stop


def lumped(stage: Stage, T_initial: float, *losses: BoundaryLoss) -> History:
    mesh = cylinder(uniform_edges(0.0, 0.025, 10), 0.1)
    problem = Problem(
        mesh,
        (stage,),
        T_initial=T_initial,
        losses={"outer": losses},
        conductivity=lambda T: np.full_like(T, 1e6),
        tolerance=0.005,
    )
    return run(problem.setup())


@pytest.mark.parametrize(
    ("T_around", "T_to", "time"),
    [
        (0.0, 1273.15, 79.9962554298608),
        (0.0, 1073.15, 231.13781697859918),
        (293.15, 1073.15, 231.9422229624815),
        (293.15, 573.15, 2403.483812799423),
    ],
)
def test_th_09_cooling_time(T_around: float, T_to: float, time: float) -> None:
    # From 1473.15 K; eq. 5.18 with surroundings, 5.19 to deep space.
    stop = Stop({"surface": T_to}, falling=True)
    history = lumped(left_alone(1e5, stop), 1473.15, radiation(0.8, T_around))
    assert history.stages[-1].reason == "target"
    assert history.time[-1] == pytest.approx(time, rel=1e-4)


@pytest.mark.parametrize(
    ("q", "T_to", "time"),
    [
        (1e5, 873.15, 400.4085300066544),
        (1e5, 0.99 * 1219.516544807047, 1134.6110160173118),
        (2e5, 873.15, 191.3054100757195),
    ],
)
def test_th_09_heating_time(q: float, T_to: float, time: float) -> None:
    # A flux q [W/m2] from 293.15 K against radiation to 293.15 K.
    history = lumped(left_alone(1e5, Stop({"surface": T_to})), 293.15, constant_flux(q), radiation(0.8, 293.15))
    assert history.time[-1] == pytest.approx(time, rel=1e-4)


@pytest.mark.parametrize(
    ("q", "h", "T_end"),
    [(5e4, 0.0, 1026.3420314869254), (1e5, 0.0, 1219.516544807047), (1e5, 15.0, 1177.062676831502)],
)
def test_th_09_equilibrium(q: float, h: float, T_end: float) -> None:
    history = lumped(heating(1e5), 293.15, constant_flux(q), radiation(0.8, 293.15), convection(h, 293.15))
    assert last_of(history, "surface") == pytest.approx(T_end, rel=1e-6)


def test_th_09_newton_cooling() -> None:
    # h 15 W/(m2 K): time constant rho c R/(2h) = 4225 s, excess falls as exp(-t/4225).
    history = lumped(left_alone(4225.0), 793.15, convection(15.0, 293.15))
    assert (last_of(history, "surface") - 293.15) / 500.0 == pytest.approx(np.exp(-1.0), rel=1e-4)
