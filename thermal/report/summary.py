"""The result of a run as one JSON object; every name of a quantity ends in its unit."""

import hashlib
import json
import math
from typing import Any

from thermal.case import Case, as_run
from thermal.constants import ZERO_CELSIUS
from thermal.report.advice import cautions, expectation, remarks
from thermal.report.versions import versions
from thermal.results.balance import relative_residual
from thermal.results.history import History
from thermal.results.stages import StageEnd, limit_spans, stage_ends
from thermal.results.verdict import depth_of_maximum, margin_to_solidus, sentence, specific_energy
from thermal.setup import Setup


def summary(setup: Setup, case: Case, history: History) -> dict[str, Any]:
    """What scripts may rely on; quantities that do not exist (electrical ones without a coil) are None."""
    energy, account = specific_energy(setup, history)
    hottest = int(history.readings["maximum"].argmax())
    return {
        "status": history.status,
        "sentence": sentence(setup, history),
        "title": setup.title,
        "stages": [_stage(history, end) for end in stage_ends(setup, history)],
        "maximum_C": _number(history.readings["maximum"][hottest] - ZERO_CELSIUS),
        "maximum_depth_mm": _number(depth_of_maximum(history, hottest) * 1e3),
        "maximum_time_s": _number(history.time[hottest]),
        "margin_to_solidus_K": margin_to_solidus(setup, history),
        "specific_energy_kWh_per_t": _number(energy / 3600.0),
        "specific_energy_from": account,
        "peaks": _peaks(history),
        "balance": {
            **{f"{_name(name)}_J": _number(series[-1]) for name, series in history.energy.items()},
            "relative_residual": _number(relative_residual(history.energy)),
        },
        "limits": [
            {"limit": name, "from_s": _number(start), "to_s": _number(end)}
            for name, spans in limit_spans(history).items()
            for start, end in spans
        ],
        "mass_kg": _number(setup.mass),
        "share_of_coil": _number(setup.share) if setup.has_coil else None,
        "assumptions": list(setup.assumptions),
        "notes": list(remarks(setup, case, history)),
        "expectation": list(expectation(case)),
        "cautions": [each.full for each in cautions(setup, float(history.readings["maximum"].max()))],
        "sources": [
            {"quantity": f"{setup.material.key}: {name}", "source": each.key, "where": each.locator, "kind": each.kind}
            for name, each in setup.material.sources()
        ],
        "steps": history.steps,
        "rejected": history.rejected,
        "field_solves": history.field_solves,
        "cells": int(history.r.size),
        "wall_s": _number(history.wall_s),
        "versions": versions(),
        "case_sha256": hashlib.sha256(as_run(case).encode()).hexdigest(),
    }


def summary_text(setup: Setup, case: Case, history: History) -> str:
    """The summary as JSON text."""
    return json.dumps(summary(setup, case, history), indent=2, ensure_ascii=False, allow_nan=False) + "\n"


def _stage(history: History, end: StageEnd) -> dict[str, Any]:
    i, record = end.last, end.record
    told: dict[str, Any] = {
        "name": end.name,
        "kind": record.kind,
        "start_s": _number(record.start),
        "end_s": _number(record.end),
        "reason": record.reason,
        "met": record.met,
    }
    for name, series in history.readings.items():
        if name == "spread":
            told["spread_K"] = _number(series[i])
        else:
            told[f"{name}_C"] = _number(series[i] - ZERO_CELSIUS)
    told["maximum_depth_mm"] = _number(depth_of_maximum(history, i) * 1e3)
    return told


def _peaks(history: History) -> dict[str, Any]:
    series = {
        "supply_power_W": history.supply_power,
        "absorbed_power_W": history.absorbed_power,
        "coil_current_A_rms": history.coil_current_rms,
        "coil_voltage_V_rms": history.coil_voltage_rms,
        "H_surface_A_per_m_rms": history.H_surface_rms,
    }
    return {name: _number(values.max()) for name, values in series.items()}


def _name(account: str) -> str:
    return account.replace(": ", "_")


def _number(value: float) -> float | None:
    """A plain number; None where there is none (JSON knows no NaN)."""
    number = float(value)
    return number if math.isfinite(number) else None
