"""What the material data do not allow."""

from pathlib import Path

import pytest

from thermal.case import from_text
from thermal.case.starter import starter
from thermal.errors import CaseError

BILLET = starter("billet")


def _problem(text: str, folder: Path = Path()) -> str:
    with pytest.raises(CaseError) as caught:
        from_text(text, folder)
    (problem,) = caught.value.problems
    return problem


def test_unknown_material_names_the_nearest() -> None:
    problem = _problem(BILLET.replace('"steel-c45"', '"steel-c54"'))
    assert problem.startswith("line 8   workpiece.material: unknown material 'steel-c54', did you mean ")
    assert "steel-c45" in problem


def test_missing_material_file(tmp_path: Path) -> None:
    problem = _problem(BILLET.replace('"steel-c45"', '"mine.toml"'), tmp_path)
    assert problem.startswith("line 8   workpiece.material: ")
    assert "mine.toml: cannot be read" in problem


def test_unknown_surface_state_lists_those_there_are() -> None:
    problem = _problem(BILLET.replace('"oxidised"', '"oxidized"', 1))
    assert problem.startswith(
        "line 9   workpiece.surface: steel-c45 has no surface state 'oxidized', did you mean 'oxidised'? (it has: "
    )
    assert "did you mean 'oxidised'? (it has: " in problem


def test_unknown_surface_state_without_a_near_one() -> None:
    assert "steel-c45 has no surface state 'qqq' (it has: " in _problem(BILLET.replace('"oxidised"', '"qqq"', 1))


def test_unknown_lining_and_gas() -> None:
    lining = BILLET.replace('thickness = "8 mm"', 'thickness = "8 mm"\nmaterial = "plaster"')
    assert _problem(lining).startswith("line 21  lining.material: unknown lining 'plaster'")
    gas = BILLET.replace("[surroundings]", '[surroundings]\ngas = "aire"')
    assert _problem(gas).startswith("line 28  surroundings.gas: unknown gas 'aire', did you mean 'air'?")


def test_target_at_the_solidus() -> None:
    problem = _problem(BILLET.replace("1150 °C", "1520 °C"))
    assert problem.startswith("line 34  schedule.0.until.core (heat): 1520 °C is not below the solidus of steel-c45 (")


def test_hold_above_the_solidus() -> None:
    text = BILLET + '[[schedule]]\nstage = "hold"\nat = { TC1 = "1550 °C" }\nduration = "5 s"\n'
    assert "schedule.2.at.TC1 (hold): 1550 °C is not below the solidus of steel-c45 (" in _problem(text)


def test_initial_temperature_outside_the_data() -> None:
    cold = _problem(BILLET.replace('initial = "20 °C"', 'initial = "-150 °C"'))
    assert cold.startswith("line 10  workpiece.initial: -150 °C is below the data of steel-c45 (")
    hot = BILLET.replace('initial = "20 °C"', 'initial = "1600 °C"').replace("1150 °C", "1650 °C")
    with pytest.raises(CaseError) as caught:
        from_text(hot, ".")
    assert [problem.split(":")[0] for problem in caught.value.problems] == [
        "line 10  workpiece.initial",
        "line 34  schedule.0.until.core (heat)",
    ]
