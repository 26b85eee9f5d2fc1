"""A section of a workpiece on FiPy: its own grid, enthalpy, steps, surface temperatures and energy accounts.

Only conduction, storage and losses: the heat comes from outside, the flux of a loss from the laws of the run.
"""

import os
import warnings
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np

from materials.material import Material
from thermal.crosscheck.recorded_heat import RecordedHeat
from thermal.errors import NoConvergence, ThermalError
from thermal.geometry.mesh import Mesh
from thermal.interfaces import Array, BoundaryLoss

CELLS = 200
CELLS_IN_HEAT = 12.0
"""Cells in the depth that takes most of the heat. Measured on a 60 mm bar of C45 at 1 kHz: twice as many cells move a
reading by 0.05 K at most, how the heat of one cell of the run is spread within it by 0.3 K."""
ENTHALPY_STEP = 0.02
"""Spacing of the enthalpy table [K]."""
SETTLED = 1e-3
"""A step is solved once no cell moves by more than this [K] from one sweep to the next."""
SWEEPS_AT_MOST = 60
SURFACE_SETTLED = 1e-9
"""The same for the surface temperature [K] within a sweep."""

Losses = dict[str, tuple[BoundaryLoss, ...]]


def import_fipy() -> Any:
    """FiPy with the solvers of SciPy.

    Raises
    ------
    ThermalError : it is not installed.
    """
    # FiPy would take PETSc or Trilinos where they are installed; their tolerances mean something else.
    os.environ.setdefault("FIPY_SOLVERS", "scipy")
    try:
        with warnings.catch_warnings():
            # FiPy reaches into numpy.core; of no interest to who runs a case.
            warnings.simplefilter("ignore", DeprecationWarning)
            import fipy
    except ImportError:
        raise ThermalError(
            "the second engine is FiPy, which is not installed here: pip install fipy (or the extra 'second' here)"
        ) from None
    return fipy


def own_edges(inner: float, outer: float, depth: float) -> Array:
    """Cell faces (CELLS + 1,) [m], depth growing as sinh: CELLS_IN_HEAT cells in the given depth [m]."""
    section = outer - inner
    wanted = min(depth / CELLS_IN_HEAT, section / CELLS) / section
    low, high = 1e-6, 30.0
    for _ in range(60):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if np.sinh(middle / CELLS) / np.sinh(middle) > wanted else (low, middle)
    share = np.sinh(low * np.arange(CELLS + 1) / CELLS) / np.sinh(low)
    edges = outer - section * share[::-1]
    edges[0], edges[-1] = inner, outer
    return np.asarray(edges)


@dataclass(frozen=True)
class March:
    """One stage: times (p,) [s], surface, core and mean (p, 3) [K], sweeps in all and the most in one step."""

    time: Array
    readings: Array
    sweeps: int
    most_sweeps: int


class FipyBar:
    """A section that marches stage by stage with implicit Euler.

    Parameters
    ----------
    mesh : of the run, for shape and outer sizes only ; material : its density, conductivity, specific heat and
    transformations ; T_initial : [K] ; depth : [m] that takes most of the heat.

    Each step is solved by sweeps: the slope of the enthalpy at the last sweep's temperature is the coefficient of the
    transient term, what it leaves of the true enthalpy change goes to the right, and the temperature after a sweep is
    that of the enthalpy it found. (A coefficient that FiPy may difference itself would be wrong by hundreds of kelvin;
    the chord between old and new temperature gives the same answer in twice the sweeps.) The slope of the losses rides
    on the same coefficient.
    """

    def __init__(self, mesh: Mesh, material: Material, T_initial: float, depth: float) -> None:
        fipy = import_fipy()
        self.edges = own_edges(float(mesh.edges[0]), float(mesh.edges[-1]), depth)
        width = np.diff(self.edges)
        if mesh.kind == "cylindrical":
            self._grid = fipy.CylindricalGrid1D(dr=width, origin=(self.edges[0],))
            whole, outer, bore = 2.0 * np.pi * mesh.length, self.edges[-1], self.edges[0]
        else:
            self._grid = fipy.Grid1D(dx=width)
            whole, outer, bore = 2.0 * mesh.width * mesh.length, 1.0, 0.0
        self.volume: Array = whole * np.array(self._grid.cellVolumes)
        # Face -> cell behind it and area; of the faces every cell shows, the area per volume.
        self._surfaces = {"outer": (-1, whole * outer), "bore": (0, whole * bore)}
        self._rings = {"ends": 2.0 / mesh.length}
        if mesh.kind == "planar":
            self._rings["edges"] = 2.0 / mesh.width
        self._gap = {"outer": 0.5 * width[-1], "bore": 0.5 * width[0]}
        self._is_tube = mesh.kind == "cylindrical" and self.edges[0] > 0.0
        centre = np.array(self._grid.cellCenters.value)[0]
        self._to_axis = centre[0] ** 2 / (centre[1] ** 2 - centre[0] ** 2)

        self._conductivity = material.conductivity
        heat_capacity, caloric = material.specific_heat, material.caloric
        self._T = np.arange(caloric.T_nodes[0], caloric.T_nodes[-1], ENTHALPY_STEP)
        c = heat_capacity(np.clip(self._T, heat_capacity.T_min, heat_capacity.T_max))
        h = np.concatenate([[0.0], np.cumsum(0.5 * (c[1:] + c[:-1]) * np.diff(self._T))])
        for change in caloric.transitions:
            h += change.heat * change.done(self._T)
        self._H = material.density * h
        self._slope = np.diff(self._H) / np.diff(self._T)

        self._unknown = fipy.CellVariable(mesh=self._grid, value=T_initial, hasOld=True)
        self._capacity, self._right = fipy.CellVariable(mesh=self._grid), fipy.CellVariable(mesh=self._grid)
        self._k = fipy.FaceVariable(mesh=self._grid)
        self._equation = fipy.TransientTerm(coeff=self._capacity) == fipy.DiffusionTerm(coeff=self._k) + self._right
        # At its usual tolerance the solver leaves small steps unsolved and the field freezes.
        self._solver = fipy.LinearLUSolver(tolerance=1e-13)

        self.T: Array = np.full(CELLS, T_initial)
        self.H: Array = np.interp(self.T, self._T, self._H)
        self._H_start = self.H
        self._skin = {"outer": T_initial, "bore": T_initial}
        self._hottest_skin = dict(self._skin)
        self._hottest = self.T
        self.absorbed = self.lost = 0.0

    @property
    def stored(self) -> float:
        """Heat stored since the start [J]."""
        return float(self.volume @ (self.H - self._H_start))

    @property
    def closure(self) -> float:
        """|stored + lost - absorbed| over the largest of the three."""
        size = max(abs(self.stored), abs(self.lost), abs(self.absorbed))
        return abs(self.stored + self.lost - self.absorbed) / size if size > 0.0 else 0.0

    def march(
        self, losses: Losses, heat: RecordedHeat, times: Array, on_step: Callable[[int], None], untouched: bool
    ) -> March:
        """March through one stage.

        losses : face -> losses ; heat : on the own cells ; times : (p,) [s] of the steps, from start to end of the
        stage ; on_step : told the number of every step ; untouched : nothing has flowed yet.

        Raises
        ------
        NoConvergence : a step takes more sweeps than allowed.
        """
        if not untouched:
            self._losses(losses)
        readings = [self._readings()]
        brought, trend = heat.until(float(times[0])), np.zeros(CELLS)
        sweeps = most = 0
        for number, (start, end) in enumerate(zip(times[:-1].tolist(), times[1:].tolist(), strict=True), start=1):
            step, by_now = end - start, heat.until(end)
            before = self.H
            taken = self._step(losses, (by_now - brought) / (step * self.volume), step, before + step * trend)
            self.absorbed += float((by_now - brought).sum())
            self.lost += step * float(self.volume @ self._losses(losses)[0])
            brought, trend = by_now, (self.H - before) / step
            for name, T in self._skin.items():
                self._hottest_skin[name] = max(self._hottest_skin[name], T)
            self._hottest = np.maximum(self._hottest, self.T)
            readings.append(self._readings())
            sweeps, most = sweeps + taken, max(most, taken)
            on_step(number)
        return March(times, np.array(readings), sweeps, most)

    def _step(self, losses: Losses, heat: Array, step: float, guess: Array) -> int:
        """One implicit step from the present state with heat (CELLS,) [W/m3]; returns the sweeps it took."""
        T_old, H_old = self.T, self.H
        self._unknown.setValue(T_old)
        self._unknown.updateOld()
        H, T = guess, np.interp(guess, self._H, self._T)
        for sweep in range(1, SWEEPS_AT_MOST + 1):
            self.T = T
            lost, lost_slope = self._losses(losses)
            slope = self._slope[np.clip(((T - self._T[0]) / ENTHALPY_STEP).astype(int), 0, self._slope.size - 1)]
            self._capacity.setValue(slope + step * lost_slope)
            self._right.setValue(heat - lost + lost_slope * (T - T_old) - (H - H_old - slope * (T - T_old)) / step)
            between = np.concatenate([T[:1], 0.5 * (T[:-1] + T[1:]), T[-1:]])
            self._k.setValue(self._conductivity(between))
            self._unknown.setValue(T)
            self._equation.sweep(var=self._unknown, dt=step, solver=self._solver)
            H = H + slope * (np.array(self._unknown.value) - T)
            T, last = np.interp(H, self._H, self._T), T
            if np.abs(T - last).max() < SETTLED:
                self.T, self.H = T, H
                return sweep
        raise NoConvergence(
            f"the second engine did not solve a step of {step:.3g} s within {SWEEPS_AT_MOST} sweeps "
            f"(hottest cell {T.max():.1f} K)"
        )

    def _losses(self, losses: Losses) -> tuple[Array, Array]:
        """Loss per volume (CELLS,) [W/m3] at the present temperatures and its slope [W/(m3 K)]."""
        lost, slope = np.zeros(CELLS), np.zeros(CELLS)
        for name, of_face in losses.items():
            if name in self._rings:
                for loss in of_face:
                    q, dq = loss.flux(self.T, self._hottest)
                    lost += self._rings[name] * q
                    slope += self._rings[name] * dq
            else:
                cell, area = self._surfaces[name]
                flux, steepness = self._through_skin(name, of_face)
                lost[cell] += flux * area / self.volume[cell]
                slope[cell] += steepness * area / self.volume[cell]
        return lost, slope

    def _through_skin(self, name: str, losses: tuple[BoundaryLoss, ...]) -> tuple[float, float]:
        """Flux through the half cell under a surface [W/m2] and its slope with the cell's temperature.

        The surface temperature is where the half cell carries what the surface loses, by Newton's method.
        """
        T_cell = float(self.T[self._surfaces[name][0]])
        conductance = float(self._conductivity(np.array([T_cell]))[0]) / self._gap[name]
        T = self._skin[name]
        for _ in range(SWEEPS_AT_MOST):
            fluxes = [loss.flux(T, self._hottest_skin[name]) for loss in losses]
            q, dq = sum(each for each, _ in fluxes), sum(each for _, each in fluxes)
            change = (conductance * (T_cell - T) - q) / (conductance + dq)
            T += change
            if abs(change) < SURFACE_SETTLED:
                break
        self._skin[name] = T
        return q, dq * conductance / (conductance + dq)

    def _readings(self) -> tuple[float, float, float]:
        """Surface, core and mean [K]."""
        core = self._skin["bore"] if self._is_tube else self.T[0] + self._to_axis * (self.T[0] - self.T[1])
        return self._skin["outer"], float(core), float(self.volume @ self.T / self.volume.sum())
