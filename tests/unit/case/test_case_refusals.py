"""Every refusal with its sentence and line, on one sound case that is spoilt in one place."""

import pytest

from thermal.case import from_text
from thermal.errors import CaseError

SOUND = """\
format = 1
title = "test"
[workpiece]
shape = "cylinder"
diameter = "60 mm"
length = "200 mm"
material = "steel-c45"
emissivity = 0.8
[coil]
turns = 16
inner_diameter = "90 mm"
length = "240 mm"
tube = "12 mm"
[lining]
thickness = "8 mm"
[supply]
power = "80 kW"
frequency = "1 kHz"
[[schedule]]
stage = "heat"
drive = { supply_power = "60 kW" }
until = { core = "1150 °C" }
[[schedule]]
stage = "hold"
at = { surface = "1200 °C" }
duration = "10 s"
[[reading]]
name = "TC1"
depth = "5 mm"
"""

FREE = """\
format = 1
[workpiece]
shape = "plate"
thickness = "20 mm"
width = "100 mm"
length = "200 mm"
material = "steel-c45"
emissivity = 0.8
[[schedule]]
stage = "heat"
drive = { absorbed_power = "5 kW", frequency = "3 kHz" }
duration = "60 s"
"""


def _problems(text: str) -> tuple[str, ...]:
    with pytest.raises(CaseError) as caught:
        from_text(text, ".")
    return caught.value.problems


def _spoilt(text: str, old: str, new: str) -> str:
    assert text.count(old) == 1, f"{old!r} must stand once in the sound text"
    return text.replace(old, new)


def test_the_sound_texts_are_sound() -> None:
    assert from_text(SOUND, ".").workpiece.section == pytest.approx(0.03)
    assert from_text(FREE, ".").workpiece.section == pytest.approx(0.01)


@pytest.mark.parametrize(
    ("old", "new", "line"),
    [
        # keys and words
        ("format = 1", "format = 2", "line 1   format: 2 is not available in this version (accepted: 1)"),
        (
            "format = 1",
            "format = true",
            "line 1   format: True is not available in this version (accepted: 1)",
        ),
        ("format = 1\n", "", "format: missing, write for example format = 1"),
        ('title = "test"', "title = 7", "line 2   title: '7' is not a text, put it in quotes"),
        ("[lining]", "[linning]", "line 14  linning: unknown key, did you mean 'lining'?"),
        (
            'frequency = "',
            'frequancy = "',
            "line 18  supply.frequancy: unknown key, did you mean 'frequency'?",
        ),
        (
            "emissivity",
            "Emissivity",
            "line 8   workpiece.Emissivity: unknown key, did you mean 'emissivity'?",
        ),
        (
            "turns = 16",
            "turns = 16\nxyz = 1",
            "line 11  coil.xyz: unknown key, known here: turns, inner_diameter, opening, length, tube, wall, "
            "temperature, leads_resistance, leads_inductance",
        ),
        (
            "{ supply_power",
            "{ suply_power",
            "line 21  schedule.0.drive.suply_power (heat): unknown key, did you mean 'supply_power'?",
        ),
        (
            'depth = "5 mm"',
            'depth = "5 mm"\ndepht = "5 mm"',
            "line 30  reading.0.depht: unknown key, did you mean 'depth'?",
        ),
        (
            'duration = "10 s"',
            'duration = "10 s"\nresponce = "1 s"',
            "line 27  schedule.1.responce (hold): unknown key, did you mean 'response'?",
        ),
        (
            'length = "200 mm"\n',
            "",
            'line 3   workpiece.length: missing, write for example length = "50 mm"',
        ),
        (
            'shape = "cylinder"\n',
            "",
            'line 3   workpiece.shape: missing, write for example shape = "cylinder"',
        ),
        (
            '"cylinder"',
            '"cylindre"',
            "line 4   workpiece.shape: 'cylindre' is not a shape, did you mean 'cylinder'?",
        ),
        (
            '"cylinder"',
            '"bar"',
            "line 4   workpiece.shape: 'bar' is not a shape, known here: cylinder, tube, plate",
        ),
        (
            '"hold"',
            '"soak"',
            "line 24  schedule.1.stage: 'soak' is not a stage, did you mean 'hold'?",
        ),
        (
            'shape = "cylinder"',
            'shape = "cylinder"\nneighbours = "some"',
            "line 5   workpiece.neighbours: 'some' is not accepted (accepted: none, touching)",
        ),
        (
            'shape = "cylinder"',
            'shape = "cylinder"\naxis = "up"',
            "line 5   workpiece.axis: 'up' is not accepted (accepted: horizontal, vertical)",
        ),
        (
            '{ core = "1150 °C" }',
            '"1150 °C"',
            "line 22  schedule.0.until (heat): '1150 °C' is not a table of keys",
        ),
        # units
        ('"60 mm"', "60", 'line 5   workpiece.diameter: write the unit: "60 mm" (accepted: m, mm, in)'),
        ('"80 kW"', '"60 kHz"', "line 17  supply.power: '60 kHz' is a frequency, a power is wanted (W, kW)"),
        (
            "0.8",
            "80",
            "line 8   workpiece.emissivity: '80' is not an emissivity, it lies above 0 and up to 1",
        ),
        (
            '"1150 °C"',
            '"-300 °C"',
            "line 22  schedule.0.until.core (heat): '-300 °C' is below absolute zero (-273.15 °C)",
        ),
        ("turns = 16", "turns = 0", "line 10  coil.turns: 0 turns: the number of turns must be from 0.1 to 10000"),
        # one of several
        (
            "emissivity = 0.8\n",
            "",
            'line 3   workpiece: how it radiates is missing, write surface = "oxidised" (a state) or emissivity = 0.8',
        ),
        (
            "emissivity = 0.8",
            'emissivity = 0.8\nsurface = "oxidised"',
            "line 8   workpiece.emissivity: give surface or emissivity, not both",
        ),
        (
            'inner_diameter = "90 mm"\n',
            "",
            'line 9   coil: inner_diameter is missing (or, for a plate, opening = "120 x 40 mm")',
        ),
        (
            'inner_diameter = "90 mm"',
            'inner_diameter = "90 mm"\nopening = "90 x 90 mm"',
            "line 12  coil.opening: give inner_diameter or opening, not both",
        ),
        (
            "[supply]",
            '[surroundings]\nspeed = "1 m/s"\nh = "15 W/(m2 K)"\n[supply]',
            "line 17  surroundings.speed: h is a constant coefficient and knows no speed, leave one of them out",
        ),
        (
            "{ supply_power",
            '{ coil_current = "1 kA", supply_power',
            "line 21  schedule.0.drive (heat): both supply_power and coil_current are given, write exactly one of "
            "supply_power, absorbed_power, coil_current, coil_voltage, surface_field",
        ),
        (
            '{ supply_power = "60 kW" }',
            "{}",
            "line 21  schedule.0.drive (heat): nothing is asked for, write exactly one of "
            "supply_power, absorbed_power, coil_current, coil_voltage, surface_field",
        ),
        (
            'until = { core = "1150 °C" }\n',
            "",
            "line 19  schedule.0 (heat): it never ends, give until (with longest) or duration",
        ),
        (
            'until = { core = "1150 °C" }',
            'until = { core = "1150 °C" }\nduration = "10 s" ',
            "line 23  schedule.0.duration (heat): give until or duration, not both (longest bounds an until)",
        ),
        (
            'until = { core = "1150 °C" }',
            'longest = "20 s"\nduration = "10 s" ',
            "line 22  schedule.0.longest (heat): longest bounds an until, with a duration leave it out",
        ),
        (
            '{ core = "1150 °C" }',
            "{}",
            'line 22  schedule.0.until (heat): no target is given, write for example until = { core = "1150 °C" }',
        ),
        (
            '{ surface = "1200 °C" }',
            '{ surface = "1200 °C", core = "1190 °C" }',
            "line 25  schedule.1.at (hold): name exactly one of surface, core, mean or a reading",
        ),
        # sections against each other
        (
            '"60 mm"',
            '"90 mm"',
            "line 11  coil.inner_diameter: the coil is 90 mm across inside, the workpiece 90 mm does not fit",
        ),
        (
            '"8 mm"',
            '"15 mm"',
            "line 15  lining.thickness: leaves 60 mm across, the workpiece 60 mm does not fit (below 15 mm)",
        ),
        (
            'inner_diameter = "90 mm"',
            'opening = "90 x 90 mm"',
            "line 11  coil.opening: is for a plate, a cylinder takes inner_diameter",
        ),
        (
            'length = "240 mm"',
            'length = "190 mm"',
            "line 12  coil.length: 16 turns of 12 mm tube need 192 mm, the coil is 190 mm long",
        ),
        (
            'tube = "12 mm"',
            'tube = "12 mm"\nwall = "7 mm"',
            "line 14  coil.wall: 7 mm is more than half of the 12 mm tube",
        ),
        (
            'drive = { supply_power = "60 kW" }',
            'drive = { supply_power = "60 kW", frequency = "1 kHz" }',
            "line 21  schedule.0.drive.frequency (heat): the supply sets the frequency, leave it out here",
        ),
        (
            '{ core = "1150 °C" }',
            '{ core = "15 °C" }',
            "line 22  schedule.0.until.core (heat): 15 °C is not above the initial temperature (20 °C)",
        ),
        (
            '{ core = "1150 °C" }',
            '{ spread = "20 K" }',
            "line 22  schedule.0.until.spread (heat): holds before heating starts, add a temperature, "
            'for example core = "1150 °C"',
        ),
        (
            '{ core = "1150 °C" }',
            '{ cor = "1150 °C" }',
            "line 22  schedule.0.until.cor (heat): no such reading, did you mean 'core'?",
        ),
        (
            '{ core = "1150 °C" }',
            '{ xyz = "1150 °C" }',
            "line 22  schedule.0.until.xyz (heat): no such reading, "
            "known here: surface, core, mean, maximum, spread, TC1",
        ),
        (
            '{ surface = "1200 °C" }',
            '{ maximum = "1200 °C" }',
            "line 25  schedule.1.at.maximum (hold): cannot be held, name surface, core, mean or a reading",
        ),
        # readings
        (
            '"5 mm"',
            '"31 mm"',
            "line 29  reading.0.depth: 31 mm is deeper than the core (30 mm)",
        ),
        (
            '"TC1"',
            '"core"',
            "line 28  reading.0.name: 'core' is taken, choose another than "
            "surface, core, mean, maximum, spread, time, stage",
        ),
        (
            '"TC1"',
            '"TC 1"',
            "line 28  reading.0.name: 'TC 1' is not a name, it starts with a letter and has letters, digits, - and _",
        ),
        (
            'depth = "5 mm"',
            'depth = "5 mm"\n[[reading]]\nname = "TC1"\ndepth = "6 mm"',
            "line 31  reading.1.name: 'TC1' is there twice",
        ),
        # numerics
        (
            "[supply]",
            "[numerics]\ndimensions = 2\n[supply]",
            "line 17  numerics.dimensions: 2 is not available in this version (accepted: 1)",
        ),
        (
            "[supply]",
            "[numerics]\nrefinement = 9\n[supply]",
            "line 17  numerics.refinement: '9' is not accepted, write a whole number from 1 to 8",
        ),
    ],
)
def test_refusal(old: str, new: str, line: str) -> None:
    assert _problems(_spoilt(SOUND, old, new)) == (line,)


@pytest.mark.parametrize(
    ("old", "new", "line"),
    [
        (
            'thickness = "20 mm"',
            'thickness = "120 mm"',
            "line 4   workpiece.thickness: 120 mm is more than the width, it is the smaller of the two",
        ),
        (
            'shape = "plate"\nthickness = "20 mm"\nwidth = "100 mm"',
            'shape = "tube"\nouter_diameter = "50 mm"\nwall = "25 mm"',
            "line 5   workpiece.wall: 25 mm leaves no bore, it must be below half of the outer diameter "
            '(25 mm); a full bar is shape = "cylinder"',
        ),
        (
            "absorbed_power",
            "supply_power",
            "line 11  schedule.0.drive.supply_power (heat): needs [coil] and [supply]; without them drive with "
            "absorbed_power or surface_field",
        ),
        (
            ', frequency = "3 kHz"',
            "",
            "line 11  schedule.0.drive (heat): without a [supply] the frequency stands in the drive, "
            'add frequency = "3 kHz"',
        ),
        (
            "[[schedule]]",
            '[lining]\nthickness = "5 mm"\n[[schedule]]',
            "line 9   lining: a lining lies against the coil bore, add a [coil]",
        ),
        (
            "[[schedule]]",
            '[coil]\nturns = 5\ninner_diameter = "150 mm"\nlength = "250 mm"\ntube = "10 mm"\n[[schedule]]',
            'line 11  coil.inner_diameter: a plate takes opening = "120 x 40 mm" (width x height)',
        ),
        (
            "[[schedule]]",
            '[coil]\nturns = 5\nopening = "150 x 20 mm"\nlength = "250 mm"\ntube = "10 mm"\n[[schedule]]',
            "line 11  coil.opening: the coil is 20 mm high inside, the workpiece 20 mm does not fit",
        ),
        (
            "[[schedule]]",
            '[[schedule]]\nstage = "hold"\nat = { core = "500 °C" }\nduration = "1 s"\n[[schedule]]',
            "line 9   schedule.0 (hold): a hold needs a frequency before it, put a heat stage first or add a [supply]",
        ),
    ],
)
def test_refusal_without_coil(old: str, new: str, line: str) -> None:
    assert _problems(_spoilt(FREE, old, new)) == (line,)


def test_supply_without_coil() -> None:
    text = _spoilt(FREE, ', frequency = "3 kHz"', "").replace(
        "[[schedule]]", '[supply]\npower = "10 kW"\nfrequency = "3 kHz"\n[[schedule]]'
    )
    assert _problems(text) == (
        "line 9   supply: a supply feeds a coil, add a [coil] or leave it out and put the frequency in the drive",
    )


def test_no_schedule() -> None:
    head = FREE.split("[[schedule]]")[0]
    assert _problems(head) == ("schedule: missing, write for example a [[schedule]] table",)
    assert _problems("schedule = []\n" + head) == ("line 1   schedule: is empty, add a [[schedule]] table",)
    assert _problems("schedule = 3\n" + head) == (
        "line 1   schedule: '3' is not a list, write [[schedule]] with two brackets",
    )


def test_table_written_as_a_value() -> None:
    text = 'coil = "80 mm"\nworkpiece = 3\nformat = 1\n[[schedule]]\nstage = "transfer"\nduration = "5 s"\n'
    assert _problems(text) == (
        "line 1   coil: '80 mm' is not a table of keys",
        "line 2   workpiece: '3' is not a table of keys",
    )


def test_all_mistakes_at_once_in_the_order_of_the_file() -> None:
    text = SOUND.replace('"60 mm"', "60").replace("frequency", "frequancy").replace('"80 kW"', '"60 kHz"')
    assert _problems(text) == (
        'line 5   workpiece.diameter: write the unit: "60 mm" (accepted: m, mm, in)',
        "line 17  supply.power: '60 kHz' is a frequency, a power is wanted (W, kW)",
        "line 18  supply.frequancy: unknown key, did you mean 'frequency'?",
    )


@pytest.mark.parametrize(
    ("text", "line"),
    [
        ("format = 1\n[coil]\ntube = 12 mm # x\n", 'line 3   tube: put the value in quotes: "12 mm"'),
        ("format = 1\nformat = 1\n", "line 2   this key is given a second time: format = 1"),
        ("format = 1\n[coil\n", "line 2   this is not TOML: expected ']' at the end of a table declaration"),
        ('format = 1\ntitle = "a', 'line 2   a closing quote is missing: title = "a'),
        ('title = "a\nformat = 1\n', 'line 1   a closing quote is missing: title = "a'),
        ("title = 'a\nformat = 1\n", "line 1   a closing quote is missing: title = 'a"),
        ('d = { s = "60 kW, f = "3 kHz" }\n', 'line 1   a closing quote is missing: d = { s = "60 kW, f = "3 kHz" }'),
        ('power = 60 kW"\n', 'line 1   power: put the value in quotes: "60 kW"'),
        ("[schedule]\na = 1\n[schedule]\na = 2\n", "line 3   write [[schedule]] with two brackets"),
        ("[coil]\na = 1\n[coil]\na = 2\n", "line 3   the table [coil] is given a second time"),
        (
            "[schedule]\na = 1\n[[schedule]]\na = 2\n",
            "line 3   write every one of them with two brackets: [[schedule]]",
        ),
    ],
)
def test_broken_toml(text: str, line: str) -> None:
    assert _problems(text) == (line,)


def test_single_brackets() -> None:
    assert _problems(FREE.replace("[[schedule]]", "[schedule]")) == (
        "line 9   schedule: write [[schedule]] with two brackets",
    )
    assert _problems("title = { a = 1 }\n" + FREE) == ("line 1   title: a table is not a text, put it in quotes",)


def test_a_stage_is_called_as_in_the_report() -> None:
    text = FREE + '[[schedule]]\nstage = "heat"\nduration = "5 s"\n'
    assert _problems(text) == (
        'line 13  schedule.1.drive (heat 2): missing, write for example drive = { supply_power = "60 kW" }',
    )


def test_bare_frequency() -> None:
    assert _problems(SOUND.replace('"1 kHz"', "10000")) == (
        'line 18  supply.frequency: write the unit: "10000 Hz" (accepted: Hz, kHz, MHz)',
    )
