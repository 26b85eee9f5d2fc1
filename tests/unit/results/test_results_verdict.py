import re

import pytest

from thermal.results.verdict import hertz, power, seconds, sentence, spans_in_words

ALUMINIUM = {"workpiece__material": "aluminium-6082", "workpiece__surface": "oxidised"}


def told(run, **expected):
    setup, _, history = run
    if "status" in expected:
        assert history.status == expected["status"]
    return sentence(setup, history)


def test_target_met_names_time_hottest_point_and_energy(run_of):
    run = run_of("tube")
    text = told(run, status="target")
    end = run[2].stages[0].end
    assert text.startswith(f"Reaches 900 °C in the core after {end:.1f} s; hottest point ")
    assert re.search(r"; \d+ kWh/t at the supply output\.$", text)
    assert "limit" not in text


def test_energy_per_tonne_is_that_of_the_supply_account(run_of):
    setup, _, history = run_of("tube")
    per_tonne = history.energy["supply"][-1] / 3.6e6 / (setup.mass / 1000.0)
    assert f"{per_tonne:.0f} kWh/t at the supply output" in sentence(setup, history)


def test_without_a_coil_the_energy_is_the_absorbed_one_and_says_so(run_of):
    setup, _, history = run_of("heater")
    per_tonne = history.energy["absorbed"][-1] / 3.6e6 / (setup.mass / 1000.0)
    assert f"{per_tonne:.0f} kWh/t absorbed (without a coil" in sentence(setup, history)


def test_the_limit_that_bound_is_named_with_its_times(run_of):
    run = run_of("tube", supply__max_current="400 A", schedule__0__until='{core = "600 °C"}')
    start, end = run[2].stages[0].limits["current"][0]
    assert f"the current limit bound from {seconds(start)} to {seconds(end)}" in told(run)


def test_a_stall_is_explained(run_of):
    run = run_of(
        "heater", schedule__0__drive='{absorbed_power = "60 W", frequency = "100 kHz"}', schedule__0__longest="9000 s"
    )
    text = told(run, status="cannot_reach")
    settled = run[2].readings["surface"][-1] - 273.15
    assert text.startswith(
        f"Cannot reach 850 °C at the surface: it settles at {settled:.0f} °C, where the drive leaves 60 W against "
    )


def test_a_stall_at_a_limit_names_the_limit(run_of):
    run = run_of("tube", supply__max_current="150 A", schedule__0__longest="9000 s")
    text = told(run, status="cannot_reach")
    assert re.match(
        r"Cannot reach 900 °C in the core: it settles at \d+ °C, where the current limit leaves .* of loss;", text
    )


def test_too_short_a_time_tells_how_far_it_came(run_of):
    run = run_of("heater", schedule__0__longest="10 s")
    surface = run[2].stages[0].end, run[2].readings["surface"][run[2].stage == 0][-1] - 273.15
    assert told(run, status="cannot_reach").startswith(
        f"Not reached within 10 s (longest): surface at {surface[1]:.0f} °C (850 °C wanted);"
    )


def test_only_the_targets_that_do_not_hold_are_missing(run_of):
    run = run_of("heater", schedule__0__until='{surface = "300 °C", spread = "0.5 K"}', schedule__0__longest="20 s")
    text = told(run, status="cannot_reach")
    assert re.match(r"Not reached within 20 s \(longest\): spread \+\d+ K \(within 0\.5 K wanted\);", text)


def test_a_passed_solidus_comes_first(run_of):
    run = run_of("heater", **ALUMINIUM, schedule__0__until='{mean = "574 °C", spread = "0.01 K"}')
    text = told(run, status="limit")
    assert re.match(
        r"The hottest point passes the solidus 575 °C at [\d.]+ s: the piece burns or melts there\. The run stops at "
        r"[\d.]+ s, where the hottest point reaches the liquidus 650 °C\. ",
        text,
    )
    assert "is not reached by then" in text


def test_no_target_tells_the_end(run_of):
    run = run_of("heater", schedule='[{stage = "transfer", duration = "5 s"}]')
    assert told(run, status="finished") == (
        "Runs to 5 s: surface 20 °C, core 20 °C; hottest point 20 °C, at the surface."
    )


def test_an_interrupted_run_says_incomplete(run_of):
    run = run_of("tube", stop_after=5.0)
    text = told(run, status="interrupted")
    assert text.startswith(f"Interrupted at {seconds(run[2].time[-1])} in the heat stage, incomplete: surface ")
    assert "Reaches" not in text


def test_a_target_that_holds_already(run_of):
    again = """[{stage = "heat", drive = {absorbed_power = "800 W", frequency = "100 kHz"}, until = {core = "200 °C"}},
        {stage = "heat", drive = {absorbed_power = "100 W", frequency = "100 kHz"}, until = {core = "150 °C"}}]"""
    text = told(run_of("heater", schedule=again), status="target")
    assert "150 °C in the core holds already when the heat 2 stage begins" in text


def test_cooling_to_a_target(run_of):
    down = """[{stage = "heat", drive = {absorbed_power = "800 W", frequency = "100 kHz"}, duration = "15 s"},
        {stage = "transfer", duration = "900 s", until = {surface = "200 °C"}}]"""
    run = run_of("heater", schedule=down)
    assert told(run).startswith(f"Cools to 200 °C at the surface after {seconds(run[2].stages[1].end)}")


@pytest.mark.parametrize(
    ("time", "text"),
    [(0.0, "0 s"), (0.2404, "240 ms"), (0.9996, "1 s"), (60.53, "60.5 s"), (60.0, "60 s"), (143.2, "143 s")],
)
def test_seconds(time, text):
    assert seconds(time) == text


def test_power():
    assert [power(60.4), power(1423.0)] == ["60.4 W", "1.42 kW"]


def test_many_spans_are_summed():
    assert spans_in_words([(0.0, 1.0), (2.0, 4.0), (6.0, 7.0)]) == "for 4 s in all between 0 s and 7 s"
    assert spans_in_words([(30.0, 30.001)]) == "for a moment at 30 s"


def test_a_target_met_beyond_the_solidus_is_no_success(run_of):
    run = run_of(
        "heater",
        **ALUMINIUM,
        schedule__0__drive='{absorbed_power = "4 kW", frequency = "100 kHz"}',
        schedule__0__until='{core = "570 °C"}',
    )
    text = told(run, status="limit")
    met = seconds(run[2].stages[0].end)
    assert run[2].stages[0].reason == "target"
    assert re.match(
        rf"The hottest point passes the solidus 575 °C at [\d.]+ m?s, before the core reaches 570 °C \({met}\): "
        r"the piece burns or melts there\. Hottest point ",
        text,
    )
    assert "Reaches" not in text


@pytest.mark.parametrize(("value", "text"), [(800.0, "800 Hz"), (1e3, "1 kHz"), (2.5e5, "250 kHz")])
def test_hertz(value, text):
    assert hertz(value) == text
