"""The heat solver against FiPy, an unrelated finite-volume library, on the same bar.

Constant properties, a source that decays inwards, convection at the surface. FiPy steps with implicit Euler at two step
lengths; the two are extrapolated to zero, as its error is of first order in the step.
"""

import numpy as np
import pytest
from tools import ZERO

from materials.property import Property
from materials.source import Source
from thermal.crosscheck.problem import PrescribedSource, Problem, convection, heating, plain_material
from thermal.geometry.grading import graded_edges
from thermal.geometry.shapes import cylinder
from thermal.loop import run

RADIUS, LENGTH, END = 0.025, 0.1, 60.0
DENSITY, CAPACITY, CONDUCTIVITY = 7800.0, 650.0, 30.0
H_SURFACE, T_START = 250.0, ZERO + 20.0
MESH = cylinder(graded_edges(0.0, RADIUS, 2e-3), LENGTH)
HEAT = 5e7 * np.exp(-(RADIUS - MESH.r) / 3e-3)


def fipy_temperatures(steps):
    """Surface and core [K] at the end, by FiPy."""
    import fipy

    mesh = fipy.CylindricalGrid1D(dr=np.diff(MESH.edges))
    T = fipy.CellVariable(mesh=mesh, value=T_START)
    source = fipy.CellVariable(mesh=mesh, value=HEAT)
    half = 0.5 * float(np.diff(MESH.edges)[-1])
    through = 1.0 / (1.0 / H_SURFACE + half / CONDUCTIVITY)
    # The flux h (T - T0) through the last half cell, as a source in that cell (faceGrad is not needed here).
    loss = (mesh.facesRight * mesh.faceNormals * through).divergence
    equation = fipy.TransientTerm(coeff=DENSITY * CAPACITY) == (
        fipy.DiffusionTerm(coeff=CONDUCTIVITY) + source - fipy.ImplicitSourceTerm(coeff=loss) + loss * T_START
    )
    solver = fipy.LinearLUSolver(tolerance=1e-13)
    for _ in range(steps):
        equation.solve(var=T, dt=END / steps, solver=solver)
    cells = np.array(T.value)
    surface = cells[-1] - through * (cells[-1] - T_START) * half / CONDUCTIVITY
    return np.array([surface, cells[0]])


def steel(name, value, unit):
    return Property(
        name,
        np.array([200.0, 2000.0]),
        np.array([value, value]),
        "linear",
        "hold",
        0.0,
        unit,
        Source("common-practice", "steel-like round figure", "assumed"),
    )


def test_bar_with_source_and_convection():
    history = run(
        Problem(
            MESH,
            (heating(END),),
            T_initial=T_START,
            losses={"outer": (convection(H_SURFACE, T_START),)},
            source=PrescribedSource(MESH, lambda T, excitation: HEAT),
            material=plain_material(
                DENSITY,
                steel("specific heat", CAPACITY, "J/(kg K)"),
                steel("conductivity", CONDUCTIVITY, "W/(m K)"),
            ),
            tolerance=0.01,
        ).setup()
    )
    own = np.array([history.readings["surface"][-1], history.T[-1, 0]])
    coarse, middle, fine = (fipy_temperatures(steps) for steps in (75, 150, 300))
    extrapolated = 2.0 * fine - middle
    assert own - T_START == pytest.approx(extrapolated - T_START, rel=1e-3)
    assert np.all(np.abs((coarse - extrapolated) / (fine - extrapolated)) > 3.0)
