"""Peak temperature against long runs in time, stalls, and what passes them."""

from dataclasses import replace

import numpy as np
import pytest

from materials import get
from thermal.case import from_text, with_changes
from thermal.case.starter import starter
from thermal.control import FixedDrive
from thermal.errors import CaseError
from thermal.interfaces import Demand
from thermal.loop import run
from thermal.questions.peak_temperature import PeakTemperature, peak_temperature


def coil_case(diameter, bore, frequency, drive, material="steel-c45", extra="", h=20):
    return from_text(
        f"""
format = 1
[workpiece]
shape = "cylinder"
diameter = "{diameter} mm"
length = "100 mm"
material = "{material}"
emissivity = 0.8
initial = "20 °C"
[coil]
turns = 12
inner_diameter = "{bore} mm"
length = "120 mm"
tube = "6 mm"
[supply]
power = "200 kW"
frequency = "{frequency} kHz"
{extra}
[surroundings]
temperature = "20 °C"
h = "{h} W/(m2 K)"
[[schedule]]
stage = "heat"
drive = {{ {drive} }}
duration = "100 s"
""",
        ".",
    )


TUBE = from_text(starter("tube"), ".", {"schedule.0.drive": '{ coil_current = "150 A" }'})
PLATE = from_text(starter("plate"), ".", {"schedule.0.drive": '{ coil_current = "500 A" }'})
CASES = {
    "thin rod below Curie": coil_case(10, 30, 30, 'coil_current = "60 A"'),
    "thin rod at Curie": coil_case(10, 30, 30, 'coil_current = "150 A"'),
    "thin rod above": coil_case(10, 30, 30, 'coil_current = "250 A"'),
    "stall, two stable states": coil_case(20, 24, 3, 'coil_voltage = "6.5 V"'),
    "Curie radius in the section": coil_case(40, 46, 1, 'coil_voltage = "20 V"', h=300),
    "limited current": coil_case(40, 46, 10, 'supply_power = "20 kW"', extra='max_current = "150 A"'),
    "copper": coil_case(30, 40, 10, 'supply_power = "2 kW"', material="copper"),
    "stainless": coil_case(30, 40, 10, 'supply_power = "2 kW"', material="stainless-304"),
    "tube": TUBE,
    "plate": PLATE,
}


def asked(name) -> PeakTemperature:
    answer = peak_temperature(CASES[name])
    assert answer.met
    return answer.result


@pytest.mark.slow
@pytest.mark.parametrize("name", list(CASES))
def test_the_same_as_a_long_run(name):
    answer = peak_temperature(CASES[name])
    rest = answer.result.reached.at
    stage = replace(answer.setup.stages[0], stop=None, longest=6.0 * answer.result.time)
    history = run(replace(answer.setup, stages=(stage,)))
    for reading in ("surface", "core", "mean"):
        assert history.readings[reading][-1] == pytest.approx(rest.readings[reading], abs=1.0)


@pytest.mark.slow
@pytest.mark.parametrize("name", ["stall, two stable states", "Curie radius in the section"])
def test_stable_states_hold_and_unstable_ones_part(name):
    answer = peak_temperature(CASES[name])
    states = answer.result.curve.states
    assert [state.stable for state in states] == [i % 2 == 0 for i in range(len(states))]
    assert len(states) >= 3
    for state in states:
        ends = []
        for push in (-3.0, 3.0):
            # A start at one temperature throughout; near enough to a state as flat as these.
            start = replace(answer.setup, T_initial=state.at.mean + push)
            stage = replace(start.stages[0], stop=None, longest=3000.0)
            ends.append(float(run(replace(start, stages=(stage,))).readings["mean"][-1]))
        drift = np.abs(np.array(ends) - state.at.mean)
        if state.stable:
            assert drift.max() < 1.0
        else:
            assert drift.max() > 3.0


def test_a_state_with_the_curie_radius_inside():
    low, middle, high = asked("Curie radius in the section").curve.states
    curie = get("steel-c45").curie_temperature
    assert low.at.T.max() < middle.at.T.min() < curie < middle.at.T.max() < high.at.T.max()
    assert middle.at.T.max() - curie > 10.0


def test_the_power_that_passes_the_stall():
    case = CASES["stall, two stable states"]
    stalled = peak_temperature(case)
    passing = stalled.values["passing_absorbed_power_W"]
    first, _, second = stalled.result.curve.states
    low, high = (peak_temperature(case, absorbed_power=share * passing) for share in (0.97, 1.03))
    assert first.at.mean < low.result.reached.at.mean
    unstable = stalled.result.curve.states[1].at.mean
    assert low.result.reached.at.mean < unstable < high.result.reached.at.mean
    assert second.at.mean > unstable


def test_more_power_is_hotter():
    case = from_text(starter("heater"), ".")
    found = [peak_temperature(case, absorbed_power=watts).values["peak_surface_C"] for watts in (50.0, 100.0, 200.0)]
    assert found == sorted(found)
    assert found[2] - found[0] > 100.0


def test_more_than_it_can_lose_melts():
    answer = peak_temperature(from_text(starter("heater"), "."), absorbed_power=5e3)
    assert not answer.met
    assert "melts unless the power is taken back" in answer.sentence


def test_a_hot_piece_cools_to_the_same_state():
    case = CASES["thin rod below Curie"]
    cold, hot = peak_temperature(case), peak_temperature(with_changes(case, {"workpiece.initial": "1000 °C"}))
    assert hot.values["peak_surface_C"] == pytest.approx(cold.values["peak_surface_C"], abs=0.01)
    assert cold.result.time is not None
    assert hot.result.time is None
    assert hot.sentence.startswith("Comes to")


def test_oxide_from_a_hotter_past_stays():
    # The emissivity of an oxidised surface rises with temperature and does not come back.
    cold = peak_temperature(from_text(starter("heater"), "."), absorbed_power=100.0)
    start = {"workpiece.initial": "1000 °C", "schedule.0.until": '{ surface = "1200 °C" }'}
    hot = peak_temperature(from_text(starter("heater"), ".", start), absorbed_power=100.0)
    assert 2.0 < cold.values["peak_surface_C"] - hot.values["peak_surface_C"] < 30.0


def test_without_a_supply_there_is_no_supply_power():
    with pytest.raises(CaseError, match="only an absorbed power"):
        peak_temperature(from_text(starter("heater"), "."), supply_power=200.0)


def test_both_powers_are_refused():
    with pytest.raises(CaseError, match="not both"):
        peak_temperature(TUBE, supply_power=200.0, absorbed_power=100.0)


def test_absorbed_power_means_absorbed_power():
    answer = peak_temperature(TUBE, absorbed_power=700.0)
    assert answer.result.reached.at.field.power == pytest.approx(700.0, rel=1e-5)
    assert isinstance(answer.setup.stages[0].control, FixedDrive)
    assert answer.setup.stages[0].control.fixed == Demand("absorbed_power", 700.0)
