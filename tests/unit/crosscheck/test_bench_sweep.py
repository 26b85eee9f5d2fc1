"""What the sweep and the questions of the benchmark measure."""

import math

import numpy as np
import pytest

from thermal.case import from_text
from thermal.crosscheck import bench_sweep
from thermal.crosscheck.bench_questions import time_questions
from thermal.crosscheck.bench_sweep import LoopOf, OwnSweep, SweepBench, errors_of, extrapolated, measure_sweep
from thermal.crosscheck.reference_problems import largest_error, p1
from thermal.crosscheck.rivals import PlainBar, by_scipy
from thermal.crosscheck.timing import Effort, nearest_in_error
from thermal.crosscheck.variants import VARIANTS, Variant, run_variant, variant_problem
from thermal.loop import run

P1 = Variant(100e3, 3e3, 0.06)
ROD = """
format = 1
workpiece = { shape = "cylinder", diameter = "20 mm", length = "100 mm", material = "copper", emissivity = 0.1 }
[[schedule]]
stage = "heat"
drive = { absorbed_power = "1 kW", frequency = "10 kHz" }
duration = "10 s"
"""


def test_p1_is_among_its_variants():
    assert P1 in VARIANTS
    assert len(VARIANTS) == 12
    here, there = run(variant_problem(P1, 1.0)), run(p1(1.0))
    for name in ("surface", "core"):
        np.testing.assert_allclose(here.readings[name], there.readings[name], rtol=1e-12)


def test_a_variant_differs_by_what_it_says():
    thin = variant_problem(Variant(80e3, 5e3, 0.05), 1.0)
    assert thin.section.mesh.edges[-1] == pytest.approx(0.025)
    assert thin.frequency == 5e3
    assert run_variant(P1, 3.0).surface[-1] > run_variant(Variant(80e3, 3e3, 0.06), 3.0).surface[-1] + 100.0


def test_errors_of_a_sweep_are_those_of_the_reference_problems():
    exact = run(variant_problem(P1, bench_sweep.REFERENCE))
    rough, fine = run_variant(P1, 3.0), run_variant(P1, 0.3)
    (far, close) = errors_of(P1, [rough, fine])
    setup = variant_problem(P1, bench_sweep.REFERENCE)
    assert far == largest_error(run(variant_problem(P1, 3.0)), setup, exact)
    assert close < 0.2 * far


def test_defaults_are_those_of_solve_ivp():
    equations = PlainBar(variant_problem(P1, 1.0), steady=False)
    told = by_scipy(equations, 2.0, "BDF", 1e-3)
    default = by_scipy(equations, 2.0, "BDF", None)
    assert default.steps > told.steps  # atol of 1e-6 K instead of 1 K


@pytest.mark.parametrize(
    ("error", "place"), [(1.0, 0), (1.9, 0), (0.51, 0), (3.1, 1), (9.9, 1), (2.2, None), (11.0, None)]
)
def test_times_are_compared_within_a_factor_of_two(error, place):
    assert nearest_in_error(error, [1.0, 5.0]) == place


def test_a_loop_is_held_against_the_sweep_of_the_nearest_error():
    own = tuple(OwnSweep(tolerance, 1.0, 2.0, 1.0, error, 10, 40) for tolerance, error in ((1.0, 1.5), (3.0, 5.5)))
    swept = SweepBench(12, 2, own, ())
    assert swept.against(LoopOf("BDF", "", 9.0, 9.0, 8.0, 1, 1)) is own[1]
    assert swept.against(LoopOf("BDF", "", 9.0, 9.0, 0.7, 1, 1)) is None
    assert extrapolated("FiPy", "x", 3.0, 4.0, 12) == LoopOf("FiPy", "x", 36.0, 36.0, 4.0, None, None)


@pytest.mark.slow
def test_a_sweep_of_two_in_two_processes(monkeypatch):
    monkeypatch.setattr(bench_sweep, "usable_cores", lambda: 2)
    told = []
    found = measure_sweep(1, True, told.append, VARIANTS[:2])
    assert (found.runs, found.processes) == (2, 2)
    assert [each.tolerance for each in found.own] == [0.3, 1.0, 3.0]
    assert found.own[0].error < found.own[1].error < found.own[2].error
    assert found.own[0].steps == sum(run(variant_problem(each, 0.3)).steps for each in VARIANTS[:2])
    for each in found.own:
        assert 0.0 < each.seconds < each.with_start
        assert each.processor > 0.0
    assert [(each.solver, each.setting) for each in found.rivals] == [
        ("SciPy BDF", "defaults"),
        ("SciPy LSODA", "defaults"),
    ]
    assert told[-1] == "sweep: reference"


def test_questions_are_counted_in_runs_of_the_case():
    aimed = ROD.replace('duration = "10 s"', 'until = { core = "300 °C" }\nlongest = "100 s"')
    found = time_questions(from_text(aimed, "."), Effort(1, 1.0), lambda text: None)
    assert [each.question for each in found] == ["time", "peak", "compare", "frequency"]
    for each in found:
        assert each.refusal is None
        assert 0.0 < each.runs < math.inf


def test_questions_a_case_cannot_stand_say_why():
    told = []
    time, peak, compared, frequency = time_questions(from_text(ROD, "."), Effort(1, 1.0), told.append)
    assert time.runs is time.timing is frequency.runs is None
    assert "asks for no temperature" in time.refusal
    assert "asks for no temperature" in frequency.refusal
    assert peak.refusal is compared.refusal is None
    assert [each.partition(",")[0] for each in told] == ["one run", "peak", "compare"]
