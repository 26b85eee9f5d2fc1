"""The result of a run as plain text for the console."""

import math
from collections.abc import Sequence
from pathlib import Path

import numpy as np

from thermal.case import Case
from thermal.constants import ZERO_CELSIUS
from thermal.report.advice import cautions, expectation, remarks
from thermal.report.text import bullets, columns, paragraph
from thermal.results.balance import relative_residual
from thermal.results.history import History
from thermal.results.stages import limit_spans, stage_ends
from thermal.results.verdict import LIMIT_WORDS, depth_of_maximum, sentence, spans_in_words
from thermal.setup import Setup

JOULES_PER_KWH = 3.6e6
LOSS_WORDS = {
    "radiation": "radiated",
    "convection": "taken by the gas (convection)",
    "lining": "through the coil lining",
    "ends": "lost at the end faces",
    "bore": "lost out of the bore",
}
REASON_WORDS = {"target": "target met", "time": "time is up"}
NO_COIL = (
    "No electrical answers: the case has no [coil] with a [supply], so supply power, coil current, voltage, "
    "efficiency and the energy drawn are not known."
)


def result_text(setup: Setup, case: Case, history: History, folder: Path | None) -> str:
    """Everything a reader wants to see first; folder is where the files are, None where none were written."""
    parts = [
        setup.title,
        paragraph(sentence(setup, history)),
        _headed("At the end of each stage", stage_table(setup, history)),
        _headed("Energy of this workpiece", energy_table(setup, history)),
        _headed("Peak values", peak_table(setup, history)),
    ]
    if setup.has_coil:
        parts.append(_headed("Limits of the supply", bullets(_limits(history))))
    parts.append(_headed("What to expect", bullets(expectation(case))))
    if notes := remarks(setup, case, history):
        parts.append(_headed("Notes", bullets(notes)))
    parts.append(_headed("Cautions", bullets(cautions(setup, history))))
    parts.append(f"Assumed: {len(setup.assumptions)} values; `thermal check` and summary.json list them.")
    if folder is not None:
        parts.append(paragraph(f"Files: {folder}"))
    return "\n\n".join(parts) + "\n"


def stage_table(setup: Setup, history: History) -> str:
    """State at the start and at the end of each stage, one column each."""
    ends = stage_ends(setup, history)
    rows = [
        ["", "start", *(end.name for end in ends)],
        ["ends because", "", *(REASON_WORDS.get(end.record.reason, end.record.reason) for end in ends)],
        ["time, s", *(f"{history.time[i]:.1f}" for i in (0, *(end.last for end in ends)))],
    ]
    moments = [0, *(end.last for end in ends)]
    for name, series in history.readings.items():
        if name == "spread":
            rows.append(["spread (surface - core), K", *(f"{round(float(series[i])):+d}" for i in moments)])
        else:
            rows.append([f"{name}, °C", *(str(round(float(series[i]) - ZERO_CELSIUS)) for i in moments)])
    depths = [f"{depth_of_maximum(history, i) * 1e3:.1f}" for i in moments]
    rows.append(["depth of the maximum, mm", *depths])
    return columns(rows)


def energy_table(setup: Setup, history: History) -> str:
    """Where the energy went, from the supply to the heat in the workpiece, every boundary named."""
    spent = {name: float(series[-1]) for name, series in history.energy.items()}
    whole = spent["supply"] if setup.has_coil else spent["absorbed"]
    rows = [["", "kWh", "%", "kWh/t"]]

    def add(label: str, energy: float) -> None:
        share = f"{100.0 * energy / whole:.1f}" if whole > 0.0 else "-"
        per_tonne = energy / setup.mass / 3600.0
        rows.append([label, f"{energy / JOULES_PER_KWH:.4f}", share, f"{per_tonne:.1f}"])

    if setup.has_coil:
        add("supply output at the coil terminals", spent["supply"])
        add("  lost in coil copper and leads", spent["coil"])
        if spent["tank"] > 0.0:
            add("  lost in the tank", spent["tank"])
    add("absorbed in the workpiece", spent["absorbed"])
    for name, energy in spent.items():
        if name.startswith("loss: "):
            account = name.removeprefix("loss: ")
            add(f"  {LOSS_WORDS.get(account, account)}", energy)
    add("stored as heat when the run ends", spent["stored"])
    told = [columns(rows)]
    if setup.has_coil and setup.share < 1.0:
        told.append(bullets([f"One of a row in the coil: {100.0 * setup.share:.1f} % of all coil and supply figures."]))
    if not setup.has_coil:
        told.append(bullets([NO_COIL]))
    told.append(bullets([f"The accounts close within {relative_residual(history.energy):.0e} of the energy moved."]))
    return "\n".join(told)


def peak_table(setup: Setup, history: History) -> str:
    """Largest values of the run; the electrical ones are of the whole coil."""
    on = history.absorbed_power > 0.0
    outer = setup.section.mesh.faces["outer"]
    flux = history.absorbed_power / float(outer.area.sum())
    rows = [["", "largest", "smallest with power on"]]

    def add(label: str, series: Sequence[float] | np.typing.NDArray[np.float64], digits: int) -> None:
        values = np.asarray(series)[on]
        if values.size and not np.isnan(values).all():
            rows.append([label, f"{np.nanmax(values):.{digits}f}", f"{np.nanmin(values):.{digits}f}"])

    if setup.has_coil:
        add("supply power, kW", history.supply_power / 1e3, 2)
        add("coil current, A rms", history.coil_current_rms, 0)
        add("coil voltage, V rms", history.coil_voltage_rms, 1)
        add("power factor at the coil terminals", history.power_factor, 3)
    add("absorbed power, kW", history.absorbed_power / 1e3, 2)
    add("absorbed per surface, kW/cm2", flux / 1e7, 4)
    add("field at the surface, kA/m rms", history.H_surface_rms / 1e3, 2)
    add("frequency, kHz", history.frequency / 1e3, 3)
    return columns(rows) if len(rows) > 1 else "  no power was used"


def _limits(history: History) -> list[str]:
    spans = limit_spans(history)
    if not spans:
        return ["no limit bound"]
    return [
        f"{LIMIT_WORDS[name]}: {spans_in_words(found)} ({math.fsum(b - a for a, b in found):.1f} s in all)"
        for name, found in spans.items()
    ]


def _headed(heading: str, body: str) -> str:
    return f"{heading}\n{body}"
