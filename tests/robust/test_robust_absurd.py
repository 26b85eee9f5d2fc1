"""Cases that are well formed but absurd are refused with a sentence, or run to an answer."""

import random
from pathlib import Path

import pytest

from materials.errors import MaterialError
from thermal.build import build
from thermal.case import from_text
from thermal.case.starter import starter
from thermal.errors import ThermalError
from thermal.loop import run
from thermal.results.verdict import sentence

ANSWERED = (0, 3)

REFUSED = {
    "a bar of a kilometre": ("heater", {"workpiece.length": "1 km", "workpiece.diameter": "1 km"}, "unknown unit 'km'"),
    "a bar of a thousand metres": ("heater", {"workpiece.length": "1000 m"}, "1 um to 100 m can be computed"),
    "a bar of a nanometre": ("heater", {"workpiece.diameter": "1e-6 mm"}, "1 um to 100 m can be computed"),
    "a terawatt": ("heater", {"schedule.0.drive.absorbed_power": "1e12 W"}, "1 mW to 1000 MW can be computed"),
    "a terawatt of supply": ("billet", {"supply.power": "1e9 kW"}, "1 mW to 1000 MW can be computed"),
    "a millihertz": ("heater", {"schedule.0.drive.frequency": "0.001 Hz"}, "1 Hz to 100 MHz can be computed"),
    "a terahertz": ("billet", {"supply.frequency": "1e6 MHz"}, "1 Hz to 100 MHz can be computed"),
    "a million turns": ("billet", {"coil.turns": "1000000"}, "from 0.1 to 10000"),
    "a coil as thin as nothing": ("billet", {"coil.tube": "1e-300 mm"}, "1 um to 100 m can be computed"),
    "a coil of ice": ("billet", {"coil.temperature": "0 K"}, "no temperature of a water-cooled coil"),
    "a coil of steam": ("billet", {"coil.temperature": "201 °C"}, "no temperature of a water-cooled coil"),
    "gas faster than sound": ("heater", {"surroundings.speed": "1e6 m/s"}, "0 m/s to 100 m/s can be computed"),
    "surroundings of a star": ("heater", {"surroundings.temperature": "6000 K"}, "0 K to 4000 K can be computed"),
    "a century": ("heater", {"schedule.1.duration": "876600 h"}, "1 us to 10000 h can be computed"),
    "tolerance of nothing": ("heater", {"numerics": '{ tolerance = "1e-9 K" }'}, "0.0001 K to 10 K can be computed"),
    "too fine a grid": ("heater", {"numerics": "{ refinement = 1000 }"}, "a whole number from 1 to 8"),
    "a field beyond all magnets": (
        "heater",
        {"schedule.0.drive": '{ surface_field = "1e9 A/m", frequency = "1 kHz" }'},
        "1 A/m to 10000 kA/m can be computed",
    ),
    "rows without end": ("heater", {"output": '{ interval = "1 us" }'}, "at most 100000 are kept"),
    "a reading in the air": ("heater", {"reading": '[{ name = "a", depth = "99 m" }]'}, "is deeper than the core"),
    "a plate thinner than its reading is deep": ("plate", {"workpiece.thickness": "1 um"}, "is deeper than the core"),
}

# Refused by what the equations find, not by a range: code 4, one sentence.
WITHOUT_RESULT = {
    "a breath": ("heater", {"surroundings.speed": "1e-6 m/s"}, "the correlation holds for 0.2 or more"),
    "a room at absolute zero": ("heater", {"surroundings.temperature": "0 K"}, "is tabulated from -23"),
    "a hall of a bar": (
        "heater",
        {"workpiece.diameter": "60 m", "workpiece.length": "99 m", "schedule.0.drive.absorbed_power": "1000 MW"},
        "the correlation holds for 1e-05 to 1e+12",
    ),
    "a kilowatt in a speck": (
        "heater",
        {"workpiece.diameter": "1 um", "workpiece.length": "1 um"},
        "the time step fell below a nanosecond",
    ),
}

COMPUTED = {
    "one hertz": ("heater", {"schedule.0.drive.frequency": "1 Hz"}),
    "a hundred megahertz": ("heater", {"schedule.0.drive.frequency": "100 MHz"}),
    "thinner than a hundredth of the skin depth": (
        "heater",
        {"workpiece.diameter": "10 um", "schedule.0.drive.absorbed_power": "1 W"},
    ),
    "a bar as long as a ship": ("heater", {"workpiece.length": "100 m", "schedule.0.longest": "1 h"}),
    "a gigawatt of supply": ("billet", {"supply.power": "1000 MW", "schedule.0.drive.supply_power": "1000 MW"}),
    "a tenth of a turn": ("billet", {"coil.turns": "0.1"}),
    "ten thousand turns": ("billet", {"coil.turns": "10000", "coil.tube": "20 um"}),
    "hardly any current": ("billet", {"supply.max_current": "1 mA", "schedule.0.longest": "10 s"}),
    "hardly any voltage": ("billet", {"supply.max_voltage": "1 mV", "schedule.0.longest": "10 s"}),
    "leads of a kiloohm": ("billet", {"coil.leads_resistance": "1 kohm", "schedule.0.longest": "10 s"}),
    "a gap of a hair": ("billet", {"lining.thickness": "14.9999 mm", "schedule.0.longest": "20 s"}),
    "a jet of boiling metal": ("heater", {"surroundings": '{ h = "1000 kW/(m2 K)" }'}),
    "a field of twelve tesla": (
        "heater",
        {"schedule.0.drive": '{ surface_field = "10000 kA/m", frequency = "1 kHz" }'},
    ),
    "a field of the earth": ("heater", {"schedule.0.drive": '{ surface_field = "1 A/m", frequency = "1 kHz" }'}),
    "a microsecond": ("heater", {"schedule.0.longest": "1 us"}),
    "a year": ("heater", {"schedule.0.drive.absorbed_power": "50 W", "schedule.0.longest": "8760 h"}),
    "a foil of a tube": (
        "tube",
        {"workpiece.wall": "50 um", "schedule.0.longest": "5 s", "schedule.1.duration": "1 s"},
    ),
    "a ring": ("tube", {"workpiece.length": "0.1 mm", "schedule.0.longest": "5 s"}),
    "a hairless bright surface": ("heater", {"workpiece.surface": "bright", "surroundings": '{ h = "0 W/(m2 K)" }'}),
}


def _settings(changes):
    return [word for path, value in changes.items() for word in ("--set", f"{path}={value}")]


@pytest.mark.parametrize("name", REFUSED)
def test_an_absurd_case_is_refused(command, name):
    kind, changes, words = REFUSED[name]
    Path("case.toml").write_text(starter(kind), encoding="utf-8")
    lines = command.refused("check", "case.toml", *_settings(changes))
    assert any(words in line for line in lines), lines


@pytest.mark.parametrize("name", WITHOUT_RESULT)
def test_an_absurd_case_may_end_without_a_result(command, name):
    kind, changes, words = WITHOUT_RESULT[name]
    Path("case.toml").write_text(starter(kind), encoding="utf-8")
    ended = command.call("run", "case.toml", *_settings(changes))
    assert (ended.exit_code, ended.stdout) == (4, "")
    assert words in ended.stderr and ended.stderr.count("\n") == 1
    assert not Path("results").exists()


@pytest.mark.slow
@pytest.mark.parametrize("name", COMPUTED)
def test_an_absurd_case_may_be_computed(command, name):
    kind, changes = COMPUTED[name]
    Path("case.toml").write_text(starter(kind), encoding="utf-8")
    tolerance = {} if kind == "billet" else {"numerics": '{ tolerance = "3 K" }'}
    ended = command.call("run", "case.toml", "--quiet", *_settings({**tolerance, **changes}))
    assert ended.exit_code in ANSWERED, ended.exception
    assert ended.stderr == ""
    assert ended.stdout.count("\n") == 1
    assert Path("results/case/summary.json").exists()


def _drawn(draw):
    """A case whose every figure is drawn from its whole range, on logarithms."""

    def size(low, high):
        return low * (high / low) ** draw.random()

    across, frequency = size(1e-6, 100.0), size(1.0, 1e8)
    shape = draw.choice(["cylinder", "tube", "plate"])
    if shape == "cylinder":
        piece = f'diameter = "{across} m"'
    elif shape == "tube":
        piece = (
            f'outer_diameter = "{across} m"\nwall = "{max(1e-6, across * draw.choice([5e-4, 0.05, 0.25, 0.495]))} m"'
        )
    else:
        piece = f'thickness = "{across} m"\nwidth = "{min(100.0, across * size(1.0, 1e3))} m"'
    length = size(1e-6, 100.0)
    text = f"""format = 1
[workpiece]
shape = "{shape}"
{piece}
length = "{length} m"
material = "{draw.choice(["steel-c45", "copper", "aluminium-6082", "iron"])}"
emissivity = {draw.choice([0.001, 0.5, 1])}
axis = "{draw.choice(["horizontal", "vertical"])}"
neighbours = "{draw.choice(["none", "touching"])}"
[surroundings]
{draw.choice(['h = "15 W/(m2 K)"', 'h = "1e6 W/(m2 K)"', 'speed = "0 m/s"', 'speed = "1 m/s"', 'speed = "100 m/s"'])}
[numerics]
tolerance = "10 K"
"""
    drives = [f'absorbed_power = "{size(1e-3, 1e9)} W"', f'surface_field = "{size(1.0, 1e7)} A/m"']
    if draw.random() < 0.6:
        turns, tube, room = draw.choice([0.1, 1, 7.5, 100, 10000]), size(1e-6, 0.1), across * size(1.0001, 50.0)
        opening = f'opening = "{room} m x {room} m"' if shape == "plate" else f'inner_diameter = "{room} m"'
        long = max(turns * tube, length * size(0.01, 10.0))
        text += f'[coil]\nturns = {turns}\n{opening}\nlength = "{long} m"\ntube = "{tube} m"\n'
        text += f'[supply]\npower = "{size(1e-3, 1e9)} W"\nfrequency = "{frequency} Hz"\n'
        drives += [f'supply_power = "{size(1e-3, 1e9)} W"', f'coil_current = "{size(1e-3, 1e6)} A"']
        given = draw.choice(drives)
    else:
        given = f'{draw.choice(drives)}, frequency = "{frequency} Hz"'
    longest = size(1e-6, 1e6)
    end = f'until = {{ core = "400 °C" }}\nlongest = "{longest} s"\n'
    return f'{text}[[schedule]]\nstage = "heat"\ndrive = {{ {given} }}\n{end}'


def _outcome(draw, compute):
    """What becomes of a drawn case; anything but an answer or a sentence gets through and fails the test."""
    try:
        setup = build(from_text(_drawn(draw), "."))
        return sentence(setup, run(setup)) if compute else "built"
    except (ThermalError, MaterialError) as error:
        assert str(error)
        return "refused"


def test_cases_from_the_whole_range_are_built_or_refused():
    draw = random.Random(11)
    outcomes = [_outcome(draw, compute=False) for _ in range(80)]
    assert 30 < outcomes.count("built") < 80


@pytest.mark.slow
def test_cases_from_the_whole_range_run_or_are_refused():
    draw = random.Random(12)
    outcomes = [_outcome(draw, compute=True) for _ in range(60)]
    assert 20 < len(outcomes) - outcomes.count("refused")


def test_an_interval_finer_than_the_run_turned_out_is_widened(command, monkeypatch):
    monkeypatch.setattr("thermal.report.curves.MOST_ROWS", 500)
    Path("case.toml").write_text(starter("heater"), encoding="utf-8")
    changes = {"output": '{ interval = "5 ms" }', "numerics": '{ tolerance = "3 K" }'}
    ended = command.call("run", "case.toml", "--quiet", *_settings(changes))
    assert ended.exit_code == 0
    rows = Path("results/case/curves.csv").read_text(encoding="utf-8").count("\n")
    assert 400 < rows < 510
