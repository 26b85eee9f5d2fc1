"""The result of a run as plain text for the console."""

import math
from pathlib import Path

import numpy as np

from thermal.case import Case
from thermal.constants import ZERO_CELSIUS
from thermal.report.advice import cautions, expectation, remarks
from thermal.report.text import bullets, columns, paragraph
from thermal.report.words import reading_in_words
from thermal.results.balance import relative_residual
from thermal.results.history import Array, History
from thermal.results.stages import limit_spans, stage_ends
from thermal.results.verdict import LIMIT_WORDS, depth_of_maximum, power_unit, seconds, sentence, spans_in_words
from thermal.setup import Setup

SMALL = 3.6e5
"""Below this energy [J], 0.1 kWh, a table of energies is in Wh."""
LOSS_WORDS = {
    "radiation": "radiated",
    "convection": "taken by the gas (convection)",
    "lining": "through the coil lining",
    "ends": "lost at the end faces",
    "edges": "lost at the narrow edges",
    "bore": "lost out of the bore",
}
NOTHING = 1e-9
"""Share of the largest energy below which a row says nothing."""
FLICKER = 1e-2
"""Share of the largest absorbed power below which the power counts as off in the table of peak values."""
PIECE, COIL = "this piece", "whole coil"
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
    ]
    if notes := remarks(setup, case, history):
        parts.append(_headed("Notes", bullets(notes)))
    parts += [
        _headed("At the end of each stage", stage_table(setup, history)),
        _headed("Energy of this workpiece", energy_table(setup, history)),
        _headed("Peak values", peak_table(setup, history)),
    ]
    if setup.has_coil:
        parts.append(_headed("Limits of the supply", bullets(_limits(history))))
    parts.append(_headed("What to expect", bullets(expectation(case))))
    parts.append(f"Assumed: {len(setup.assumptions)} values; `thermal check` and summary.json list them.")
    if folder is not None:
        parts.append(paragraph(f"Files: {folder}"))
    short = [each.short for each in cautions(setup, float(history.readings["maximum"].max()))]
    parts.append(_headed("Cautions, in short (in full in summary.json)", bullets(short)))
    return "\n\n".join(parts) + "\n"


def stage_table(setup: Setup, history: History) -> str:
    """State at the start and at the end of each stage, one column each."""
    ends = stage_ends(setup, history)
    digits = 1 if history.time[-1] >= 10.0 else 4
    rows = [
        ["", "start", *(end.name for end in ends)],
        ["ends because", "", *(REASON_WORDS.get(end.record.reason, end.record.reason) for end in ends)],
        ["time, s", *(f"{history.time[i]:.{digits}f}" for i in (0, *(end.last for end in ends)))],
    ]
    moments = [0, *(end.last for end in ends)]
    for name, series in history.readings.items():
        if name == "spread":
            rows.append(["spread (surface - core), K", *(f"{round(float(series[i])):+d}" for i in moments)])
        else:
            rows.append(
                [
                    f"{reading_in_words(name, setup)}, °C",
                    *(str(round(float(series[i]) - ZERO_CELSIUS)) for i in moments),
                ]
            )
    depths = [f"{depth_of_maximum(history, i) * 1e3:.1f}" for i in moments]
    rows.append(["depth of the maximum, mm", *depths])
    return columns(rows)


def energy_table(setup: Setup, history: History) -> str:
    """Where the energy went, from the supply to the heat in the workpiece, every boundary named."""
    spent = {name: float(series[-1]) for name, series in history.energy.items()}
    whole = spent["supply"] if setup.has_coil else spent["absorbed"]
    largest = max(abs(energy) for energy in spent.values())
    unit, joules, digits = ("Wh", 3.6e3, 2) if largest < SMALL else ("kWh", 3.6e6, 4)
    rows = [["", unit, "%", "kWh/t"]]

    def add(label: str, energy: float) -> None:
        if abs(energy) <= NOTHING * largest:
            return
        share = f"{100.0 * energy / whole:.1f}" if whole > 0.0 else "-"
        per_tonne = energy / setup.mass / 3600.0
        rows.append([label, f"{energy / joules:.{digits}f}", share, f"{per_tonne:.1f}"])

    if setup.has_coil:
        add("supply output, leads and coil", spent["supply"])
        add("  lost in coil copper and leads", spent["coil"])
        add("  lost in the tank", spent["tank"])
    add("absorbed in the workpiece", spent["absorbed"])
    for name, energy in spent.items():
        if name.startswith("loss: "):
            account = name.removeprefix("loss: ")
            words = LOSS_WORDS.get(account, account)
            # In a touching row a face without losses in the coil loses heat only once the piece is out.
            alone = ", in the open (transfer)" if setup.losses["coil"].get(account) == () else ""
            add(f"  {words}{alone}", energy)
    add("stored as heat when the run ends", spent["stored"])
    told = [columns(rows)]
    if setup.has_coil and setup.share < 1.0:
        told.append(bullets([f"One of a row in the coil: {100.0 * setup.share:.1f} % of all coil and supply figures."]))
    if not setup.has_coil:
        told.append(bullets([NO_COIL]))
    told.append(bullets([f"The accounts close within {relative_residual(history.energy):.0e} of the energy moved."]))
    return "\n".join(told)


def peak_table(setup: Setup, history: History) -> str:
    """Largest and smallest values of the run, and whether each is of this piece or of the whole coil."""
    # A hold that begins or goes on again passes through next to no power for a moment: no smallest value to be told.
    on = history.absorbed_power > FLICKER * history.absorbed_power.max()
    outer = setup.section.mesh.faces["outer"]
    flux = history.absorbed_power / float(outer.area.sum())
    rows = [["", "of", "largest", "smallest with power on"]]

    def add(label: str, of: str, series: Array, digits: int) -> None:
        values = series[on]
        if values.size and not np.isnan(values).all():
            rows.append([label, of, f"{np.nanmax(values):.{digits}f}", f"{np.nanmin(values):.{digits}f}"])

    if setup.has_coil:
        unit, watts = power_unit(float(history.supply_power.max()))
        add(f"supply power, {unit}", COIL, history.supply_power / watts, 2 if unit == "kW" else 1)
        add("coil current, A rms", COIL, history.coil_current_rms, 0)
        add("coil voltage, V rms", COIL, history.coil_voltage_rms, 1)
        add("power factor at the coil terminals", COIL, history.power_factor, 3)
        drawn = np.where(on, setup.share * history.supply_power, np.nan)
        add("electrical efficiency (absorbed/supply), %", COIL, 100.0 * history.absorbed_power / drawn, 1)
    unit, watts = power_unit(float(history.absorbed_power.max()))
    add(f"absorbed power, {unit}", PIECE, history.absorbed_power / watts, 2 if unit == "kW" else 1)
    add("absorbed per surface, W/cm2", PIECE, flux / 1e4, 1)
    add("field at the surface, kA/m rms", PIECE, history.H_surface_rms / 1e3, 2)
    unit, hertz = ("kHz", 1e3) if setup.frequency >= 1e3 else ("Hz", 1.0)
    add(f"frequency, {unit}", COIL if setup.has_coil else PIECE, history.frequency / hertz, 3 if hertz > 1.0 else 0)
    return columns(rows) if len(rows) > 1 else "  no power was used"


def _limits(history: History) -> list[str]:
    spans = limit_spans(history)
    if not spans:
        return ["no limit bound"]
    return [
        f"{LIMIT_WORDS[name]}: {spans_in_words(found)} ({seconds(math.fsum(b - a for a, b in found))} in all)"
        for name, found in spans.items()
    ]


def _headed(heading: str, body: str) -> str:
    return f"{heading}\n{body}"
