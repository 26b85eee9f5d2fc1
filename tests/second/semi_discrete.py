"""The heat equation of a section as ordinary differential equations, written a second time for an integrator of SciPy.

Volumetric enthalpy is the unknown, on the cells and tables of a Setup of a solid bar.
"""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from scipy.integrate import solve_ivp
from scipy.sparse import csc_matrix, diags

from thermal.interfaces import Array
from thermal.results.history import History
from thermal.setup import Setup


@dataclass(frozen=True)
class Equations:
    """A solid bar with losses at its outer surface.

    excitation : of the source ; k_factor : on the conductivity ; losing : whether the losses act. The last two are
    there to be falsified.
    """

    setup: Setup
    excitation: float = 1.0
    k_factor: float = 1.0
    losing: bool = True

    def rates(self, _: float, H: Array) -> Array:
        """dH/dt (n,) [W/m3]."""
        source = self.setup.source.at(self.setup.section.table.temperature(H))
        return source(self.excitation, self.setup.frequency, None).heat + self.conducted(H)

    def conducted(self, H: Array) -> Array:
        """What conduction and losses bring (n,) [W/m3]."""
        mesh = self.setup.section.mesh
        T, flow = self._flows(H)
        lost = self._surface(T, flow)[1] * 2.0 * np.pi * mesh.edges[-1] * mesh.length
        return -np.diff(flow, prepend=0.0, append=lost) / mesh.volume

    def jacobian(self, _: float, H: Array) -> csc_matrix:
        """Of conduction and losses, by differences; the source is left out, its matrix would be full."""
        n = H.size
        base, step = self.conducted(H), 1e3
        bands = np.zeros((3, n))
        for first in range(3):
            moved = np.zeros(n)
            moved[first::3] = step
            slope = np.pad((self.conducted(H + moved) - base) / step, 1)
            for column in range(first, n, 3):
                bands[:, column] = slope[column : column + 3]
        return diags([bands[0, 1:], bands[1], bands[2, :-1]], [1, 0, -1], format="csc")

    def surface_and_core(self, H: Array) -> Array:
        """Both [K]: the parabolas through the outer cell and around the axis."""
        r = self.setup.section.mesh.r
        T, flow = self._flows(H)
        core = T[0] - (T[1] - T[0]) * r[0] ** 2 / (r[1] ** 2 - r[0] ** 2)
        return np.array([self._surface(T, flow)[0], core])

    def _flows(self, H: Array) -> tuple[Array, Array]:
        """T (n,) and the flow through the links (n - 1,) [W] outwards."""
        mesh = self.setup.section.mesh
        T = self.setup.section.table.temperature(H)
        half, k = 0.5 * np.diff(mesh.edges), self._k(T)
        area = 2.0 * np.pi * mesh.edges[1:-1] * mesh.length
        return T, area * (T[:-1] - T[1:]) / (half[:-1] / k[:-1] + half[1:] / k[1:])

    def _surface(self, T: Array, flow: Array) -> tuple[float, float]:
        """Surface temperature [K] and flux out of it [W/m2], solved to round-off."""
        mesh = self.setup.section.mesh
        half = 0.5 * float(mesh.edges[-1] - mesh.edges[-2])
        q_in = float(flow[-1]) / (2.0 * np.pi * mesh.edges[-2] * mesh.length)
        resistance = half / float(self._k(T[-1:])[0])
        losses = self.setup.losses["coil"]["outer"] if self.losing else ()
        surface, q = float(T[-1]), 0.0
        for _ in range(8):
            fluxes = [loss.flux(surface, surface) for loss in losses]
            q, slope = sum(each for each, _ in fluxes), sum(each for _, each in fluxes)
            excess = surface - float(T[-1]) + resistance * (0.75 * q + 0.25 * q_in)
            surface -= excess / (1.0 + 0.75 * resistance * slope)
        return surface, q

    def _k(self, T: Array) -> Array:
        return self.k_factor * self.setup.section.conductivity(T)


Solution = Callable[[Array], Array]
"""Times (s,) [s] -> surface and core (s, 2) [K]."""


def radau(equations: Equations, end: float, error: float = 1e-3) -> Solution:
    """Surface and core by Radau, with an error of so many kelvin a step outside transformations."""
    setup = equations.setup
    start = setup.section.table.enthalpy(np.full(setup.section.mesh.r.size, setup.T_initial))
    per_kelvin = float(np.ptp(setup.section.table.enthalpy(setup.T_initial + np.array([0.0, 1.0]))))
    solved = solve_ivp(
        equations.rates,
        (0.0, end),
        start,
        method="Radau",
        dense_output=True,
        rtol=1e-12,
        atol=error * per_kelvin,
        jac=equations.jacobian,
    )
    assert solved.success, solved.message
    return lambda time: np.array([equations.surface_and_core(H) for H in solved.sol(time).T])


def error_of(history: History, exact: Solution, slack: float = 0.0) -> float:
    """Largest distance of surface and core [K] from the exact curves, at the steps of a run.

    slack : relative; the curves are taken over the span of time (1 +- slack) t.
    """
    own = np.stack([history.readings["surface"], history.readings["core"]], axis=1)[1:]
    time = history.time[1:]
    around = np.stack([exact(time * (1.0 + share)) for share in (-slack, 0.0, slack)])
    return float(np.maximum(around.min(axis=0) - own, own - around.max(axis=0)).max())
