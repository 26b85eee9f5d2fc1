"""What every boundary loss must do, whatever it models."""

from dataclasses import dataclass, fields

import numpy as np
import pytest
from numpy.testing import assert_allclose

from materials import database
from materials.property import Property
from materials.source import Source
from thermal.boundary.convection import constant_convection, cylinder_convection, plate_convection
from thermal.boundary.emissivity import emissivity_of
from thermal.boundary.lining import flat_lining, round_lining
from thermal.boundary.radiation import Radiation, bare_coil_radiation, bore_radiation
from thermal.errors import OutOfRange

TA = 293.15
TC = 323.15
AIR = database.gas("air")
INVENTED = Source("invented", "made up for this test", "assumed")


def curve(T, value, beyond="hold"):
    return Property("invented", np.array(T), np.array(value), "linear", beyond, 0.0, "1", INVENTED)


RISING = curve([300.0, 700.0, 1100.0], [0.35, 0.6, 0.85])
BUMPY = curve([300.0, 700.0, 1100.0, 1500.0], [0.35, 0.7, 0.55, 0.85])
CONSTANT = emissivity_of(0.8, False, TA)
PLAIN = emissivity_of(BUMPY, False, TA)
OXIDE = emissivity_of(BUMPY, True, TA)
BOUNDED = emissivity_of(curve([250.0, 1500.0], [0.4, 0.8], "refuse"), True, TA)
LINING_K = curve([300.0, 900.0, 1500.0], [1.9, 1.5, 1.7])
LINING_E = curve([293.15, 773.15, 1273.15], [0.85, 0.65, 0.45])
RADII = (0.025, 0.031, 0.040)


@dataclass(frozen=True)
class Subject:
    loss: object
    sink: float
    limit: float | None


SUBJECTS = {
    "radiation": Subject(Radiation("radiation", CONSTANT, TA), TA, None),
    "radiation, curve": Subject(Radiation("radiation", PLAIN, TA), TA, None),
    "radiation, oxide": Subject(Radiation("radiation", OXIDE, TA), TA, None),
    "radiation, bounded": Subject(Radiation("radiation", BOUNDED, TA), TA, 1500.0),
    "bare coil": Subject(bare_coil_radiation("radiation", OXIDE, TC, 0.7, 0.6), TC, None),
    "bore": Subject(bore_radiation("bore", 0.01, 0.2, TA), TA, None),
    "constant h": Subject(constant_convection("convection", 12.0, TA), TA, None),
    "lying cylinder": Subject(
        cylinder_convection("convection", AIR, TA, 0.05, 0.2, "horizontal"), TA, 2 * AIR.T_max - TA
    ),
    "upright cylinder": Subject(
        cylinder_convection("convection", AIR, TA, 0.05, 0.2, "vertical"), TA, 2 * AIR.T_max - TA
    ),
    "cylinder in a flow": Subject(
        cylinder_convection("convection", AIR, TA, 0.05, 0.2, "horizontal", 2.0), TA, 2 * AIR.T_max - TA
    ),
    "plate": Subject(plate_convection("ends", AIR, TA, 0.05), TA, 2 * AIR.T_max - TA),
    "plate in a flow": Subject(plate_convection("ends", AIR, TA, 0.05, 2.0), TA, 2 * AIR.T_max - TA),
    "round lining": Subject(round_lining("lining", OXIDE, AIR, LINING_K, LINING_E, RADII, TC), TC, AIR.T_max),
    "flat lining": Subject(flat_lining("lining", PLAIN, AIR, LINING_K, 0.7, 0.006, 0.009, TC), TC, AIR.T_max),
    "lining of no thickness": Subject(flat_lining("lining", OXIDE, AIR, 1.6, 0.7, 0.006, 0.0, TC), TC, AIR.T_max),
}

T = np.array([271.3, 296.9, 351.7, 523.1, 689.3, 811.7, 1013.9, 1201.1, 1487.3])


@pytest.fixture(params=SUBJECTS.values(), ids=SUBJECTS.keys())
def subject(request):
    return request.param


def test_it_is_frozen_and_names_its_account(subject):
    assert isinstance(subject.loss.name, str)
    assert subject.loss.name
    with pytest.raises(AttributeError):
        setattr(subject.loss, fields(subject.loss)[0].name, "other")


@pytest.mark.parametrize("history", ["heating", "cooling"])
@pytest.mark.parametrize("together", [True, False], ids=["all faces", "face by face"])
def test_slope_is_the_derivative_of_the_flux(subject, history, together):
    peak, d = (T - 20.0, 1e-3) if history == "heating" else (T + 12.0, 1e-3)

    def flux(T):
        if together:
            return np.array(subject.loss.flux(T, peak))
        return np.hstack([subject.loss.flux(T[i : i + 1], peak[i : i + 1]) for i in range(T.size)])

    difference = (flux(T + d)[0] - flux(T - d)[0]) / (2 * d)
    assert_allclose(flux(T)[1], difference, rtol=2e-6, atol=1e-6)


def test_flux_has_the_sign_of_the_temperature_difference_and_rises(subject):
    peak = np.full(T.shape, T.max())
    q, slope = subject.loss.flux(T, peak)
    assert np.all(np.sign(q) == np.sign(T - subject.sink))
    assert np.all(np.diff(q) > 0)
    assert np.all(slope > 0)


def test_no_flux_at_equilibrium(subject):
    at_rest = np.array([subject.sink])
    q, slope = subject.loss.flux(at_rest, at_rest)
    assert abs(q.item()) <= 1e-10
    assert slope.item() > 0


def test_answers_have_the_shape_of_the_faces_and_are_new_arrays(subject):
    for shape in [(1,), (3,), (3, 3)]:
        asked = np.resize(T, shape)
        asked.flags.writeable = False
        q, slope = subject.loss.flux(asked, asked)
        assert q.shape == slope.shape == shape
        assert q.dtype == slope.dtype == np.float64


def test_one_face_gives_what_many_give(subject):
    peak = T + np.where(np.arange(T.size) % 2, 12.0, -20.0)
    together = np.array(subject.loss.flux(T, peak))
    alone = np.hstack([subject.loss.flux(T[i : i + 1], peak[i : i + 1]) for i in range(T.size)])
    assert_allclose(alone, together, rtol=1e-10, atol=1e-10)


def test_it_never_falls_with_a_hotter_past(subject):
    fresh, _ = subject.loss.flux(T, T)
    oxidised, _ = subject.loss.flux(T, np.full(T.shape, 1490.0))
    assert np.all(np.abs(oxidised) >= np.abs(fresh) * (1 - 1e-12))


@pytest.mark.parametrize("faces", [1, 4])
def test_it_refuses_beyond_its_data(subject, faces):
    if subject.limit is None:
        hot = np.full(faces, 3000.0)
        assert np.all(np.isfinite(subject.loss.flux(hot, hot)))
        return
    hot = np.linspace(subject.limit + 0.5, subject.limit - 50.0, faces)
    with pytest.raises(OutOfRange, match="asked at"):
        subject.loss.flux(hot, hot)
