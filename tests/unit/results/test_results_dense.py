from dataclasses import replace

import numpy as np
import pytest

from thermal.results.dense import POWERS, cubic, sample

X = np.array([0.0, 0.1, 0.5, 0.6, 2.0, 5.0])
AT = np.linspace(0.0, 5.0, 101)


def parabola(x):
    return 3.0 - 2.0 * x + 0.7 * x**2


def test_a_parabola_is_met_exactly_up_to_both_ends():
    np.testing.assert_allclose(cubic(X, parabola(X), AT), parabola(AT), rtol=0, atol=1e-13)


def test_a_cubic_function_is_not_met_exactly():
    assert np.abs(cubic(X, X**3, AT) - AT**3).max() > 1e-3


def test_columns_are_interpolated_one_by_one():
    y = np.stack([parabola(X), np.exp(X)], axis=1)
    both = cubic(X, y, AT)
    np.testing.assert_array_equal(both[:, 0], cubic(X, y[:, 0], AT))
    np.testing.assert_array_equal(both[:, 1], cubic(X, y[:, 1], AT))


def test_it_is_linear_in_the_data():
    a, b = np.sin(X), np.exp(X)
    np.testing.assert_allclose(cubic(X, 2.0 * a - b, AT), 2.0 * cubic(X, a, AT) - cubic(X, b, AT), rtol=0, atol=1e-12)


def test_two_points_give_a_straight_line_and_one_a_constant():
    np.testing.assert_allclose(cubic(np.array([1.0, 3.0]), np.array([5.0, 9.0]), np.array([1.0, 2.5])), [5.0, 8.0])
    np.testing.assert_array_equal(cubic(np.array([1.0]), np.array([[5.0, 6.0]]), np.array([1.0])), [[5.0, 6.0]])


def test_error_falls_with_the_third_power_of_the_spacing():
    at = np.linspace(0.0, 3.0, 400)

    def worst(points):
        x = np.linspace(0.0, 3.0, points)
        return np.abs(cubic(x, np.sin(2.0 * x), at) - np.sin(2.0 * at)).max()

    assert np.log2(worst(21) / worst(41)) > 2.7


@pytest.mark.parametrize("kind", ["heater", "tube", "plate"])
def test_it_passes_through_the_step_points(run_of, kind):
    setup, _, history = run_of(kind)
    found = sample(setup, history, history.stage, history.time)
    np.testing.assert_allclose(found.extended[:, 1:-1], history.T, rtol=0, atol=1e-9)
    for name, series in history.readings.items():
        np.testing.assert_allclose(found.readings[name], series, rtol=0, atol=1e-9)
    for name in POWERS:
        np.testing.assert_allclose(found.series[name], getattr(history, name), rtol=1e-12)


def test_a_stage_boundary_keeps_its_two_sides_apart(run_of):
    setup, _, history = run_of("heater")
    boundary = history.stages[0].end
    both = sample(setup, history, [0, 1], [boundary, boundary])
    np.testing.assert_allclose(both.series["absorbed_power"], [800.0, 0.0], rtol=1e-5)
    np.testing.assert_array_equal(both.extended[0, 1:-1], both.extended[1, 1:-1])


def test_the_values_of_one_stage_do_not_depend_on_the_next(run_of):
    setup, _, history = run_of("heater")
    end = history.stages[0].end
    moments = np.linspace(end - 3.0, end, 20)
    alone = history.stage == 0
    cut = thinned(history, alone)
    whole = sample(setup, history, np.zeros(20), moments)
    np.testing.assert_array_equal(sample(setup, cut, np.zeros(20), moments).extended, whole.extended)


def test_the_accounts_close_between_the_steps(run_of):
    setup, _, history = run_of("tube")
    moments = np.linspace(0.0, history.stages[0].end, 333)
    energy = sample(setup, history, np.zeros(333), moments).energy
    lost = sum(series for name, series in energy.items() if name.startswith("loss: "))
    residual = energy["stored"] + lost - energy["absorbed"]
    assert np.abs(residual).max() < 1e-11 * energy["absorbed"].max()


def test_stored_energy_belongs_to_the_temperatures(run_of):
    setup, _, history = run_of("heater")
    moments = np.linspace(0.0, history.stages[0].end, 50)
    found = sample(setup, history, np.zeros(50), moments)
    table, volume = setup.section.table, setup.section.mesh.volume
    H = table.enthalpy(found.extended[:, 1:-1])
    stored = (H - table.enthalpy(np.array([setup.T_initial]))) @ volume
    np.testing.assert_allclose(found.energy["stored"], stored, rtol=0, atol=1e-9 * stored.max())


@pytest.mark.parametrize(("kind", "worst"), [("heater", 1.0), ("tube", 1.5), ("plate", 0.7)])
def test_half_of_the_steps_are_enough_for_the_curves(run_of, kind, worst):
    """Every other step left out: largest error of a temperature measured as 0.5, 0.8 and 0.4 K."""
    setup, _, history = run_of(kind)
    keep = np.zeros(history.time.size, dtype=bool)
    for number in np.unique(history.stage):
        steps = np.flatnonzero(history.stage == number)
        keep[steps[::2]] = keep[steps[-1]] = True
    half = sample(setup, thinned(history, keep), history.stage, history.time)
    off = max(np.abs(half.readings[name] - history.readings[name]).max() for name in ("surface", "core", "mean"))
    assert 0.0 < off < worst


@pytest.mark.parametrize(("stage", "time"), [(0, -0.1), (0, 1e4), (1, 0.0), (7, 1.0)])
def test_a_moment_outside_its_stage_is_refused(run_of, stage, time):
    setup, _, history = run_of("heater")
    with pytest.raises(ValueError, match=f"outside stage {stage}"):
        sample(setup, history, [stage], [time])


def thinned(history, keep):
    """The history with some of its steps only."""
    return replace(
        history,
        time=history.time[keep],
        stage=history.stage[keep],
        T=history.T[keep],
        enthalpy=history.enthalpy[keep],
        readings={name: series[keep] for name, series in history.readings.items()},
        energy={name: series[keep] for name, series in history.energy.items()},
        **{name: getattr(history, name)[keep] for name in POWERS},
    )
