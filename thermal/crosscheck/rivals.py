"""The reference bar integrated by general libraries, to hold the speed of the own solver against.

The integrators of SciPy and SUNDIALS get what one writes for them with care: temperature as the unknown, cp(T) from a
table, everything in NumPy. They integrate the very equations of the own solver: its mesh, its conductances, its
parabola for the surface temperature, its field solver; so their error is that of stepping through time. FiPy gets the
script beside this file.
"""

from collections.abc import Callable
from dataclasses import dataclass
from functools import partial
from importlib.util import find_spec

import numpy as np
from scipy.integrate import solve_ivp

from thermal.constants import STEFAN_BOLTZMANN
from thermal.crosscheck.reference_problems import STEEL, T_START
from thermal.crosscheck.timing import Entrant
from thermal.errors import NoConvergence
from thermal.interfaces import Array
from thermal.results.dense import sample
from thermal.results.history import History
from thermal.setup import Setup

EMISSIVITY, CONVECTION = 0.8, 10.0
NODES_PER_NODE = 4
"""Nodes of cp(T) for one of T(H), or the heat in the peak is 0.1 K too large."""
SCALE = 1e3
"""Absolute tolerance over the relative one [K]: what is allowed is rtol (T + 1000 K)."""
FIPY = "FiPy script"
OPTIONAL = {"FiPy": "fipy", "scikit-sundae": "sksundae"}
"""Libraries that are not always installed: name for people -> module."""


@dataclass(frozen=True)
class Outcome:
    """What an integration leaves.

    time : (s,) [s] ; steps, evaluations of the right-hand side : counts ; readings : surface and core, each (s,) [K].
    """

    time: Array
    steps: int
    evaluations: int
    readings: Callable[[], tuple[Array, Array]]


def deviation(outcome: Outcome, setup: Setup, exact: History) -> float:
    """Largest deviation of surface and core [K] from an exact run of setup, at the steps of the outcome."""
    # A run that ends on a temperature may pass the end of the exact one by milliseconds.
    inside = outcome.time <= exact.time[-1]
    at = sample(setup, exact, np.zeros(int(inside.sum()), dtype=int), outcome.time[inside])
    surface, core = (series[inside] for series in outcome.readings())
    off = (np.abs(surface - at.readings["surface"]).max(), np.abs(core - at.readings["core"]).max())
    return float(max(off))


class PlainBar:
    """The equations of a reference problem in temperature, as one writes them for an integrator of others.

    steady : the heat does not depend on the temperature.
    """

    def __init__(self, setup: Setup, steady: bool) -> None:
        mesh = setup.section.mesh
        outer = mesh.faces["outer"]
        nodes = STEEL.caloric.T_nodes
        places = np.arange(NODES_PER_NODE * (nodes.size - 1) + 1) / NODES_PER_NODE
        self.mesh = mesh
        self.evaluations = 0
        self._T_nodes = np.interp(places, np.arange(nodes.size), nodes)
        self._capacity = STEEL.density * STEEL.specific_heat(self._T_nodes)
        self._conductivity = setup.section.conductivity
        assert setup.sampler.core_weights is not None
        self._core_weights = np.array(setup.sampler.core_weights)
        self._over_left = mesh.gap_left / mesh.area
        self._over_right = mesh.gap_right / mesh.area
        self._area, self._gap = float(outer.area[0]), float(outer.gap[0])
        self._excitation = setup.stages[0].control.demand({}, 0.0, np.zeros(2)).value
        self._source, self._frequency = setup.source, setup.frequency
        self._steady = self._solve_heat(np.full(mesh.r.size, T_START)) if steady else None

    def rates(self, time: float, T: Array) -> Array:
        """dT/dt (n,) [K/s]."""
        self.evaluations += 1
        flow, _, loss = self._conduct(T)
        net = self.heat(T) * self.mesh.volume
        net[:-1] -= flow
        net[1:] += flow
        net[-1] -= loss * self._area
        return np.asarray(net / (self.mesh.volume * np.interp(T, self._T_nodes, self._capacity)))

    def heat(self, T: Array) -> Array:
        """Heat (n,) [W/m3]."""
        return self._solve_heat(T) if self._steady is None else self._steady

    def outcome(self, time: Array, T: Array, evaluations: int) -> Outcome:
        """Of an integration: time (s,) [s], T (s, n) [K]."""

        def readings() -> tuple[Array, Array]:
            # Before anything has flowed the surface is as warm as the cell behind it.
            surface = np.array([T[0, -1], *(self._conduct(row)[1] for row in T[1:])])
            return surface, T[:, :2] @ self._core_weights

        return Outcome(time, time.size - 1, evaluations, readings)

    def _conduct(self, T: Array) -> tuple[Array, float, float]:
        """Flow through the links (m,) [W], surface temperature [K], loss [W/m2]."""
        k = self._conductivity(T)
        flow = (T[:-1] - T[1:]) / (self._over_left / k[:-1] + self._over_right / k[1:])
        stiffness = 0.75 * self._gap / float(k[-1])
        q_in = float(flow[-1]) / float(self.mesh.area[-1])
        surface = float(T[-1]) - stiffness * (4.0 / 3.0) * q_in
        slope = 4.0 * EMISSIVITY * STEFAN_BOLTZMANN * surface**3 + CONVECTION
        surface += stiffness * (q_in - loss_flux(surface)) / (1.0 + stiffness * slope)
        return flow, surface, loss_flux(surface)

    def _solve_heat(self, T: Array) -> Array:
        return self._source.at(T)(self._excitation, self._frequency, None).heat


def loss_flux(T_surface: float) -> float:
    """Loss [W/m2] of the reference problems."""
    return EMISSIVITY * STEFAN_BOLTZMANN * (T_surface**4 - T_START**4) + CONVECTION * (T_surface - T_START)


def by_scipy(bar: PlainBar, end: float, method: str, rtol: float | None, banded: bool = False) -> Outcome:
    """solve_ivp with its own Jacobian by differences, or told that it is tridiagonal (LSODA only).

    rtol : None leaves both tolerances to solve_ivp.
    """
    band = {"lband": 1, "uband": 1} if banded else {}
    tolerances = {} if rtol is None else {"rtol": rtol, "atol": SCALE * rtol}
    before = bar.evaluations
    start = np.full(bar.mesh.r.size, T_START)
    found = solve_ivp(bar.rates, (0.0, end), start, method=method, **tolerances, **band)
    if not found.success:
        raise NoConvergence(f"{method} at {rtol_in_words(rtol)} gave up: {found.message}")
    return bar.outcome(found.t, found.y.T, bar.evaluations - before)


def by_cvode(bar: PlainBar, end: float, rtol: float) -> Outcome:
    """CVODE of SUNDIALS: BDF with a banded Jacobian by differences."""
    from sksundae.cvode import CVODE

    def rates(time: float, T: Array, out: Array) -> None:
        out[:] = bar.rates(time, T)

    before = bar.evaluations
    solver = CVODE(rates, rtol=rtol, atol=SCALE * rtol, linsolver="band", lband=1, uband=1, max_num_steps=1_000_000)
    found = solver.solve(np.array([0.0, end]), np.full(bar.mesh.r.size, T_START))
    if not found.success:
        raise NoConvergence(f"CVODE at rtol {rtol:g} gave up: {found.message}")
    return bar.outcome(found.t, found.y, bar.evaluations - before)


def by_fipy(bar: PlainBar, end: float) -> Outcome:
    """The FiPy script."""
    from thermal.crosscheck.fipy_script import heat_bar

    return bar.outcome(*heat_bar(bar.mesh.edges, bar.heat, end))


def missing_libraries() -> tuple[str, ...]:
    """Names of the optional libraries that are not installed."""
    return tuple(name for name, module in OPTIONAL.items() if find_spec(module) is None)


def rivals(bar: PlainBar, end: float, quick: bool) -> list[Entrant[Outcome]]:
    """Everything there is to hold against, of the libraries installed; quick : solve_ivp with BDF and LSODA only."""
    found: list[Entrant[Outcome]] = []

    def add_scipy(method: str, rtols: tuple[float, ...], banded: bool = False) -> None:
        name = f"SciPy {method}{' banded' if banded else ''}"
        for rtol in rtols:
            work = partial(by_scipy, bar, end, method, rtol, banded)
            found.append(Entrant(name, rtol_in_words(rtol), work))

    fine = (1e-4, 3e-5, 1e-5, 3e-6)
    add_scipy("BDF", fine)
    add_scipy("LSODA", fine)
    add_scipy("LSODA", fine, banded=True)
    if quick:
        return found
    add_scipy("Radau", (1e-3, 1e-4))
    missing = missing_libraries()
    if "scikit-sundae" not in missing:
        for rtol in (*fine, 1e-6):
            found.append(Entrant("CVODE banded", rtol_in_words(rtol), partial(by_cvode, bar, end, rtol)))
    if "FiPy" not in missing:
        found.append(Entrant(FIPY, "1.5 K a step", partial(by_fipy, bar, end)))
    return found


def rtol_in_words(rtol: float | None) -> str:
    """A relative tolerance as the tables have it; None: left to the library."""
    return "defaults" if rtol is None else f"rtol {rtol:.0e}".replace("e-0", "e-")
