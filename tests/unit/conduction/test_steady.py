from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
from scipy.optimize import brentq
from tools import uniform_edges

from thermal.boundary.emissivity import emissivity_of
from thermal.boundary.radiation import Radiation
from thermal.conduction.steady import steady_profile
from thermal.constants import STEFAN_BOLTZMANN
from thermal.crosscheck.problem import PrescribedSource, Problem, by_hand, constant_flux, convection, heating, radiation
from thermal.errors import NoConvergence
from thermal.geometry.grading import graded_edges
from thermal.geometry.shapes import cylinder, plate
from thermal.loop import run

T_AROUND = 293.15
LONG = 20_000.0
"""A hundred time constants of the pieces here [s]."""
SETTLED = 1e-8
"""Of the heat: what a profile found within 1e-9 of its temperature may leave, radiation going with its 4th power."""
BOTH = (radiation(0.8, T_AROUND), convection(15.0, T_AROUND))
MESHES = {
    "bar": cylinder(graded_edges(0.0, 0.02, 2e-3), 0.1),
    "tube": cylinder(graded_edges(0.012, 0.02, 2e-3), 0.1),
    "plate": plate(graded_edges(0.0, 0.01, 2e-3), 0.08, 0.2),
}
LOSSES = {
    "bar": {"outer": BOTH, "ends": BOTH},
    "tube": {"outer": BOTH, "ends": BOTH, "bore": (convection(40.0, 350.0),)},
    "plate": {"outer": BOTH, "ends": BOTH, "edges": BOTH},
}


def falling(T):
    """A conductivity that falls with temperature [W/(m K)]."""
    return 45.0 - 0.02 * (T - 300.0)


def skin(mesh, depth=2e-3, strength=1e7):
    """Heat that dies away under the outer surface [W/m3]."""
    return strength * np.exp(-2.0 * (mesh.edges[-1] - mesh.r) / depth)


def section_of(mesh, conductivity=falling):
    return Problem(mesh, (), conductivity=conductivity).setup().section


def rest(kind, T_mean, **changed):
    mesh = MESHES[kind]
    losses = changed.get("losses", LOSSES[kind])
    heat = changed.get("heat", skin(mesh))
    section = section_of(mesh)
    return section, heat, steady_profile(section, losses, heat, T_mean, np.full(mesh.r.size, T_mean), T_AROUND)


@pytest.mark.parametrize("kind", list(MESHES))
@pytest.mark.parametrize("T_mean", [400.0, 900.0, 1500.0])
def test_the_mean_is_kept_and_every_cell_is_at_rest(kind, T_mean):
    section, heat, profile = rest(kind, T_mean)
    mesh = section.mesh
    assert profile.T @ mesh.volume / mesh.volume.sum() == pytest.approx(T_mean, rel=1e-12)
    brought = profile.share * heat * mesh.volume
    assert sum(profile.losses.values()) == pytest.approx(brought.sum(), rel=SETTLED)
    assert set(profile.losses) == {(face, loss.name) for face, acting in LOSSES[kind].items() for loss in acting}
    # Cell by cell, with the fluxes worked out again: what conduction brings, the heat and the losses are nothing.
    flow = section.conductances(falling(profile.T)) * (profile.T[:-1] - profile.T[1:])
    net = brought.copy()
    net[:-1] -= flow
    net[1:] += flow
    for face in mesh.faces:
        if face in ("outer", "bore"):
            net[-1 if face == "outer" else 0] -= sum(
                loss.flux(profile.surfaces[face], T_AROUND)[0] * float(mesh.faces[face].area[0])
                for loss in LOSSES[kind][face]
            )
        else:
            net -= sum(loss.flux(profile.T, profile.T)[0] for loss in LOSSES[kind][face]) * mesh.faces[face].area
    assert np.abs(net).max() < SETTLED * brought.sum()


def test_uniform_heat_in_a_bar():
    # Incropera et al., Fundamentals of Heat and Mass Transfer, 3.5: T = T_s + Q (R2 - r2)/4k, Q R/2 = h (T_s - Ta).
    R, k, Q, h = 0.02, 30.0, 1e7, 250.0
    mesh = cylinder(uniform_edges(0.0, R, 200), 0.1)
    surface = T_AROUND + Q * R / (2.0 * h)
    mean = surface + Q * R**2 / (8.0 * k)
    section = section_of(mesh, lambda T: np.full_like(T, k))
    heat = np.full(mesh.r.size, 2.0 * Q)
    start = np.full(mesh.r.size, 2000.0)
    found = steady_profile(section, {"outer": (convection(h, T_AROUND),)}, heat, mean, start, T_AROUND)
    assert found.share == pytest.approx(0.5, rel=1e-5)
    assert found.surfaces["outer"] == pytest.approx(surface, abs=0.01)
    assert found.T == pytest.approx(surface + Q * (R**2 - mesh.r**2) / (4.0 * k), abs=0.01)


@pytest.mark.parametrize(("h", "T"), [(0.0, 1219.516545), (15.0, 1177.062677)])
def test_surface_of_balanced_radiation(h, T):
    # Incropera et al., 5.3: 1e5 W/m2 = 0.8 sigma (T^4 - 293.15^4) + h (T - 293.15).
    mesh = MESHES["bar"]
    section, heat = section_of(mesh), skin(mesh)
    heat *= 1e5 * float(mesh.faces["outer"].area[0]) / float(heat @ mesh.volume)
    losses = {"outer": (radiation(0.8, T_AROUND), convection(h, T_AROUND))}

    def profile(mean):
        return steady_profile(section, losses, heat, mean, np.full(mesh.r.size, mean), T_AROUND)

    mean = brentq(lambda mean: profile(mean).share - 1.0, 600.0, 2000.0, xtol=1e-9)
    assert profile(mean).surfaces["outer"] == pytest.approx(T, rel=1e-8)


@pytest.mark.parametrize("kind", list(MESHES))
def test_the_same_as_a_long_run(kind):
    mesh = MESHES[kind]
    heat = skin(mesh, strength=4e7)
    problem = Problem(
        mesh,
        (heating(LONG),),
        source=PrescribedSource(mesh, lambda T, excitation: heat),
        losses=LOSSES[kind],
        conductivity=falling,
        tolerance=0.05,
    )
    setup = problem.setup()
    history = run(setup)
    mean = float(history.readings["mean"][-1])
    assert mean > 600.0
    found = steady_profile(setup.section, LOSSES[kind], heat, mean, np.full(mesh.r.size, mean), T_AROUND)
    assert found.share == pytest.approx(1.0, rel=1e-6)
    assert found.surfaces["outer"] == pytest.approx(history.readings["surface"][-1], abs=1e-4)
    if kind == "tube":
        assert found.surfaces["bore"] == pytest.approx(history.readings["core"][-1], abs=1e-4)
    assert setup.section.table.enthalpy(found.T) == pytest.approx(history.enthalpy[-1], abs=5e6 * 1e-4)


def test_where_it_starts_from_does_not_matter():
    section, heat, flat = rest("bar", 900.0)
    steep = np.linspace(400.0, 1800.0, section.mesh.r.size)
    other = steady_profile(section, LOSSES["bar"], heat, 900.0, steep, T_AROUND)
    assert other.T == pytest.approx(flat.T, abs=1e-5)
    assert other.share == pytest.approx(flat.share, rel=1e-8)


def test_twice_the_heat_is_half_the_share():
    _, heat, once = rest("bar", 900.0)
    *_, twice = rest("bar", 900.0, heat=2.0 * heat)
    assert twice.share == pytest.approx(0.5 * once.share, rel=1e-9)
    assert twice.T == pytest.approx(once.T, abs=1e-6)


def test_colder_than_the_surroundings_the_share_is_negative():
    *_, profile = rest("bar", 250.0)
    assert profile.share < 0.0


def test_hotter_needs_more():
    shares = [rest("tube", T_mean)[2].share for T_mean in (500.0, 800.0, 1100.0)]
    assert all(b > a > 0.0 for a, b in pairwise(shares))


def test_oxide_of_a_hotter_past_counts():
    mesh = MESHES["bar"]
    rising = replace(by_hand("emissivity", 0.3), value=np.array([0.2, 0.9]))
    law = emissivity_of(rising, grows=True, T_start=T_AROUND)
    losses = {"outer": (Radiation("radiation", law, T_AROUND),)}
    section, flat = section_of(mesh), np.full(mesh.r.size, 900.0)
    for seen in (300.0, 1400.0):
        profile = steady_profile(section, losses, skin(mesh), 900.0, flat, seen)
        surface = profile.surfaces["outer"]
        flux = float(rising(np.array([max(seen, surface)]))[0])
        flux *= STEFAN_BOLTZMANN * (surface**4 - T_AROUND**4)
        area = float(mesh.faces["outer"].area[0])
        assert profile.losses["outer", "radiation"] == pytest.approx(flux * area, rel=1e-4)


@pytest.mark.parametrize("losses", [{}, {"outer": (), "ends": ()}, {"outer": (constant_flux(1e4),)}])
def test_without_losses_that_answer_to_temperature_there_is_no_rest(losses):
    with pytest.raises(NoConvergence, match="no temperature is a state of rest"):
        rest("bar", 900.0, losses=losses)
