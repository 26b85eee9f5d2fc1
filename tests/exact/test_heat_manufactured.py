"""Order of accuracy with k(T) and c(T) by a manufactured solution, in space and in time.

T = A + B e^{-t/tau} phi(r/R), phi = cos(pi s^2/3), in a bar: zero slope at the axis, a finite flux at the surface. With
k = k0 + k1 T and rho c = c0 + c1 T (T in °C) the source is q = rho c dT/dt - div(k grad T), and the surface loss is the
flux -k dT/dr at r = R, which there is a function of the surface temperature alone. All derivatives by hand; one test
confirms them by differences.
"""

import numpy as np
import pytest
from tools import ZERO, Clock, observed_order, uniform_edges

from thermal.conduction.assemble import EnthalpyTable
from thermal.crosscheck.problem import FluxLaw, PrescribedSource, Problem, heating
from thermal.geometry.shapes import cylinder
from thermal.interfaces import Array, Real
from thermal.setup import Setup
from thermal.stepper import Hottest, Moment, Stepper

R, A, B, TAU = 0.03, 600.0, 300.0, 25.0
K0, K1 = 50.0, -0.02
C0, C1 = 3.5e6, 1500.0


def shape(r: Array) -> tuple[Array, Array, Array]:
    """phi, d phi/dr and (1/r) d/dr (r d phi/dr)."""
    a = np.pi / (3.0 * R**2)
    u = a * r**2
    return np.cos(u), -2.0 * a * r * np.sin(u), -4.0 * a * (np.sin(u) + u * np.cos(u))


def solution(r: Array, t: float) -> Array:
    """T [°C]."""
    return np.asarray(A + B * np.exp(-t / TAU) * shape(r)[0])


def source(r: Array, t: float) -> Array:
    """q [W/m3]."""
    E = B * np.exp(-t / TAU)
    phi, slope, laplace = shape(r)
    T = A + E * phi
    return np.asarray(-(C0 + C1 * T) * E * phi / TAU - (K0 + K1 * T) * E * laplace - K1 * (E * slope) ** 2)


def loss(T_surface: Real) -> tuple[Real, Real]:
    """-k dT/dr at r = R as a function of the surface temperature [K], and its slope."""
    phi, slope, _ = (float(each[0]) for each in shape(np.array([R])))
    h = -slope / phi
    T = T_surface - ZERO
    k = K0 + K1 * T
    return h * k * (T - A), h * (k + K1 * (T - A))


TIME = 20.0


def setup(cells: int) -> Setup:
    mesh = cylinder(uniform_edges(0.0, R, cells), 0.1)
    T = np.linspace(300.0, 1200.0, 20001)
    return Problem(
        mesh,
        (heating(TIME, control=Clock()),),
        losses={"outer": (FluxLaw("surface", loss),)},
        source=PrescribedSource(mesh, lambda T_cells, t: source(mesh.r, t)),
        conductivity=lambda T_cells: K0 + K1 * (T_cells - ZERO),
        table=EnthalpyTable(C0 * T + 0.5 * C1 * T**2, T + ZERO),
    ).setup()


def marched(made: Setup, steps: int) -> Moment:
    """From the cell values of the solution to TIME in equal steps, without error control."""
    mesh, table = made.section.mesh, made.section.table
    stepper = Stepper(made, made.stages[0], Hottest({"outer": 0.0}, np.zeros(mesh.r.size)))
    now = stepper.moment(table.enthalpy(solution(mesh.r, 0.0) + ZERO), np.zeros(2), None)
    for _ in range(steps):
        _, now = stepper.try_step(now, TIME / steps)
    assert now.memory[0] == pytest.approx(TIME, rel=1e-12)
    return now


def test_the_source_belongs_to_the_solution() -> None:
    r, t, dr, dt = np.array([0.004, 0.012, 0.026]), 10.0, 1e-5, 1e-3

    def flow(at: Array) -> Array:
        slope = (solution(at + dr / 2, t) - solution(at - dr / 2, t)) / dr
        return at * (K0 + K1 * solution(at, t)) * slope

    storage = (C0 + C1 * solution(r, t)) * (solution(r, t + dt) - solution(r, t - dt)) / (2.0 * dt)
    divergence = (flow(r + dr / 2) - flow(r - dr / 2)) / (r * dr)
    assert source(r, t) == pytest.approx(storage - divergence, rel=1e-4)


def test_second_order_in_space() -> None:
    # In 200 steps: the error in time is a thousandth of the one of the finest grid.
    cells = [10, 20, 40, 80]
    errors: dict[str, list[float]] = {"cells": [], "surface": [], "core": []}
    for n in cells:
        made = setup(n)
        end, r = marched(made, 200), made.section.mesh.r
        errors["cells"].append(float(np.max(np.abs(end.extended[1:-1] - ZERO - solution(r, TIME)))))
        errors["surface"].append(abs(float(end.extended[-1] - ZERO - solution(np.array([R]), TIME)[0])))
        errors["core"].append(abs(float(end.extended[0] - ZERO - solution(np.zeros(1), TIME)[0])))
    for name, found in errors.items():
        assert 1.9 < observed_order([1.0 / n for n in cells], found) < 2.1, name
        assert found[-1] < 0.02, name


def test_third_order_in_time() -> None:
    # The same grid throughout, against 640 steps.
    made = setup(20)
    exact = marched(made, 640).extended
    steps = [10, 20, 40, 80]
    errors = [float(np.max(np.abs(marched(made, n).extended - exact))) for n in steps]
    assert 2.7 < observed_order([1.0 / n for n in steps], errors) < 3.3
