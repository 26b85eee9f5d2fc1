"""Steady temperature of bars, tubes and slabs with a source, against closed solutions.

F. P. Incropera et al., Fundamentals of Heat and Mass Transfer, 3.5 (sources); C&J 1.6 and 2.16 (Kirchhoff). All runs
march to rest: the state at the end is a state of the transient solver.
"""

from collections.abc import Callable

import numpy as np
import pytest
from tools import last_of, observed_order, uniform_edges

from materials.magnetics import Magnetics
from thermal.circuit.supply import DirectDrive
from thermal.control import FixedDrive
from thermal.crosscheck.problem import PrescribedSource, Problem, convection, heating, uniform_source
from thermal.eddy.finite_coil import SectionSource
from thermal.eddy.radial import RadialSolver
from thermal.geometry.grading import graded_edges
from thermal.geometry.mesh import Mesh
from thermal.geometry.shapes import cylinder, plate
from thermal.interfaces import Array, Demand
from thermal.loop import run
from thermal.results.history import History

T_AROUND = 300.0
LONG = 20_000.0
"""A hundred time constants of the largest problem here [s]."""


def at_rest(mesh: Mesh, source: PrescribedSource, h: float, conductivity: Callable[[Array], Array] | None) -> History:
    problem = Problem(
        mesh,
        (heating(LONG),),
        T_initial=T_AROUND,
        source=source,
        losses={"outer": (convection(h, T_AROUND),)},
        conductivity=conductivity,
        depths={"half": 0.5 * float(mesh.edges[-1])},
        tolerance=0.05,
    )
    return run(problem.setup())


def test_th_07_bar_with_source_and_convection() -> None:
    # TH-07: Q 1e7 W/m3, R 20 mm, k 30, h 250: QR^2/4k = 33.33333 K inside, QR/2h = 400 K outside.
    mesh = cylinder(uniform_edges(0.0, 0.02, 100), 0.1)
    history = at_rest(mesh, uniform_source(mesh, 1e7), 250.0, None)
    assert last_of(history, "core") - last_of(history, "surface") == pytest.approx(33.33333333, rel=1e-4)
    assert last_of(history, "surface") - T_AROUND == pytest.approx(400.0, rel=1e-6)


def test_th_07_tube_with_insulated_bore_second_order() -> None:
    # TH-07, tube 10/20 mm: Q/4k [ro^2 - ri^2 - 2 ri^2 ln(ro/ri)] = 13.44754699 K, Q(ro^2 - ri^2)/(2 h ro) = 300 K.
    errors, cells = [], [25, 50, 100]
    for n in cells:
        mesh = cylinder(uniform_edges(0.01, 0.02, n), 0.1)
        history = at_rest(mesh, uniform_source(mesh, 1e7), 250.0, None)
        assert last_of(history, "surface") - T_AROUND == pytest.approx(300.0, rel=1e-6)
        errors.append(abs(last_of(history, "core") - last_of(history, "surface") - 13.44754699067) / 13.44754699067)
    assert errors[-1] < 1e-4
    assert 1.8 < observed_order([1.0 / n for n in cells], errors) < 2.2


def test_th_07_composite_bar() -> None:
    # TH-07: core 0..10 mm k 15 with Q 1e7, shell to 20 mm k 45 without source: T(0) - T(R) = 24.36830201 K.
    mesh = cylinder(uniform_edges(0.0, 0.02, 100), 0.1)
    inside = mesh.r < 0.01
    source = PrescribedSource(mesh, lambda T, excitation: np.where(inside, 1e7, 0.0))
    history = at_rest(mesh, source, 250.0, lambda T: np.where(inside, 15.0, 45.0))
    assert last_of(history, "spread") == pytest.approx(-24.36830201, rel=1e-4)


@pytest.mark.parametrize(("shape", "centre", "half"), [("bar", 40.40820577, 30.22843964), ("slab", 81.66739067, None)])
def test_th_14_conductivity_that_falls_with_temperature(shape: str, centre: float, half: float | None) -> None:
    # TH-14, C&J 1.6 and 2.16 (Kirchhoff): k = 50 (1 - 5e-4 (T - T_s)), Q 2e7 W/m3, R or L 20 mm.
    R, Q, h = 0.02, 2e7, 2e4
    edges = uniform_edges(0.0, R, 100)
    mesh = cylinder(edges, 0.1) if shape == "bar" else plate(edges, 0.2, 0.3)
    T_surface = T_AROUND + Q * R / (h * (2.0 if shape == "bar" else 1.0))
    history = at_rest(mesh, uniform_source(mesh, Q), h, lambda T: 50.0 * (1.0 - 5e-4 * (T - T_surface)))
    assert last_of(history, "surface") == pytest.approx(T_surface, rel=1e-6)
    assert last_of(history, "core") - T_surface == pytest.approx(centre, rel=5e-4)
    if half is not None:
        assert last_of(history, "half") - T_surface == pytest.approx(half, rel=5e-4)


@pytest.mark.parametrize(
    ("frequency", "centre", "half", "outer"),
    [(1e3, 37.57683697, 35.27591565, 22.38221631), (1e4, 106.6589352, 104.8351475, 85.14623299)],
)
def test_cp_05_core_excess_with_the_real_field(frequency: float, centre: float, half: float, outer: float) -> None:
    # CP-05: T - T_s = rho (H0^2 - |H|^2)/(4k) at every point in the steady state (rho, mu, k constant, axial H).
    # Hot steel D 50 mm, 1.2e-6 ohm m, k 28, H0 100 kA/m peak; at r/a = 0, 0.5, 0.8.
    a, h = 0.025, 3e3
    mesh = cylinder(graded_edges(0.0, a, np.sqrt(1.2e-6 / (np.pi * frequency * 4e-7 * np.pi))), 0.1)
    source = SectionSource(
        mesh, RadialSolver(mesh), lambda T: np.full_like(T, 1.2e-6), Magnetics.constant(1.0), path=None
    )
    problem = Problem(
        mesh,
        (heating(LONG, control=FixedDrive(Demand("surface_field", 1e5 / np.sqrt(2.0)))),),
        T_initial=T_AROUND,
        source=source,
        supply=DirectDrive(frequency),
        losses={"outer": (convection(h, T_AROUND),)},
        conductivity=lambda T: np.full_like(T, 28.0),
        depths={"r/a = 0.5": 0.5 * a, "r/a = 0.8": 0.2 * a},
        frequency=frequency,
        tolerance=0.05,
    )
    history = run(problem.setup())
    surface = last_of(history, "surface")
    assert last_of(history, "core") - surface == pytest.approx(centre, rel=3e-3)
    assert last_of(history, "r/a = 0.5") - surface == pytest.approx(half, rel=3e-3)
    assert last_of(history, "r/a = 0.8") - surface == pytest.approx(outer, rel=3e-3)
    # At rest all that the field brings leaves through the surface.
    assert history.loss_power[-1] == pytest.approx(history.absorbed_power[-1], rel=1e-6)
