"""The files of a run, written all at once or not at all."""

import os
import secrets
import shutil
from pathlib import Path

from thermal.case import Case, as_run
from thermal.errors import ThermalError
from thermal.report.curves import curves_csv, profiles_csv
from thermal.report.figures import save_curves
from thermal.report.summary import summary_text
from thermal.results.history import History
from thermal.setup import Setup

FILES = ("summary.json", "curves.csv", "profiles.csv", "curves.png", "curves.svg", "case.toml")
"""What a folder of results holds; nothing else is ever replaced."""


class OutputError(ThermalError):
    """The results cannot go where they were sent."""


def demand_place(folder: Path, force: bool) -> None:
    """Refuse a folder that results cannot be written to, before time is spent on a run.

    Raises
    ------
    OutputError : the folder has results and force is not set, holds other files, or cannot be made.
    """
    if folder.exists() and not folder.is_dir():
        raise OutputError(f"{folder}: is a file, results go into a folder")
    found = sorted(path.name for path in folder.iterdir()) if folder.is_dir() else []
    if found and not force:
        raise OutputError(f"{folder}: is not empty, add --force to replace the results or name another with --out")
    strange = [name for name in found if name not in FILES]
    if strange:
        raise OutputError(f"{folder}: holds '{strange[0]}', which is no result of a run; name another with --out")
    above = next(path for path in folder.absolute().parents if path.exists())
    if not (above.is_dir() and os.access(above, os.W_OK | os.X_OK)):
        raise OutputError(f"{folder}: cannot be written, {above} does not allow it")


def write_results(folder: Path, setup: Setup, case: Case, history: History, *, force: bool = False) -> None:
    """Write all files of a run; what was in the folder stays as it was until the new files are complete.

    Parameters
    ----------
    folder : where to; made with the folders above it.
    force : replace the results that are there.

    Raises
    ------
    OutputError : the folder cannot be used, see demand_place, or writing fails.
    """
    folder = folder.resolve()
    demand_place(folder, force)
    fresh = folder.with_name(f".{folder.name}.{secrets.token_hex(4)}.new")
    try:
        folder.parent.mkdir(parents=True, exist_ok=True)
        fresh.mkdir()
        try:
            _write(fresh, setup, case, history)
            _put_in_place(fresh, folder)
        finally:
            shutil.rmtree(fresh, ignore_errors=True)
    except OSError as error:
        raise OutputError(f"{folder}: cannot be written ({error.strerror})") from None


def _write(folder: Path, setup: Setup, case: Case, history: History) -> None:
    texts = {
        "summary.json": summary_text(setup, case, history),
        "curves.csv": curves_csv(setup, case, history),
        "profiles.csv": profiles_csv(setup, case, history),
        "case.toml": as_run(case),
    }
    for name, text in texts.items():
        (folder / name).write_text(text, encoding="utf-8", newline="\n")
    save_curves(setup, case, history, folder)


def _put_in_place(fresh: Path, folder: Path) -> None:
    """Rename the new folder to its place; the old one steps aside and is deleted when the new one is there."""
    if not folder.exists():
        fresh.rename(folder)
        return
    aside = folder.with_name(f"{fresh.name}.old")
    folder.rename(aside)
    try:
        fresh.rename(folder)
    except OSError:
        aside.rename(folder)
        raise
    shutil.rmtree(aside)
