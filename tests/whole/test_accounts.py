"""Accounts and ends of whole runs that a wrong connection between two right parts would spoil."""

from dataclasses import dataclass, replace
from functools import cache
from math import log

import numpy as np
import pytest
from cases_in_words import coil_case, drive_case
from tools import account_gap, last_of, observed_order, uniform_edges

from thermal.build import build
from thermal.case import from_text
from thermal.circuit.supply import CoilSupply
from thermal.conduction.step import Matrix
from thermal.crosscheck.problem import Problem, convection, heating, uniform_source
from thermal.geometry.shapes import cylinder
from thermal.interfaces import Array, BoundaryLoss, Demand, EddyField, FieldOf, OperatingPoint
from thermal.loop import run
from thermal.results.balance import CLOSURE
from thermal.results.history import History
from thermal.results.recorder import State
from thermal.setup import Setup
from thermal.stepper import Moment, Stepper

SIGMA = 5.670374419e-8


def setup_of(text: str, changes: dict[str, object] | None = None) -> Setup:
    return build(from_text(text, ".", changes or {}))


# A loss in the bore -------------------------------------------------------------------------------------------------


def test_tube_that_loses_at_the_bore_second_order() -> None:
    # T = -Q r^2/4k + A ln r + B, with k dT/dr = h_i (T - Ta) at the bore and -k dT/dr = h_o (T - Ta) outside.
    k, Q, ri, ro, h_in, h_out, around = 30.0, 1e7, 0.01, 0.02, 4000.0, 250.0, 300.0
    rows = [[k / ri - h_in * log(ri), -h_in], [k / ro + h_out * log(ro), h_out]]
    right = [Q * ri / 2.0 - h_in * Q * ri**2 / (4.0 * k), Q * ro / 2.0 + h_out * Q * ro**2 / (4.0 * k)]
    A, B = np.linalg.solve(rows, right)
    bore, outer = (-Q * r * r / (4.0 * k) + A * log(r) + B for r in (ri, ro))
    cells, errors = [20, 40, 80], []
    for n in cells:
        mesh = cylinder(uniform_edges(ri, ro, n), 0.1)
        losses: dict[str, tuple[BoundaryLoss, ...]] = {
            "bore": (convection(h_in, around),),
            "outer": (convection(h_out, around),),
        }
        source = uniform_source(mesh, Q)
        problem = Problem(mesh, (heating(20_000.0),), around, losses=losses, source=source, tolerance=0.05)
        history = run(problem.setup())
        assert last_of(history, "surface") - around == pytest.approx(outer, rel=2e-3)
        errors.append(abs(last_of(history, "core") - around - bore) / bore)
    assert errors[-1] < 1e-5
    assert 1.8 < observed_order([1.0 / n for n in cells], errors) < 2.2


# Electrical accounts ------------------------------------------------------------------------------------------------

HEAT_AND_HOLD = """
[[schedule]]
stage = "heat"
drive = { supply_power = "30 kW" }
until = { surface = "700 °C" }
longest = "60 s"

[[schedule]]
stage = "hold"
at = { surface = "760 °C" }
duration = "20 s"
"""


@dataclass(frozen=True)
class WithTank:
    """A coil supply with a tank that takes a tenth of what the coil copper takes (plays Supply)."""

    inner: CoilSupply

    def operate(
        self, field_of: FieldOf, demand: Demand, guess: tuple[OperatingPoint, EddyField] | None
    ) -> tuple[OperatingPoint, EddyField]:
        point, field = self.inner.operate(field_of, demand, guess)
        return replace(point, tank_loss=0.1 * point.coil_loss), field


def test_a_share_of_one_half_halves_the_electrical_accounts() -> None:
    whole = setup_of(coil_case("cylinder", True, "none") + HEAT_AND_HOLD, {"numerics.tolerance": "1 K"})
    assert isinstance(whole.supply, CoilSupply)
    whole = replace(whole, supply=WithTank(whole.supply))
    all_of_it, half = run(whole).energy, run(replace(whole, share=0.5)).energy
    for account in ("supply", "coil", "tank"):
        assert all_of_it[account][-1] > 0.0
        assert half[account] == pytest.approx(0.5 * all_of_it[account], rel=1e-12)
    assert all_of_it["tank"][-1] == pytest.approx(0.1 * all_of_it["coil"][-1], rel=1e-12)
    # What happens in the workpiece does not depend on it.
    for account in ("absorbed", "stored", "loss: lining", "loss: ends"):
        assert half[account] == pytest.approx(all_of_it[account], rel=1e-12)


@pytest.mark.parametrize("neighbours", ["none", "touching"])
@pytest.mark.parametrize("tolerance", ["0.1 K", "1 K", "5 K"])
def test_the_supply_gives_what_coil_and_pieces_take(neighbours: str, tolerance: str) -> None:
    # In the hold the controller and the Curie point are in the matrix of the step, with accounts of their own.
    setup = setup_of(coil_case("cylinder", True, neighbours) + HEAT_AND_HOLD, {"numerics.tolerance": tolerance})
    history = run(setup)
    assert [record.kind for record in history.stages] == ["heat", "hold"]
    supply, coil, absorbed = (history.energy[name] for name in ("supply", "coil", "absorbed"))
    assert np.abs(supply - coil - absorbed).max() <= 1e-9 * supply[-1]
    assert account_gap(history.energy) <= CLOSURE


def test_a_piece_of_a_row_pays_for_its_part_of_the_coil() -> None:
    # 20 kW for 2 s into a coil of 120 mm, of which the piece covers 100 mm.
    heat = '[[schedule]]\nstage = "heat"\ndrive = { supply_power = "20 kW" }\nduration = "2 s"\n'
    row, longer = (
        run(setup_of(coil_case("cylinder", True, "touching") + heat, {"workpiece.length": length}))
        for length in ("100 mm", "150 mm")
    )
    assert row.energy["supply"][-1] == pytest.approx(100.0 / 120.0 * 40e3, rel=1e-5)
    assert row.supply_power[-1] == pytest.approx(20e3, rel=1e-5)
    # The part of a longer piece inside the coil pays for all of it.
    assert longer.energy["supply"][-1] == pytest.approx(40e3, rel=1e-5)
    per_length = [history.energy["absorbed"][-1] / length for history, length in ((row, 0.1), (longer, 0.12))]
    assert per_length[0] == pytest.approx(per_length[1], rel=1e-4)


# Drives without a coil ----------------------------------------------------------------------------------------------

POWER, FIELD = ('absorbed_power = "20 kW"', "3 kHz"), ('surface_field = "5 kA/m"', "40 kHz")


@pytest.mark.parametrize("turned", [False, True])
def test_every_drive_has_its_own_frequency_and_no_limit_of_another(turned: bool) -> None:
    first, second = (FIELD, POWER) if turned else (POWER, FIELD)
    further = f'[[schedule]]\nstage = "heat"\ndrive = {{ {second[0]}, frequency = "{second[1]}" }}\nduration = "1 s"\n'
    history = run(setup_of(drive_case("cylinder", *first, 'duration = "1 s"', further=further)))
    by_power = history.stage == (1 if turned else 0)
    assert by_power.any() and not by_power.all()
    assert set(history.limit) == {None}
    assert np.unique(history.frequency[by_power]).tolist() == [3e3]
    assert np.unique(history.frequency[~by_power]).tolist() == [40e3]
    assert history.absorbed_power[by_power] == pytest.approx(20e3, rel=1e-5)
    assert history.H_surface_rms[~by_power] == pytest.approx(5e3, rel=1e-5)
    # 20 kW takes far more than 5 kA/m, and 5 kA/m far less than 20 kW.
    assert history.H_surface_rms[by_power].min() > 10e3
    assert history.absorbed_power[~by_power].max() < 15e3


# Oxide that stays ---------------------------------------------------------------------------------------------------

REHEATED = """
[[schedule]]
stage = "transfer"
duration = "300 s"
until = { surface = "330 °C" }

[[schedule]]
stage = "heat"
drive = { absorbed_power = "15 kW", frequency = "10 kHz" }
until = { surface = "600 °C" }
longest = "60 s"
"""


@cache
def oxidised() -> tuple[Setup, History]:
    text = drive_case(
        "cylinder", 'absorbed_power = "15 kW"', "10 kHz", 'until = { surface = "470 °C" }\nlongest = "60 s"',
        tolerance="0.5 K", further=REHEATED,
    )  # fmt: skip
    text = text.replace("emissivity = 0.8", 'surface = "machined"')
    setup = setup_of(text, {"surroundings.h": "10 W/(m2 K)"})
    return setup, run(setup)


def emissivity(T_peak: Array) -> Array:
    """Of machined steel, of the material file: 0.28 up to 380 °C, 0.69 from 520 °C, straight between."""
    return np.interp(T_peak, [653.15, 793.15], [0.28, 0.69])


def test_a_surface_radiates_as_hot_as_it_has_been() -> None:
    # Heated to 470 °C, cooled to 330 °C, heated to 600 °C: where it was hottest decides.
    _, history = oxidised()
    assert [record.kind for record in history.stages] == ["heat", "transfer", "heat"]
    assert history.status == "target"
    T, area = history.readings["surface"], np.pi * 0.04 * 0.1
    eps = emissivity(np.maximum.accumulate(T))
    expected = eps * SIGMA * (T**4 - 293.15**4) * area
    assert history.losses["loss: radiation"] == pytest.approx(expected, rel=1e-3, abs=1e-6)
    cooled = history.stage == 1
    # Without the oxide it had grown the surface at 330 °C would radiate half as much.
    assert eps[cooled].min() == pytest.approx(0.28 + 90.0 / 140.0 * 0.41, abs=1e-4)
    assert emissivity(T)[cooled].min() == pytest.approx(0.28)
    assert eps[-1] == 0.69


def test_the_end_faces_keep_their_oxide_ring_by_ring() -> None:
    # Not every ring has been as hot as the surface.
    setup, history = oxidised()
    T, ring = history.T, 2.0 * np.pi * np.diff(setup.section.mesh.edges**2)
    eps = emissivity(np.maximum.accumulate(T, axis=0))
    assert np.ptp(eps[history.stage == 1][0]) > 0.02
    per_area = eps * SIGMA * (T**4 - 293.15**4) + 10.0 * (T - 293.15)
    assert history.losses["loss: ends"] == pytest.approx(per_area @ ring, rel=1e-3, abs=1e-6)


# Plateaus -----------------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(("shape", "tolerance"), [("cylinder", "1 K"), ("plate", "0.1 K")])
def test_the_matrix_looks_ahead_into_the_melt(shape: str, tolerance: str, monkeypatch: pytest.MonkeyPatch) -> None:
    # Copper melts within 1 K. Measured: 27 and 39 steps; 92 and 96 with the slope of the start of the step alone.
    text = drive_case(
        shape, 'absorbed_power = "10 kW"', "3 kHz", 'duration = "600 s"', material="copper", tolerance=tolerance
    )
    ahead = run(setup_of(text))

    def plain(self: Stepper, start: Moment, step: float) -> Matrix:
        return start.matrix

    monkeypatch.setattr(Stepper, "_ahead", plain)
    behind = run(setup_of(text))
    assert ahead.status == behind.status == "limit"
    assert behind.time[-1] == pytest.approx(ahead.time[-1], rel=2e-3)
    assert behind.steps >= 1.5 * ahead.steps


def piece(words: str, material: str, initial: str = "20 °C") -> str:
    return f'format = 1\n[workpiece]\n{words}\nmaterial = "{material}"\nemissivity = 0.8\ninitial = "{initial}"\n'


def test_resting_on_the_curie_point() -> None:
    # 8 kA/m warm a magnetic bar and can not warm one that is not: it settles where it loses its permeability.
    text = (
        piece('shape = "cylinder"\ndiameter = "10 mm"\nlength = "100 mm"', "steel-c45")
        + """
[[schedule]]
stage = "heat"
drive = { surface_field = "8 kA/m", frequency = "100 kHz" }
until = { surface = "900 °C" }
longest = "3600 s"
"""
    )
    steps = 0

    def count(state: State) -> None:
        # A stall would take ten thousands of steps: no need to see them all.
        nonlocal steps
        steps += 1
        assert steps <= 200

    history = run(setup_of(text), count)
    assert (history.status, history.stages[0].reason) == ("cannot_reach", "settled")
    assert 766.0 < last_of(history, "surface") - 273.15 < 771.0
    # Over the last three steps; the power answers the last hundredths of a kelvin.
    gained = {name: series[-1] - series[-4] for name, series in history.energy.items()}
    lost = sum(joule for name, joule in gained.items() if name.startswith("loss: "))
    assert gained["absorbed"] == pytest.approx(lost, rel=0.01)


# Runs that once ended in an error -----------------------------------------------------------------------------------


def test_a_thin_wall_of_copper_closes() -> None:
    # Cells of 10 µm in steps of seconds: the diffusion number of a cell goes into the millions.
    text = (
        piece('shape = "tube"\nouter_diameter = "10 mm"\nwall = "0.5 mm"\nlength = "100 mm"', "copper")
        + """
[[schedule]]
stage = "heat"
drive = { surface_field = "462 kA/m", frequency = "917 Hz" }
until = { surface = "610 °C" }
longest = "600 s"

[[schedule]]
stage = "transfer"
until = { surface = "90 °C" }
duration = "3600 s"
"""
    )
    history = run(setup_of(text))
    assert [record.reason for record in history.stages] == ["target", "target"]
    assert account_gap(history.energy) <= CLOSURE


def test_a_millisecond_in_the_air_closes() -> None:
    # What is lost is a round-off of what is stored, known no better than its heat content allows.
    words = 'shape = "cylinder"\ndiameter = "60 mm"\nlength = "200 mm"'
    text = piece(words, "steel-c45", "1100 °C") + '[[schedule]]\nstage = "transfer"\nduration = "1 ms"\n'
    setup = setup_of(text)
    history = run(setup)
    assert history.time[-1] == pytest.approx(1e-3, rel=1e-12)
    lost = sum(series[-1] for name, series in history.energy.items() if name.startswith("loss: "))
    # Side: 0.8 sigma (T^4 - Ta^4) alone; with ends and free convection a little more.
    side = 0.8 * SIGMA * (1373.15**4 - 293.15**4) * np.pi * 0.06 * 0.2 * 1e-3
    assert 1.1 * side < lost < 1.4 * side


@pytest.mark.parametrize(("turns", "tube"), [(7, "0.75 mm"), (11, "0.5 mm"), (30, "0.18 mm")])
def test_a_tiny_tube_meets_its_field(turns: int, tube: str) -> None:
    # In a coil shorter than its bore is wide, at a field where the permeability of the tube falls with the current.
    words = 'shape = "tube"\nouter_diameter = "5.56 mm"\nwall = "0.556 mm"\nlength = "5.56 mm"'
    text = (
        piece(words, "steel-c45", "400 °C")
        + f"""
[coil]
turns = {turns}
inner_diameter = "9.56 mm"
length = "5.56 mm"
tube = "{tube}"

[supply]
power = "1 MW"
frequency = "292 Hz"

[[schedule]]
stage = "heat"
drive = {{ surface_field = "4.43 kA/m" }}
duration = "1 s"
"""
    )
    history = run(setup_of(text))
    assert history.H_surface_rms == pytest.approx(4430.0, rel=1e-5)
    assert set(history.limit) == {None}


@pytest.mark.parametrize("power", ["5 kW", "20 kW", "60 kW"])
@pytest.mark.parametrize("wall", ["1 mm", "2 mm", "3 mm"])
def test_a_tube_of_aluminium_driven_into_the_melt(wall: str, power: str) -> None:
    words = f'shape = "tube"\nouter_diameter = "137 mm"\nwall = "{wall}"\nlength = "200 mm"'
    text = (
        piece(words, "aluminium-6082")
        + f"""
[[schedule]]
stage = "heat"
drive = {{ absorbed_power = "{power}", frequency = "160 Hz" }}
duration = "3600 s"
"""
    )
    setup = setup_of(text)
    history = run(setup)
    assert (history.status, history.stages[-1].reason) == ("limit", "too hot")
    assert setup.material.liquidus is not None
    assert history.readings["maximum"][-1] == pytest.approx(setup.material.liquidus, abs=2e-3)
    assert account_gap(history.energy) <= CLOSURE
