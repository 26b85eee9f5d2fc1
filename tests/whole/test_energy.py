"""The energy accounts of whole runs: stored + lost = absorbed, whatever the shape, drive, stage or tolerance.

Demanded: |stored + lost - absorbed| <= 1e-11 of the largest of the three at every moment. Stored is read from the
cells, lost from the faces, absorbed from the field; the tests with something left out show that the sum would notice.
"""

from collections.abc import Callable

import numpy as np
import pytest
from cases_in_words import coil_case, drive_case
from tools import account_gap

from thermal.build import build
from thermal.case import from_text
from thermal.conduction.step import Matrix, Rates, Step, rosenbrock_step
from thermal.errors import BalanceError
from thermal.interfaces import Array
from thermal.loop import run
from thermal.results.balance import CLOSURE
from thermal.results.history import History
from thermal.setup import Setup
from thermal.stepper import Moment, Stepper

SHAPES = ("cylinder", "tube", "plate")
HEAT_HOLD_TRANSFER = """
[[schedule]]
stage = "heat"
drive = { supply_power = "30 kW" }
duration = "5 s"

[[schedule]]
stage = "hold"
at = { surface = "400 °C" }
duration = "3 s"

[[schedule]]
stage = "transfer"
duration = "4 s"
"""


def setup_of(text: str) -> Setup:
    return build(from_text(text, "."))


def stored_from_temperatures(setup: Setup, history: History) -> float:
    """[J] from the end temperatures and the material, past enthalpy table and accounts of the run."""
    caloric, mesh = setup.material.caloric, setup.section.mesh
    rise = caloric.enthalpy(history.T[-1]) - caloric.enthalpy(setup.T_initial)
    return setup.material.density * float(mesh.volume @ rise)


def demand_closed(setup: Setup, history: History) -> None:
    assert account_gap(history.energy) <= CLOSURE
    assert CLOSURE <= 1e-11
    assert history.energy["stored"][-1] == pytest.approx(stored_from_temperatures(setup, history), rel=1e-9)


@pytest.mark.parametrize("neighbours", ["none", "touching"])
@pytest.mark.parametrize("lining", [False, True], ids=["bare", "lined"])
@pytest.mark.parametrize("shape", SHAPES)
def test_every_shape_and_stage(shape: str, lining: bool, neighbours: str) -> None:
    setup = setup_of(coil_case(shape, lining, neighbours) + HEAT_HOLD_TRANSFER)
    history = run(setup)
    assert [record.kind for record in history.stages] == ["heat", "hold", "transfer"]
    demand_closed(setup, history)
    lost = {name for name, series in history.energy.items() if name.startswith("loss: ") and series[-1] > 0.0}
    expected = {"loss: radiation", "loss: convection", "loss: ends"} | ({"loss: lining"} if lining else set())
    own = {"cylinder": set[str](), "tube": {"loss: bore"}, "plate": {"loss: edges"}}
    assert lost == expected | own[shape]


@pytest.mark.parametrize(
    "drive",
    [
        'supply_power = "20 kW"',
        'absorbed_power = "15 kW"',
        'coil_current = "900 A"',
        'coil_voltage = "100 V"',
        'surface_field = "60 kA/m"',
    ],
)
def test_every_drive(drive: str) -> None:
    setup = setup_of(
        coil_case("cylinder", True, "none") + f'[[schedule]]\nstage = "heat"\ndrive = {{ {drive} }}\nduration = "4 s"\n'
    )
    history = run(setup)
    demand_closed(setup, history)
    assert history.energy["absorbed"][-1] > 0.0
    # Supply = coil copper + workpiece, a third account of its own.
    supply, coil, absorbed = (history.energy[name][-1] for name in ("supply", "coil", "absorbed"))
    assert supply == pytest.approx(coil + absorbed, rel=1e-9)


@pytest.mark.parametrize("shape", SHAPES)
@pytest.mark.parametrize("drive", ['absorbed_power = "15 kW"', 'surface_field = "60 kA/m"'])
def test_without_a_coil(shape: str, drive: str) -> None:
    setup = setup_of(drive_case(shape, drive, "3 kHz", 'duration = "4 s"'))
    history = run(setup)
    demand_closed(setup, history)
    assert set(history.energy) >= {"absorbed", "stored", "loss: radiation", "loss: convection", "loss: ends"}


@pytest.mark.parametrize("tolerance", ["0.03 K", "3 K"])
def test_closes_at_any_tolerance(tolerance: str) -> None:
    text = coil_case("cylinder", False, "none") + HEAT_HOLD_TRANSFER + f'[numerics]\ntolerance = "{tolerance}"\n'
    setup = setup_of(text)
    demand_closed(setup, run(setup))


def test_absorbed_energy_is_the_integral_of_the_power() -> None:
    # Closure alone would not notice an account of the wrong size on both sides.
    setup = setup_of(drive_case("cylinder", 'absorbed_power = "15 kW"', "3 kHz", 'duration = "4 s"'))
    history = run(setup)
    assert history.energy["absorbed"][-1] == pytest.approx(15e3 * 4.0, rel=2e-6)


@pytest.mark.parametrize("tolerance", ["0.3 K", "1 K", "3 K"])
@pytest.mark.parametrize(
    ("material", "power"),
    [("aluminium-6082", "10 kW"), ("aluminium-6082", "20 kW"), ("copper", "10 kW"), ("copper", "60 kW")],
)
def test_closes_into_the_melt(material: str, power: str, tolerance: str) -> None:
    # Through the latent heat up to the liquidus, where the run stops and says so. Copper melts within 1 K: there dT/dH
    # jumps 400-fold from cell to cell and from step to step.
    end = 'duration = "600 s"'
    setup = setup_of(
        drive_case("cylinder", f'absorbed_power = "{power}"', "3 kHz", end, material=material, tolerance=tolerance)
    )
    history = run(setup)
    assert setup.material.liquidus is not None
    assert history.readings["maximum"][-1] == pytest.approx(setup.material.liquidus, abs=2e-3)
    assert (history.status, history.stages[-1].reason) == ("limit", "too hot")
    demand_closed(setup, history)


# What a leak looks like ---------------------------------------------------------------------------------------------


def leaking_case() -> Setup:
    return setup_of(drive_case("tube", 'surface_field = "80 kA/m"', "3 kHz", 'duration = "4 s"', tolerance="1 K"))


def test_the_leaking_case_is_tight_as_it_is() -> None:
    assert account_gap(run(leaking_case()).energy) <= CLOSURE


@pytest.mark.parametrize("account", ["absorbed", "loss: radiation", "loss: convection", "loss: ends", "loss: bore"])
def test_dropping_an_account_is_noticed(account: str, monkeypatch: pytest.MonkeyPatch) -> None:
    whole = Stepper.moment

    def without(self: Stepper, *args: object, **named: object) -> Moment:
        found = whole(self, *args, **named)  # type: ignore[arg-type]  # passed through as it came
        found.rates.accounts[self.accounts.index(account)] = 0.0
        return found

    monkeypatch.setattr(Stepper, "moment", without)
    with pytest.raises(BalanceError, match="do not close"):
        run(leaking_case())


@pytest.mark.parametrize("cell", [0, 20, -1])
def test_dropping_a_cell_is_noticed(cell: int, monkeypatch: pytest.MonkeyPatch) -> None:
    whole = Stepper.moment

    def without(self: Stepper, *args: object, **named: object) -> Moment:
        found = whole(self, *args, **named)  # type: ignore[arg-type]  # passed through as it came
        found.rates.heat_flow[cell] = 0.0
        return found

    monkeypatch.setattr(Stepper, "moment", without)
    with pytest.raises(BalanceError):
        run(leaking_case())


@pytest.mark.parametrize("stage", [1, 2, 3])
def test_dropping_a_stage_is_noticed(stage: int, monkeypatch: pytest.MonkeyPatch) -> None:
    # The accounts of one stage of the step are lost, the cells keep theirs.
    whole = rosenbrock_step

    def without(
        H: Array,
        extra: Array,
        first: Rates,
        matrix: Matrix,
        volume: Array,
        step: float,
        rates: Callable[[Array, Array], Rates],
    ) -> Step:
        seen = 0

        def forgetful(H_stage: Array, extra_stage: Array) -> Rates:
            nonlocal seen
            seen += 1
            found: Rates = rates(H_stage, extra_stage)
            return Rates(found.heat_flow, np.zeros_like(found.accounts), found.extra) if seen == stage else found

        return whole(H, extra, first, matrix, volume, step, forgetful)

    monkeypatch.setattr("thermal.stepper.rosenbrock_step", without)
    with pytest.raises(BalanceError):
        run(leaking_case())


def test_dropping_the_linearised_loss_is_noticed(monkeypatch: pytest.MonkeyPatch) -> None:
    # The accounts must follow the same linearised loss as the cells do.
    whole = rosenbrock_step

    def without(
        H: Array,
        extra: Array,
        first: Rates,
        matrix: Matrix,
        volume: Array,
        step: float,
        rates: Callable[[Array, Array], Rates],
    ) -> Step:
        done = whole(H, extra, first, matrix, volume, step, rates)
        plain = Matrix(matrix.conductance, matrix.dT_dH, ())
        loose = whole(H, extra, first, plain, volume, step, rates)
        return Step(done.H, loose.gained, done.extra, done.error)

    monkeypatch.setattr("thermal.stepper.rosenbrock_step", without)
    with pytest.raises(BalanceError):
        run(leaking_case())
