"""`thermal time`, `peak`, `compare` and `frequency`: questions put to a case."""

from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from thermal.cli.changes import Changes, overrides
from thermal.cli.exits import NOT_REACHED, exit_codes, say
from thermal.cli.material import Folder

if TYPE_CHECKING:
    from thermal.case import Case
    from thermal.questions.answer import Answer

CaseFile = Annotated[Path, typer.Argument(help="Case file (TOML).")]
Out = Annotated[
    Path | None,
    typer.Option(help="Folder for the answer, an earlier one is replaced; results/<case name>-<question> if left out."),
]
AsJson = Annotated[bool, typer.Option("--json", help="Print the answer as JSON.")]


def time(
    case: CaseFile,
    to: Annotated[str, typer.Option(help='Temperature, such as "1150 °C".')],
    at: Annotated[str, typer.Option(help="surface, core, mean, maximum or a reading of the case.")] = "core",
    out: Out = None,
    changes: Changes = None,
    materials: Folder = None,
    as_json: AsJson = False,
) -> None:
    """How long until it is at temperature, or where it stops short of it (exit code 3)."""
    with exit_codes():
        from thermal.questions.time_to_temperature import time_to_temperature

        target = _quantity("--to", to, "temperature")
        _answer("time", case, changes, materials, out, as_json, lambda asked: time_to_temperature(asked, target, at=at))


def peak(
    case: CaseFile,
    power: Annotated[str | None, typer.Option(help="Power of the supply in place of the first drive.")] = None,
    absorbed: Annotated[str | None, typer.Option(help="Power absorbed in place of the first drive.")] = None,
    out: Out = None,
    changes: Changes = None,
    materials: Folder = None,
    as_json: AsJson = False,
) -> None:
    """How hot a power can get it: every state of rest, and what passes a stall."""
    with exit_codes():
        from thermal.questions.peak_temperature import peak_temperature

        supply_power = None if power is None else _quantity("--power", power, "power")
        absorbed_power = None if absorbed is None else _quantity("--absorbed", absorbed, "power")

        def ask(asked: "Case") -> "Answer[object]":
            return peak_temperature(asked, supply_power=supply_power, absorbed_power=absorbed_power)

        _answer("peak", case, changes, materials, out, as_json, ask)


def compare(
    case: CaseFile,
    materials: Annotated[str, typer.Option(help="Keys with commas between, the first one the measure of the others.")],
    to: Annotated[str | None, typer.Option(help="Common temperature; the target of the case if left out.")] = None,
    at: Annotated[str | None, typer.Option(help="Reading it is asked of; that of the case's target.")] = None,
    target: Annotated[
        list[str] | None, typer.Option("--target", metavar="KEY=TEMPERATURE", help="A target of its own for a metal.")
    ] = None,
    out: Out = None,
    changes: Changes = None,
    as_json: AsJson = False,
) -> None:
    """Which metal: the same coil and supply on different metals."""
    with exit_codes():
        from thermal.errors import CaseError
        from thermal.questions.compare import compare as compare_metals

        keys = [key.strip() for key in materials.split(",") if key.strip()]
        common = None if to is None else _quantity("--to", to, "temperature")
        targets = {}
        for each in target or []:
            key, equals, text = each.partition("=")
            if not equals:
                raise CaseError(f"--target    '{each}' is not key=temperature, write for example copper=\"800 °C\"")
            targets[key.strip()] = _quantity("--target", text, "temperature")
        _answer(
            "compare",
            case,
            changes,
            None,
            out,
            as_json,
            lambda asked: compare_metals(asked, keys, to=common, at=at, targets=targets),
        )


def frequency(
    case: CaseFile,
    to: Annotated[str | None, typer.Option(help="Target; the highest temperature of the schedule if left out.")] = None,
    out: Out = None,
    changes: Changes = None,
    materials: Folder = None,
    as_json: AsJson = False,
) -> None:
    """Which frequency suits the section: too low, good, needlessly high."""
    with exit_codes():
        from thermal.questions.frequency import frequency_window

        target = None if to is None else _quantity("--to", to, "temperature")
        _answer("frequency", case, changes, materials, out, as_json, lambda asked: frequency_window(asked, T=target))


def _answer(
    question: str,
    path: Path,
    changes: list[str] | None,
    materials: Path | None,
    out: Path | None,
    as_json: bool,
    ask: "Callable[[Case], Answer[object]]",
) -> None:
    from thermal.case import load_case
    from thermal.report.answer_files import demand_answer_place, write_answer
    from thermal.report.answers import answer_json, answer_text

    case = load_case(path, overrides(changes), materials=materials)
    folder = out if out is not None else Path("results") / f"{case.name}-{question}"
    demand_answer_place(folder, question)
    answer = ask(case)
    written: Path | None = None
    try:
        write_answer(folder, answer, case)
        written = folder
    finally:  # the answer is shown even where it cannot be written
        say(answer_json(answer, case) if as_json else answer_text(answer, case, written))
    raise typer.Exit(0 if answer.met else NOT_REACHED)


def _quantity(option: str, text: str, dimension: str) -> float:
    """SI value of an option.

    Raises
    ------
    CaseError : it is no such quantity.
    """
    from materials.errors import UnitError
    from materials.units import quantity
    from thermal.errors import CaseError

    try:
        return quantity(text, dimension)
    except UnitError as error:
        raise CaseError(f"{option}    {error}") from None
