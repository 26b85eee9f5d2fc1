from collections.abc import Callable
from functools import cache

import pytest
from quick_case import QUICK

from thermal.case import Case, from_text
from thermal.case.starter import starter
from thermal.questions.answer import Answer
from thermal.questions.compare import compare
from thermal.questions.frequency import frequency_window
from thermal.questions.peak_temperature import peak_temperature
from thermal.questions.time_to_temperature import time_to_temperature

ZERO = 273.15
METALS = ("steel-c45", "aluminium-6082", "copper", "stainless-304", "brass-cuzn37", "titanium-grade2")
ROW = {"workpiece.neighbours": "touching", "workpiece.length": "40 mm"}
LONG = {"title": "A long title about the bar, the coil and the press that goes on " * 4}
WEAK = {"schedule.0.drive": '{ coil_current = "120 A" }'}
BURNS = {"workpiece.material": "stainless-304", "schedule.0.drive.absorbed_power": "3 kW"}
LIMITED = {"supply.max_current": "300 A"}
NO_REACH = {"schedule.0.drive.absorbed_power": "60 W"}
# A rod that stalls at its Curie point: at this voltage the drive is too weak for a while below it.
STALL = """
format = 1
title = "Rod that stalls"
[workpiece]
shape = "cylinder"
diameter = "20 mm"
length = "100 mm"
material = "steel-c45"
emissivity = 0.8
[coil]
turns = 12
inner_diameter = "24 mm"
length = "120 mm"
tube = "6 mm"
[supply]
power = "200 kW"
frequency = "3 kHz"
[surroundings]
temperature = "20 °C"
h = "20 W/(m2 K)"
[[schedule]]
stage = "heat"
drive = { coil_voltage = "6.5 V" }
duration = "100 s"
"""

Asked = tuple[Answer[object], Case]
Ask = Callable[[Case], Answer[object]]

ASKED: dict[str, tuple[str, dict[str, str], Ask]] = {
    "time": ("tube", {}, lambda case: time_to_temperature(case, ZERO + 700.0)),
    "time in a row": ("tube", ROW, lambda case: time_to_temperature(case, ZERO + 700.0)),
    "time never": ("heater", NO_REACH, lambda case: time_to_temperature(case, ZERO + 1100.0)),
    "time, limited": ("tube", LIMITED, lambda case: time_to_temperature(case, ZERO + 1200.0)),
    "time, burnt": ("quick", BURNS, lambda case: time_to_temperature(case, ZERO + 1390.0)),
    "peak": ("tube", LONG, lambda case: peak_temperature(case, supply_power=1e3)),
    "peak in a row": ("tube", ROW, lambda case: peak_temperature(case, supply_power=1e3)),
    "peak of a plate": ("plate", {}, lambda case: peak_temperature(case, supply_power=2e3)),
    "peak without a coil": ("quick", {}, lambda case: peak_temperature(case, absorbed_power=20.0)),
    "peak, melts": ("quick", {}, lambda case: peak_temperature(case)),
    "peak, stalls": ("stall", {}, lambda case: peak_temperature(case)),
    "compare": ("tube", LONG, lambda case: compare(case, METALS, targets={"copper": ZERO + 600.0})),
    "compare two": ("billet", {}, lambda case: compare(case, ["steel-c45", "copper"], to=ZERO + 400.0)),
    "compare in a row": ("tube", ROW, lambda case: compare(case, METALS[2:4], to=ZERO + 300.0)),
    "compare one": ("plate", {}, lambda case: compare(case, ["steel-c45"])),
    "compare never": ("tube", WEAK, lambda case: compare(case, METALS[:3], to=ZERO + 550.0)),
    "compare without a coil": ("quick", {}, lambda case: compare(case, ["copper", "brass-cuzn37"])),
    "frequency": ("tube", LONG, lambda case: frequency_window(case)),
    "frequency in a row": ("tube", ROW, lambda case: frequency_window(case)),
    "frequency of a plate": ("plate", {}, lambda case: frequency_window(case)),
    "frequency without a coil": ("quick", {}, lambda case: frequency_window(case)),
    "frequency close by": (
        "heater",
        {"schedule.0.drive.frequency": "26 kHz"},
        lambda case: frequency_window(case),
    ),
}


@cache
def _asked(name: str) -> Asked:
    kind, changes, ask = ASKED[name]
    text = {"quick": QUICK, "stall": STALL}.get(kind)
    case = from_text(starter(kind) if text is None else text, ".", changes)
    return ask(case), case


@pytest.fixture(scope="session")
def answer_of() -> Callable[[str], Asked]:
    """One of the answers of ASKED with its case, found once per session."""
    return _asked


@pytest.fixture(params=[name for name in ASKED if not name.startswith("time")])
def asked_drawn(request: pytest.FixtureRequest) -> Asked:
    """Each of the answers that have a picture of their own; that of "time" is the curves of its run."""
    return _asked(request.param)


@pytest.fixture(params=ASKED)
def asked(request: pytest.FixtureRequest) -> Asked:
    """Each of the answers of ASKED in turn."""
    return _asked(request.param)
