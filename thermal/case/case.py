"""A case: the validated file in SI, and where it came from."""

from dataclasses import dataclass
from pathlib import Path

from thermal.case.schema import (
    CoilSection,
    Heat,
    LiningSection,
    NumericsSection,
    OutputSection,
    Reading,
    Stage,
    SupplySection,
    SurroundingsSection,
    Workpiece,
)


@dataclass(frozen=True)
class Case:
    """What to compute, in the words of the file, in SI (kelvin, rms).

    Parameters
    ----------
    name : stem of the file name, "case" for a text.
    folder : where files named in the case are looked for.
    text : the file as it was read.
    overrides : dotted path and value of everything set from outside the file, in the order of setting.
    defaults_used : one line for every default that was taken.
    materials : folder of the user's own materials, None where there is none.
    """

    name: str
    folder: Path
    text: str
    overrides: tuple[tuple[str, object], ...]
    defaults_used: tuple[str, ...]
    materials: Path | None
    format: int
    title: str
    workpiece: Workpiece
    coil: CoilSection | None
    lining: LiningSection | None
    supply: SupplySection | None
    surroundings: SurroundingsSection
    schedule: tuple[Stage, ...]
    readings: tuple[Reading, ...]
    numerics: NumericsSection
    output: OutputSection

    def frequency(self, stage: int) -> float:
        """Frequency [Hz] in a heat or hold stage: of the supply, or of the latest drive up to that stage."""
        if self.supply is not None:
            return self.supply.frequency
        given = [
            part.drive.frequency
            for part in self.schedule[: stage + 1]
            if isinstance(part, Heat) and part.drive.frequency is not None
        ]
        return given[-1]
