"""What the benchmark measures, and when it compares."""

import numpy as np
import pytest

from thermal.crosscheck import rivals, timing
from thermal.crosscheck.bench import OWN, Measured, comparison, own_run
from thermal.crosscheck.reference_problems import LOSSES, STEEL, T_START, bar, largest_error, p1, p1s
from thermal.crosscheck.rivals import Outcome, PlainBar, by_cvode, by_fipy, by_scipy, deviation, loss_flux
from thermal.crosscheck.timing import Effort, Entrant, Timing, time_all
from thermal.loop import run


def row(solver, error, seconds, problem="P1", setting="x"):
    return Measured(problem, solver, setting, Timing(seconds, 3), error, 10, 40)


@pytest.mark.parametrize(
    ("error", "setting", "ratio"),
    [(0.1, "0.1 K", 25.0), (0.19, "0.1 K", 25.0), (0.06, "0.1 K", 25.0), (0.5, "1 K", 50.0), (1.99, "1 K", 50.0)],
)
def test_a_rival_is_compared_with_the_own_run_of_the_nearest_error(error, setting, ratio):
    own = [row(OWN, 0.1, 0.2, setting="0.1 K"), row(OWN, 1.0, 0.1, setting="1 K")]
    nearest, found = comparison(row("BDF", error, 5.0), [*own, row(OWN, error, 0.001, problem="P1s")])
    assert (nearest.setting, found) == (setting, pytest.approx(ratio))


@pytest.mark.parametrize("error", [0.049, 0.25, 0.4, 2.01, 30.0])
def test_nothing_is_compared_beyond_a_factor_of_two(error):
    own = [row(OWN, 0.1, 0.2), row(OWN, 1.0, 0.1)]
    assert comparison(row("BDF", error, 5.0), own) is None


def test_everything_has_its_turn_and_the_slow_one_gives_up_its_later_ones(monkeypatch):
    clock = 0.0
    called = []
    monkeypatch.setattr(timing, "CLOCK", lambda: clock)

    def entrant(name, times):
        left = iter(times)

        def work():
            nonlocal clock
            called.append(name)
            clock += next(left)
            return Outcome(np.zeros(1), 0, len(called), lambda: (np.zeros(1), np.zeros(1)))

        return Entrant(name, "", work)

    told = []
    timed = time_all([entrant("a", [3.0, 1.0, 2.0]), entrant("b", [6.0])], Effort(3, 5.0), told.append)
    assert called == ["a", "b", "a", "a"]
    assert [best for best, _ in timed] == [Timing(1.0, 3), Timing(6.0, 1)]
    assert [outcome.evaluations for _, outcome in timed] == [1, 2]
    assert told == ["a, ", "b, "]


def test_the_error_is_that_of_the_tests_of_accuracy():
    setup = p1s(0.1)
    exact = run(setup)
    history = run(p1s(1.0))
    found = own_run(p1s(1.0))
    assert deviation(found, setup, exact) == largest_error(history, setup, exact)
    assert (found.steps, found.evaluations) == (history.steps, history.field_solves)


def test_rivals_lose_what_the_problem_loses():
    for T in (T_START, 700.0, 1500.0):
        assert loss_flux(T) == pytest.approx(sum(loss.flux(T, T)[0] for loss in LOSSES["outer"]), rel=1e-12, abs=1e-9)


def test_rivals_integrate_the_equations_of_p1s():
    # 0.02 K: both tabulate the heat of the steel, the own solver to 0.01 K.
    setup = p1s(1e-3)
    exact = run(setup)
    found = by_scipy(PlainBar(setup, steady=True), float(exact.time[-1]), "LSODA", 1e-7, banded=True)
    assert deviation(found, setup, exact) < 0.02
    assert found.evaluations > found.steps == found.time.size - 1


@pytest.mark.slow
def test_rivals_integrate_the_equations_of_p1():
    setup = p1(1e-3)
    exact = run(setup)
    found = by_scipy(PlainBar(setup, steady=False), 600.0, "LSODA", 1e-7, banded=True)
    assert deviation(found, setup, exact) < 0.02


def test_every_evaluation_counts_also_those_for_a_jacobian():
    equations = PlainBar(p1s(0.1), steady=True)
    full, banded = (by_scipy(equations, 5.0, "LSODA", 1e-4, banded=banded) for banded in (False, True))
    assert full.steps == pytest.approx(banded.steps, rel=0.2)
    assert full.evaluations > banded.evaluations + 2 * equations.mesh.r.size
    assert full.evaluations + banded.evaluations == equations.evaluations


def test_cvode_integrates_the_same():
    pytest.importorskip("sksundae")
    equations = PlainBar(p1s(0.1), steady=True)
    by_lsoda = by_scipy(equations, 100.0, "LSODA", 1e-8, banded=True)
    found = by_cvode(equations, 100.0, 1e-6)
    for series, other in zip(found.readings(), by_lsoda.readings(), strict=True):
        assert series[-1] == pytest.approx(other[-1], abs=0.02)


def test_the_fipy_script_solves_the_same():
    pytest.importorskip("fipy")
    equations = PlainBar(p1s(0.1), steady=True)
    by_lsoda = by_scipy(equations, 2.0, "LSODA", 1e-6, banded=True)
    found = by_fipy(equations, 2.0)
    assert found.time[-1] == pytest.approx(2.0)
    assert found.evaluations >= found.steps
    for series, other in zip(found.readings(), by_lsoda.readings(), strict=True):
        assert series[-1] == pytest.approx(other[-1], abs=0.5)


def test_the_fipy_script_keeps_the_heat_of_the_peak(monkeypatch):
    # Heated alike everywhere, the core knows nothing of the surface for ten seconds: it holds what was put in. The peak
    # is worth more than 100 K; steps of 20 K instead of 1.5 K leave an error of 2.4 K.
    pytest.importorskip("fipy")
    from thermal.crosscheck import fipy_script

    monkeypatch.setattr(fipy_script, "RISE", 20.0)
    heat, end = 5e8, 10.0
    _, T, solved = fipy_script.heat_bar(bar().edges, lambda T: np.full_like(T, heat), end)
    exact = STEEL.caloric.temperature(STEEL.caloric.enthalpy(T_START) + heat * end / STEEL.density)
    assert exact > 1100.0
    assert T[-1, 0] == pytest.approx(float(exact), abs=5.0)
    assert solved < 3 * T.shape[0]


def test_libraries_that_are_not_installed_are_left_out(monkeypatch):
    equations = PlainBar(p1s(0.1), steady=True)
    monkeypatch.setattr(rivals, "find_spec", lambda module: None)
    assert rivals.missing_libraries() == ("FiPy", "scikit-sundae")
    assert {entrant.solver.split()[0] for entrant in rivals.rivals(equations, 1.0, quick=False)} == {"SciPy"}
    monkeypatch.setattr(rivals, "find_spec", lambda module: module)
    assert {entrant.solver.split()[0] for entrant in rivals.rivals(equations, 1.0, quick=False)} == {
        "SciPy",
        "CVODE",
        "FiPy",
    }
