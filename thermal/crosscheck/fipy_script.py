"""Induction heating of a round steel bar, written for FiPy the way one writes it by hand.

k and cp of EN 1993-1-2:2005, 3.4.1.3 and 3.4.1.2; loss by emissivity 0.8 and 10 W/(m2 K) to 20 °C. The grid and the
heat brought in are handed over, so that this script answers for the heat equation alone.

Two traps, both silent: TransientTerm(coeff=rho*cp(T)) is differenced as d(rho cp T)/dt, which is not rho cp dT/dt, so
the heat capacity is set by hand at every sweep, as the chord of the heat content over the step; and the LU solver takes
a small right-hand side for solved, so its tolerance is set tight.
"""

from collections.abc import Callable
from typing import Any

import fipy
import numpy as np

DENSITY = 7850.0
EMISSIVITY, CONVECTION, T_AROUND = 0.8, 10.0, 293.15
STEFAN_BOLTZMANN = 5.670374419e-8

FIRST_STEP = 0.01
RISE = 1.5
"""A step is as long as heats the fastest cell by about so many kelvin: that sets the error, of first order in it."""
AGREE = 2.0
"""Sweeps of a step go on until none changes a cell by more [K]; tighter costs twice as much and gains little."""
SWEEPS_AT_MOST = 10


def conductivity(T: Any) -> Any:
    """W/(m K) at T [K]."""
    return np.where(T < 1073.15, 54.0 - 0.0333 * (T - 273.15), 27.3)


def specific_heat(T: Any) -> Any:
    """J/(kg K) at T [K]; peak of 5000 at 735 °C."""
    t = T - 273.15
    return np.select(
        [t < 600.0, t < 735.0, t < 900.0],
        [
            425.0 + 0.773 * t - 1.69e-3 * t**2 + 2.22e-6 * t**3,
            666.0 + 13002.0 / (738.0 - np.minimum(t, 735.0)),
            545.0 + 17820.0 / (np.maximum(t, 735.0) - 731.0),
        ],
        650.0,
    )


T_TABLE = np.arange(250.0, 4000.0, 0.05)
CP_TABLE = specific_heat(T_TABLE)
HEAT_TABLE = DENSITY * np.concatenate([[0.0], np.cumsum(0.5 * (CP_TABLE[1:] + CP_TABLE[:-1]) * np.diff(T_TABLE))])


def heat_content(T: Any) -> Any:
    """J/m3 at T [K]."""
    return np.interp(T, T_TABLE, HEAT_TABLE)


def heat_bar(edges: Any, heat_at: Callable[[Any], Any], end: float) -> tuple[Any, Any, int]:
    """Heat the bar from 20 °C.

    edges : (n + 1,) [m] radii of the cell faces, from 0 ; heat_at : T (n,) [K] -> heat (n,) [W/m3] ; end : [s].
    Returns the times (s,), the cell temperatures (s, n) [K] and how often the equations were solved.
    """
    mesh = fipy.CylindricalGrid1D(dr=np.diff(edges))
    T = fipy.CellVariable(mesh=mesh, value=T_AROUND, hasOld=True)
    capacity, k = fipy.CellVariable(mesh=mesh), fipy.CellVariable(mesh=mesh)
    heat, loss = fipy.CellVariable(mesh=mesh), fipy.CellVariable(mesh=mesh)
    # The loss of the surface, as a sink in the cell behind it.
    area_per_volume = float((mesh.facesRight * mesh.faceNormals).divergence.value[-1])
    half = 0.5 * float(edges[-1] - edges[-2])
    equation = fipy.TransientTerm(coeff=capacity) == (
        fipy.DiffusionTerm(coeff=k.harmonicFaceValue) + heat - fipy.ImplicitSourceTerm(coeff=loss) + loss * T_AROUND
    )
    solver = fipy.LinearLUSolver(tolerance=1e-13)

    time, step, solved = 0.0, FIRST_STEP, 0
    surface = T_AROUND
    times, temperatures = [time], [T.value.copy()]
    while time < end * (1.0 - 1e-12):
        step = min(step, end - time)
        T.updateOld()
        before = T.value.copy()
        content = heat_content(before)
        for _ in range(SWEEPS_AT_MOST):
            now = T.value.copy()
            rise = now - before
            moved = np.abs(rise) > 1e-3
            chord = (heat_content(now) - content) / np.where(moved, rise, 1.0)
            capacity.setValue(np.where(moved, chord, DENSITY * specific_heat(now)))
            k.setValue(conductivity(now))
            heat.setValue(heat_at(now))
            h = EMISSIVITY * STEFAN_BOLTZMANN * (surface**2 + T_AROUND**2) * (surface + T_AROUND) + CONVECTION
            through = 1.0 / (1.0 / h + half / float(k.value[-1]))
            loss[-1] = through * area_per_volume
            equation.solve(var=T, dt=step, solver=solver)
            solved += 1
            last = float(T.value[-1])
            surface = last - through * (last - T_AROUND) * half / float(k.value[-1])
            if np.abs(T.value - now).max() < AGREE:
                break
        time += step
        times.append(time)
        temperatures.append(T.value.copy())
        step *= min(1.5, max(0.3, RISE / np.abs(T.value - before).max()))
    return np.array(times), np.array(temperatures), solved
