"""The root finder of the supplies and the choice of what binds."""

import math

import numpy as np
import pytest

from thermal.circuit.supply import TOLERANCE, TRIES_AT_MOST, Trial, decide, excitation_for
from thermal.errors import NoConvergence
from thermal.interfaces import EddyField, OperatingPoint

POINT = OperatingPoint(1e4, 1.0, 1.0, 1.0, 0.0, 0.0, 1.0, None, None)


def field(excitation):
    return EddyField(np.zeros(2), 1.0, 0j, excitation, np.ones(2), 1)


class Response:
    """A reach as a function of the excitation, which counts its trials."""

    def __init__(self, reach):
        self.reach = reach
        self.asked = []

    def __call__(self, excitation, guess):
        self.asked.append((excitation, guess))
        return Trial(self.reach(excitation), None, POINT, field(excitation))


LAWS = {
    # Reach over excitation, and the excitation of reach 1.
    "proportional": (lambda x: x / 700.0, 700.0),
    "saturating": (lambda x: (x / 700.0) ** 0.72, 700.0),
    "steep": (lambda x: (x / 700.0) ** 1.8, 700.0),
    "bent": (lambda x: 0.5 * (x / 700.0) ** 0.6 + 0.5 * x / 700.0, 700.0),
    "kinked": (lambda x: max(x / 900.0, math.sqrt(x / 700.0)), 700.0),
}


@pytest.mark.parametrize("law", LAWS)
@pytest.mark.parametrize("start", [1e-3, 690.0, 700.0, 1e7])
def test_finds_the_excitation(law, start):
    reach, root = LAWS[law]
    response = Response(reach)
    trial = excitation_for(response, start, None)
    assert abs(math.log(trial.reach)) < TOLERANCE
    assert response.asked[-1][0] == pytest.approx(root, rel=1e-5)
    assert len(response.asked) <= 12


def test_proportional_response_takes_two_trials():
    response = Response(lambda x: x / 700.0)
    excitation_for(response, 3.0, None)
    assert len(response.asked) == 2


def test_every_trial_starts_from_the_field_before():
    response = Response(lambda x: (x / 700.0) ** 0.7)
    first = field(0.0)
    excitation_for(response, 10.0, first)
    guesses = [guess for _, guess in response.asked]
    assert guesses[0] is first
    for before, guess in zip(response.asked[:-1], guesses[1:], strict=True):
        assert guess.H_surface_rms == before[0]


@pytest.mark.parametrize("reach", [0.0, -1.0, math.nan, math.inf])
def test_gives_up_at_once_on_what_is_no_reach(reach):
    response = Response(lambda x: reach)
    with pytest.raises(NoConvergence, match="no operating point"):
        excitation_for(response, 100.0, None)
    assert len(response.asked) == 1


def test_gives_up_where_nothing_responds():
    response = Response(lambda x: 0.7)
    with pytest.raises(NoConvergence, match="no operating point"):
        excitation_for(response, 100.0, None)
    assert len(response.asked) <= TRIES_AT_MOST


def test_decide():
    assert decide(0.8, []) == (0.8, None)
    assert decide(0.8, [(0.5, "power"), (0.7, "current")]) == (0.8, None)
    assert decide(0.8, [(0.9, "power"), (1.2, "current"), (1.1, "voltage")]) == (1.2, "current")
    assert decide(1.0, [(1.0, "power"), (1.0 + TOLERANCE, "current")]) == (1.0, None)
    assert decide(1.0, [(1.0 + 3.0 * TOLERANCE, "power")]) == (1.0 + 3.0 * TOLERANCE, "power")
