"""Heating of bars and plates against the closed solutions of Carslaw and Jaeger.

H. S. Carslaw, J. C. Jaeger, Conduction of Heat in Solids, 2nd ed. 1959 (C&J); case ids as in the verification table.
"Steel-like": k 30 W/(m K), 7800 kg/m3, 650 J/(kg K). Values computed from the series named at each test.
"""

import numpy as np
import pytest
from tools import ZERO, last_of, uniform_edges

from thermal.conduction.assemble import EnthalpyTable
from thermal.crosscheck.problem import (
    PrescribedSource,
    Problem,
    by_hand,
    constant_flux,
    convection,
    heating,
    left_alone,
    plain_material,
    uniform_source,
)
from thermal.geometry.shapes import cylinder, plate
from thermal.loop import run

CELLS = 50
DIFFUSIVITY = 30.0 / (7800.0 * 650.0)


@pytest.mark.parametrize(
    ("time", "surface", "centre"),
    [(10.0, 188.7642345, 29.29705946), (60.0, 597.525896, 389.2397616)],
)
def test_th_01_cylinder_under_constant_flux(time: float, surface: float, centre: float) -> None:
    # TH-01, C&J 7.8: R 25 mm, 5e5 W/m2 from 20 °C.
    mesh = cylinder(uniform_edges(0.0, 0.025, CELLS), 0.1)
    history = run(Problem(mesh, (left_alone(time),), losses={"outer": (constant_flux(5e5),)}).setup())
    rise = surface - 20.0
    assert last_of(history, "surface") - ZERO == pytest.approx(surface, abs=1e-3 * rise)
    assert last_of(history, "core") - ZERO == pytest.approx(centre, abs=1e-3 * rise)


def test_th_01_profile_in_similarity_form() -> None:
    # TH-01, C&J 7.8: theta = (T - T0) k/(q R) at Fo = 0.2 and r/R = 0, 0.5, 1.
    R, q = 0.025, 1e5
    mesh = cylinder(uniform_edges(0.0, R, CELLS), 0.1)
    time = 0.2 * R**2 / DIFFUSIVITY
    problem = Problem(
        mesh, (left_alone(time),), losses={"outer": (constant_flux(q),)}, depths={"half": R / 2}, tolerance=2e-3
    )
    history = run(problem.setup())
    theta = {name: (last_of(history, name) - 293.15) * 30.0 / (q * R) for name in ("core", "half", "surface")}
    expected = {"core": 0.1679376781, "half": 0.2798946673, "surface": 0.64277038}
    for name, value in expected.items():
        assert theta[name] == pytest.approx(value, abs=1e-3 * expected["surface"]), name


def test_th_01_late_difference_and_rate() -> None:
    # TH-01: the surface-core difference tends to qR/2k = 208.3333 K, the rate to 2q/(rho c R) = 7.889546 K/s.
    mesh = cylinder(uniform_edges(0.0, 0.025, CELLS), 0.1)
    history = run(Problem(mesh, (left_alone(90.0),), losses={"outer": (constant_flux(5e5),)}).setup())
    assert last_of(history, "spread") == pytest.approx(208.3333333, rel=1e-3)
    late = history.time > 60.0
    rate = np.polyfit(history.time[late], history.readings["mean"][late], 1)[0]
    assert rate == pytest.approx(7.889546351, rel=1e-4)


def test_th_02_plate_under_constant_flux() -> None:
    # TH-02, C&J 3.8: half-thickness 10 mm, 2e5 W/m2 on both faces, mid-plane a symmetry, 20 s from 20 °C.
    mesh = plate(uniform_edges(0.0, 0.010, CELLS), 0.2, 0.3)
    history = run(Problem(mesh, (left_alone(20.0),), losses={"outer": (constant_flux(2e5),)}).setup())
    assert last_of(history, "surface") - ZERO == pytest.approx(121.1175714, abs=0.1)
    assert last_of(history, "core") - ZERO == pytest.approx(87.78446671, abs=0.1)


@pytest.mark.parametrize(
    ("shape", "centre", "surface"),
    [("plate", 0.9506417785, 0.6433907845), ("cylinder", 0.8701742439, 0.5702277442)],
)
def test_th_04_cooling_by_convection(shape: str, centre: float, surface: float) -> None:
    # TH-04, C&J 3.11 and 7.7 (Incropera table 5.1): Bi 1, Fo 0.2.
    R = 0.02
    edges = uniform_edges(0.0, R, CELLS)
    mesh = plate(edges, 0.2, 0.3) if shape == "plate" else cylinder(edges, 0.1)
    T_around, excess = 293.15, 500.0
    problem = Problem(
        mesh,
        (left_alone(0.2 * R**2 / DIFFUSIVITY),),
        T_initial=T_around + excess,
        losses={"outer": (convection(30.0 / R, T_around),)},
    )
    history = run(problem.setup())
    assert (last_of(history, "core") - T_around) / excess == pytest.approx(centre, abs=1e-3)
    assert (last_of(history, "surface") - T_around) / excess == pytest.approx(surface, abs=1e-3)


@pytest.mark.parametrize(
    ("time", "rise"),
    [(0.01, 2.860612125), (0.1, 17.52284969), (1.0, 76.72119691), (5.0, 188.7798865)],
)
def test_th_05_skin_source_in_a_half_space(time: float, rise: float) -> None:
    # TH-05, C&J 2.11: Q0 e^{-x/d}, Q0 2e9 W/m3, d 0.5 mm, insulated face; surface temperature.
    depth = 0.06
    sizes = np.geomspace(1.0, 60.0, 120)
    edges = np.concatenate([[0.0], np.cumsum(sizes[::-1] * depth / sizes.sum())])
    edges[-1] = depth
    mesh = plate(edges, 0.2, 0.3)
    x = depth - edges
    mean = 2e9 * 0.5e-3 * np.diff(np.exp(-x / 0.5e-3)) / np.diff(edges)
    source = PrescribedSource(mesh, lambda T, excitation: mean)
    history = run(Problem(mesh, (heating(time),), source=source, tolerance=0.003).setup())
    assert last_of(history, "surface") - 293.15 == pytest.approx(rise, rel=2e-3)


@pytest.mark.parametrize("time", [10.0, 60.0])
def test_th_10_neumann_melting_front(time: float) -> None:
    # TH-10, C&J 11.2, Stefan problem: lambda e^{l^2} erf l = Ste/sqrt(pi). k 200, 2500 kg/m3, 1000 J/(kg K), latent
    # heat 3.9e5 J/kg, wall 100 K below the melting point, melt at it: lambda for Ste 100/390. After 10 s the front is
    # 19.46494083 mm deep, and it grows as sqrt(t). The tool asks for a melting interval; 0.1 K stands for the jump.
    depth, T_melt = 0.16, 933.0
    scale = 19.46494083e-3 / np.sqrt(10.0)
    mesh = plate(uniform_edges(0.0, depth, 160), 0.2, 0.3)
    T = np.array([500.0, T_melt - 0.05, T_melt + 0.05, 1500.0])
    H = 2500.0 * np.array([0.0, 1000.0 * (T[1] - 500.0), 1000.0 * (T[1] - 500.0) + 3.9e5, 0.0])
    H[3] = H[2] + 2500.0 * 1000.0 * (T[3] - T[2])
    problem = Problem(
        mesh,
        (left_alone(time),),
        T_initial=T_melt + 0.05,
        losses={"outer": (convection(1e7, T_melt - 100.0),)},
        material=plain_material(2500.0, by_hand("specific heat", 1000.0), by_hand("conductivity", 200.0)),
        table=EnthalpyTable(H, T),
        tolerance=0.05,
    )
    history = run(problem.setup())
    melt_left = (history.enthalpy[-1] - H[1]) / (H[2] - H[1])
    solid = float(np.sum(np.clip(1.0 - melt_left, 0.0, 1.0) * np.diff(mesh.edges)))
    assert solid == pytest.approx(scale * np.sqrt(time), rel=5e-3)


@pytest.mark.parametrize(
    ("time", "surface", "centre"),
    [(120.0, 173.4033827, 187.4676371), (600.0, 376.6121347, 407.9566359)],
)
def test_th_15_source_switched_on_with_convection(time: float, surface: float, centre: float) -> None:
    # TH-15 (eigenfunction series): Q 1e7 W/m3, R 20 mm, h 250 W/(m2 K); rises above the surroundings.
    mesh = cylinder(uniform_edges(0.0, 0.02, CELLS), 0.1)
    problem = Problem(
        mesh,
        (heating(time),),
        source=uniform_source(mesh, 1e7),
        losses={"outer": (convection(250.0, 293.15),)},
    )
    history = run(problem.setup())
    assert last_of(history, "surface") - 293.15 == pytest.approx(surface, rel=1e-3)
    assert last_of(history, "core") - 293.15 == pytest.approx(centre, rel=1e-3)
