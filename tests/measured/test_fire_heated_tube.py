"""The transient solver against a steel hollow section heated in a compartment fire, burner off and cooling included.

Source: tests of SP Technical Research Institute of Sweden, U. Wickström and others 2008, test 1; data distributed by
the fire research group of NIST, the National Institute of Standards and Technology (firemodels/exp, SP_AST), not
subject to copyright in the United States. A tube 100 mm wide and 200 mm high with a wall of 8 mm, filled with
insulating pellets (317 kg/m3, 1000 J/(kg K), 0.1 W/(m K) at 20 °C rising to 0.2 at 1000 °C: input file of the same
group), under the ceiling of a room with a burner of 450 kW on for 1800 s. Measured were steel temperatures at eight
points of three stations and, on each face, the adiabatic surface temperature: that of a perfect insulator in the same
place, which stands for gas and radiation together.

Each face is a flat wall of its own with the filling behind it, losing heat to its adiabatic surface temperature by
radiation and convection; a station is the mean over its thermocouples. The specific heat and conductivity of steel are
those of EN 1993-1-2; emissivity 0.8 and 25 W/(m2 K) are common practice for such fires. Heat along the perimeter and
along the tube is left out. Measured on the solver: within 10 K to 2040 s; at 2220 s station A is 16 K too cold.
"""

import numpy as np
import pytest

from materials.property import Property
from materials.source import Source
from thermal.constants import ZERO_CELSIUS
from thermal.crosscheck.problem import (
    Problem,
    by_hand,
    constant_flux,
    convection,
    left_alone,
    plain_material,
    radiation,
)
from thermal.crosscheck.reference_problems import STEEL
from thermal.geometry.grading import graded_edges
from thermal.geometry.shapes import cylinder
from thermal.stepper import Hottest, Stepper

TIMES = (0, 30, 60, 120, 240, 360, 480, 600, 840, 1080, 1320, 1560, 1800, 1830, 1860, 1920, 2040)
"""[s] of the surface temperatures below."""

SURFACE = {
    # Station -> face -> adiabatic surface temperature [°C] and thermocouples on it that worked.
    "A": {
        "top": ((26, 433, 467, 543, 590, 620, 635, 650, 676, 681, 692, 687, 709, 593, 541, 482, 423), 1),
        "one side": ((26, 232, 273, 326, 399, 448, 468, 479, 505, 521, 535, 545, 559, 492, 457, 409, 355), 3),
        "bottom": ((26, 119, 167, 218, 298, 340, 372, 394, 428, 454, 473, 488, 499, 441, 406, 357, 302), 1),
        # The middle one reads below 0 °C from the first minute on.
        "other side": ((26, 322, 362, 435, 557, 597, 632, 657, 692, 713, 731, 734, 744, 599, 534, 461, 390), 2),
    },
    "B": {
        "top": ((26, 356, 400, 466, 529, 557, 583, 610, 628, 647, 658, 661, 673, 580, 533, 475, 416), 1),
        "one side": ((26, 234, 274, 326, 387, 425, 444, 460, 486, 504, 519, 528, 542, 477, 442, 396, 344), 3),
        "bottom": ((28, 134, 157, 207, 275, 314, 343, 368, 395, 419, 440, 455, 468, 418, 386, 342, 289), 1),
        "other side": ((26, 277, 315, 368, 465, 513, 532, 556, 588, 614, 631, 637, 647, 543, 492, 433, 371), 3),
    },
    "C": {
        "top": ((25, 230, 303, 359, 426, 457, 485, 511, 531, 553, 565, 574, 591, 523, 486, 439, 388), 1),
        "one side": ((25, 205, 240, 289, 355, 393, 418, 435, 458, 478, 494, 505, 517, 465, 431, 388, 339), 3),
        "bottom": ((28, 154, 167, 211, 272, 304, 329, 348, 379, 399, 418, 432, 443, 393, 364, 323, 274), 1),
        "other side": ((25, 216, 263, 314, 391, 434, 456, 481, 511, 530, 549, 560, 569, 505, 463, 413, 357), 3),
    },
}

READ_AT = (120, 240, 360, 480, 600, 840, 1080, 1320, 1560, 1800, 1920, 2040)
"""[s] of the steel temperatures below."""

STEEL_MEAN = {
    # Station -> mean of its thermocouples that worked [°C].
    "A": (78, 144, 213, 281, 342, 437, 497, 537, 565, 584, 554, 522),
    "B": (72, 128, 186, 243, 298, 380, 445, 489, 519, 541, 516, 487),
    "C": (62, 102, 145, 189, 233, 312, 376, 425, 461, 487, 466, 442),
}

GATE = 15.0
"""[K]."""

START = ZERO_CELSIUS + 24.0
WALL, FILLING = 0.008, 0.050
INTERVAL = 30
"""[s] in which the surroundings stay as they are."""

PELLETS = plain_material(
    317.0,
    by_hand("specific heat", 1000.0),
    Property(
        "conductivity",
        ZERO_CELSIUS + np.array([20.0, 1000.0]),
        np.array([0.1, 0.2]),
        "linear",
        "hold",
        0.0,
        "W/(m K)",
        Source("test", "input file of the NIST fire research group", "recommended"),
    ),
)


class Layer:
    """A flat layer of one material whose losses change from interval to interval."""

    def __init__(self, material, thickness, finest, tolerance):
        # A ring so wide that it is flat: unlike a plate it has two faces that may differ.
        self.mesh = cylinder(graded_edges(10.0 - thickness, 10.0, finest), 0.1)
        self.material, self.tolerance = material, tolerance
        volumetric = material.density * material.caloric.enthalpy(np.array([START]))
        self.H = np.full(self.mesh.volume.size, float(volumetric[0]))
        self.step = 1.0
        self.readings = {"mean": START, "core": START}

    def advance(self, losses, duration):
        """Go on for a duration [s]; what the layer gained [J per m2 of its outer surface]."""
        stage = left_alone(duration)
        setup = Problem(
            self.mesh, (stage,), START, losses=losses, material=self.material, tolerance=self.tolerance
        ).setup()
        hottest = Hottest(dict.fromkeys(("outer", "bore"), START), np.full(self.H.size, START))
        stepper = Stepper(setup, stage, hottest)
        now, left = stepper.moment(self.H, np.zeros(2), None), duration
        while left > 0.0:
            _, now, length, self.step, _ = stepper.advance(now, self.step, left)
            left = 0.0 if length >= left else left - length
        gained = float(self.mesh.volume @ (now.H - self.H)) / float(self.mesh.faces["outer"].area[0])
        self.H, self.readings = now.H, now.readings
        return gained


def face_of(surface, emissivity, h):
    """Mean temperature of the wall [°C] at READ_AT behind an adiabatic surface temperature [°C] at TIMES."""
    wall, filling = Layer(STEEL, WALL, WALL, 0.2), Layer(PELLETS, FILLING, 3e-3, 5.0)
    into_filling = 0.0
    found = {}
    for begun in range(0, READ_AT[-1], INTERVAL):
        T_around = ZERO_CELSIUS + float(np.interp(begun + 0.5 * INTERVAL, TIMES, surface))
        outside = (radiation(emissivity, T_around), convection(h, T_around))
        wall.advance({"outer": outside, "bore": (constant_flux(-into_filling),)}, INTERVAL)
        # What the filling takes while it lies on the wall leaves the wall in the next interval; contact as good as any.
        against_wall = {"outer": (convection(1e3, wall.readings["core"]),)}
        into_filling = filling.advance(against_wall, INTERVAL) / INTERVAL
        found[begun + INTERVAL] = wall.readings["mean"] - ZERO_CELSIUS
    return np.array([found[time] for time in READ_AT])


def gaps(station, emissivity=0.8, h=25.0):
    """Computed minus measured mean of a station [K] at READ_AT."""
    faces = SURFACE[station].values()
    points = [count for _, count in faces]
    walls = [face_of(surface, emissivity, h) for surface, _ in faces]
    return np.average(walls, axis=0, weights=points) - np.array(STEEL_MEAN[station])


@pytest.mark.parametrize("station", SURFACE)
def test_steel_in_a_fire_follows_its_surroundings(station):
    assert np.abs(gaps(station)).max() < GATE


def test_the_gate_tells_an_emissivity_one_tenth_off():
    # Each on the station where it shows.
    assert np.abs(gaps("A", emissivity=0.7)).max() > GATE
    assert np.abs(gaps("C", emissivity=0.9)).max() > GATE
