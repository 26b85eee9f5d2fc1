"""`thermal bench`."""

import os
import sys
from pathlib import Path
from typing import Annotated

import typer

from thermal.cli.exits import exit_codes, say

USUAL_CASE = Path("cases/billet_forging.toml")
THREADS = ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS")
"""What tells the BLAS libraries how many threads to use; read when NumPy is loaded, also by processes started here."""


def bench(
    case: Annotated[Path | None, typer.Argument(help=f"Case to time besides; {USUAL_CASE} if left out.")] = None,
    quick: Annotated[bool, typer.Option("--quick", help="Only SciPy's BDF and LSODA, fewer turns.")] = False,
    as_json: Annotated[bool, typer.Option("--json", help="Print JSON.")] = False,
    show_fipy: Annotated[bool, typer.Option("--show-fipy", help="Print the FiPy script and measure nothing.")] = False,
) -> None:
    """Time the solver beside general libraries, at equal error; the whole table takes some minutes."""
    os.environ.update(dict.fromkeys(THREADS, "1"))
    with exit_codes():
        if show_fipy:
            from importlib.resources import files

            say(files("thermal.crosscheck").joinpath("fipy_script.py").read_text(encoding="utf-8"))
            return

        import json

        from thermal.crosscheck.bench import measure
        from thermal.report.benchmark import benchmark_json, benchmark_text

        absent = str(USUAL_CASE) if case is None and not USUAL_CASE.exists() else None
        timed = None if absent else (case or USUAL_CASE)
        found = measure(timed, quick, _announce)
        if as_json:
            say(json.dumps(benchmark_json(found, absent), indent=2, ensure_ascii=False) + "\n")
        else:
            say(benchmark_text(found, absent))


def _announce(text: str) -> None:
    """What is being measured, on a terminal."""
    if sys.stderr.isatty():
        print(text, file=sys.stderr, flush=True)
