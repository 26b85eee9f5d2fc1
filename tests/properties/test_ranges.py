"""What the cases at random reach: every word of a case file, and both ends of the ranges. Shown with -s."""

from collections import Counter

from hypothesis import given, settings
from whole_cases import (
    ACROSS,
    ALLOYS,
    BY_COIL,
    DIRECT,
    FEW,
    FREQUENCY,
    GASES,
    LININGS,
    RATIO,
    Drawn,
    case_of,
    whole_cases,
)

import materials
from thermal.case import Case
from thermal.case.schema import Heat, Hold, Plate, Tube

DRAWS = 1000
NEAR = 1.02
"""An end counts as reached within 2 %."""


def across(case: Case) -> float:
    """[mm]"""
    piece = case.workpiece
    match piece:
        case Tube():
            return 1e3 * piece.outer_diameter
        case Plate():
            return 1e3 * piece.width
        case _:
            return 1e3 * piece.diameter


def words_of(case: Case) -> list[str]:
    """What the case makes use of."""
    piece, coil = case.workpiece, "coil" if case.coil is not None else "no coil"
    words = [piece.shape, piece.material, piece.neighbours, piece.axis, case.surroundings.gas]
    words.append(piece.surface or "emissivity")
    words.append("h" if case.surroundings.h is not None else "speed" if case.surroundings.speed else "still")
    words.append("no lining" if case.lining is None else case.lining.material)
    if case.supply is not None:
        words += [name for name in ("max_current", "max_voltage") if getattr(case.supply, name) is not None]
    for stage in case.schedule:
        words.append(stage.stage)
        if isinstance(stage, Heat):
            words.append(f"{stage.drive.kind}, {coil}")
            words.append("for a time" if stage.until is None else f"until {min(stage.until.targets)}")
        elif isinstance(stage, Hold):
            words.append(f"at {stage.at.reading}")
    return words


def test_ranges_of_the_cases_at_random() -> None:
    ratios: list[float] = []
    frequencies: list[float] = []
    sizes: list[float] = []
    words: Counter[str] = Counter()

    @settings(FEW, max_examples=DRAWS)
    @given(whole_cases())
    def draw(drawn: Drawn) -> None:
        case = case_of(drawn.document)
        ratios.append(drawn.ratio)
        frequencies.append(case.supply.frequency if case.supply is not None else case.frequency(len(case.schedule) - 1))
        sizes.append(across(case))
        words.update(words_of(case))

    draw()
    for name, unit, reached, (low, high) in (
        ("thickness over skin depth", "", ratios, RATIO),
        ("frequency", " Hz", frequencies, FREQUENCY),
        ("across", " mm", sizes, ACROSS),
    ):
        print(f"{name}: {min(reached):.4g} to {max(reached):.4g}{unit} in {len(reached)} cases")
        assert low / NEAR <= min(reached) <= low * NEAR
        assert high / NEAR <= max(reached) <= high * NEAR
    print(", ".join(f"{name} {count}" for name, count in sorted(words.items())))
    drives = [f"{drive}, coil" for drive in BY_COIL] + [f"{drive}, no coil" for drive in DIRECT]
    ends = ["for a time", *(f"until {name}" for name in ("surface", "core", "mean", "maximum", "TC1"))]
    held = [f"at {name}" for name in ("surface", "core", "mean", "TC1")]
    surfaces = [state for alloy in ALLOYS for state in materials.get(alloy).surfaces]
    other = ["cylinder", "tube", "plate", "none", "touching", "horizontal", "vertical", "emissivity", "no lining"]
    other += ["h", "speed", "still", "max_current", "max_voltage", "heat", "hold", "transfer"]
    missing = {*drives, *ends, *held, *surfaces, *other, *ALLOYS, *GASES, *LININGS} - set(words)
    assert not missing
