"""Time, steps and error of the reference problems, beside what one would write with SciPy; run it as a script.

Error: largest deviation of surface and core from a run at 1 mK over the whole history. Times are of this machine: read
the ratios.
"""

import time
from collections.abc import Callable

import numpy as np
from scipy.integrate import solve_ivp

from thermal.constants import STEFAN_BOLTZMANN
from thermal.crosscheck.reference_problems import STEEL, T_START, bar, largest_error, p1, p1s
from thermal.interfaces import Array
from thermal.loop import run
from thermal.setup import Setup

TOLERANCES = (0.03, 0.1, 0.3, 1.0)


def best_of(repeats: int, work: Callable[[], object]) -> float:
    """Shortest of some runs [ms], so that other work on the machine counts least."""
    times = []
    for _ in range(repeats):
        began = time.perf_counter()
        work()
        times.append(time.perf_counter() - began)
    return 1e3 * min(times)


def plain_rates(setup: Setup) -> Callable[[float, Array], Array]:
    """The usual right-hand side: temperature as the unknown, source solved in it."""
    mesh, section = setup.section.mesh, setup.section
    density = STEEL.density

    def rates(_: float, T: Array) -> Array:
        k = section.conductivity(T)
        flow = section.conductances(k) * (T[:-1] - T[1:])
        net = mesh.volume * setup.source.at(T)(100e3 / np.sqrt(2.0), 3e3, None).heat
        net[:-1] -= flow
        net[1:] += flow
        loss = 0.8 * STEFAN_BOLTZMANN * (T[-1] ** 4 - T_START**4) + 10.0 * (T[-1] - T_START)
        net[-1] -= loss * mesh.faces["outer"].area[0]
        return np.asarray(net / (mesh.volume * density * STEEL.specific_heat(T)))

    return rates


def main() -> None:
    """Print the table."""
    cells = bar().r.size
    for name, problem in (("P1s", p1s), ("P1", p1)):
        reference = run(problem(1e-3))
        rivals = {}
        for rtol in (1e-3, 1e-4):
            rates = plain_rates(problem(0.1))
            span = (0.0, float(reference.time[-1]))

            def integrate(rates=rates, span=span, rtol=rtol):
                return solve_ivp(rates, span, np.full(cells, T_START), method="BDF", rtol=rtol, atol=1e3 * rtol)

            rivals[rtol] = best_of(1, integrate)
            core = integrate().y[0]
            off = abs(float(core[-1]) - float(reference.T[-1, 0]))
            print(f"{name}  solve_ivp BDF, rtol {rtol:g}:  {rivals[rtol]:8.1f} ms   core at the end off by {off:.2f} K")
        for tolerance in TOLERANCES:
            history = run(problem(tolerance))
            spent = best_of(5, lambda problem=problem, tolerance=tolerance: run(problem(tolerance)))
            print(
                f"{name}  tolerance {tolerance:4.2f} K:  {spent:8.1f} ms   {history.steps:4d} steps, "
                f"{history.rejected} rejected   error {largest_error(history, problem(1e-3), reference):.3f} K   "
                f"{rivals[1e-4] / spent:.1f} times as fast as BDF at rtol 1e-4"
            )


if __name__ == "__main__":
    main()
