"""Stops that are passed as soon as the surface begins to lose heat, and slow draughts."""

import pytest

from thermal.build import build
from thermal.case import from_text
from thermal.loop import run


def cooling(target, surroundings, diameter=60, initial=1200, stage="transfer"):
    return from_text(
        f"""
format = 1
[workpiece]
shape = "cylinder"
diameter = "{diameter} mm"
length = "200 mm"
material = "steel-c45"
emissivity = 0.9
initial = "{initial} °C"
[surroundings]
temperature = "20 °C"
{surroundings}
[[schedule]]
stage = "transfer"
until = {{ surface = "{target} °C" }}
duration = "100 s"
""",
        ".",
    )


@pytest.mark.parametrize(
    ("target", "surroundings"),
    [(1199.9, ""), (1199.0, ""), (1198.5, ""), (1198.0, ""), (1197.0, 'h = "300 W/(m2 K)"'), (1150.0, "")],
)
def test_a_target_within_the_first_fall_of_the_surface_is_met(target, surroundings):
    # The surface of a hot piece reads some kelvin lower after any step, however short.
    history = run(build(cooling(target, surroundings)))
    assert history.stages[0].reason == "target"
    assert history.readings["surface"][-1] <= target + 273.15 + 1e-3
    assert history.steps < 200


def test_a_draught_too_slow_for_the_correlation_of_the_ends_is_an_upper_estimate():
    text = 'speed = "{} m/s"'
    slow, slower, still = (
        run(build(cooling(800, text.format(speed), diameter=8, initial=1000))).time[-1] for speed in (0.3, 0.05, 0)
    )
    assert slow < slower <= still
