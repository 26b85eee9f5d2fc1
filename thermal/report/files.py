"""The files of a run, written all at once or not at all."""

import secrets
import shutil
import tomllib
from dataclasses import replace
from pathlib import Path

from thermal.case import Case, as_run
from thermal.errors import ThermalError
from thermal.report.curves import curves_csv, profiles_csv
from thermal.report.figures import save_curves
from thermal.report.summary import summary_text
from thermal.results.history import History
from thermal.setup import Setup

FILES = ("summary.json", "curves.csv", "profiles.csv", "curves.png", "curves.svg", "case.toml")
"""What a folder of results holds, besides a material of the user's own; nothing else is ever replaced."""


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
    strange = [name for name in found if name not in FILES and name != _material_in(folder)]
    if strange:
        raise OutputError(f"{folder}: holds '{strange[0]}', which is no result of a run; name another with --out")
    above = next(path for path in folder.absolute().parents if path.exists())
    trial = above / _fresh_name(folder)
    try:
        trial.mkdir()
        trial.rmdir()
    except OSError as error:
        raise OutputError(f"{folder}: cannot be written ({error.strerror})") from None


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
    fresh = folder.with_name(_fresh_name(folder))
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


def _fresh_name(folder: Path) -> str:
    return f".{folder.name}.{secrets.token_hex(4)}.new"


def _material_in(folder: Path) -> str | None:
    """Name of the user's own material beside the case in a folder of results; None where there is none."""
    try:
        name = tomllib.loads((folder / "case.toml").read_text(encoding="utf-8"))["workpiece"]["material"]
    except (OSError, ValueError, KeyError, TypeError):
        return None
    return name if isinstance(name, str) and name.endswith(".toml") else None


def _with_material_beside(folder: Path, case: Case) -> Case:
    """The case with a copy of the user's own material in the folder; a path to it becomes its bare name."""
    given = case.workpiece.material
    if not given.endswith(".toml"):
        return case
    name = Path(given).name
    if name in FILES:
        name = f"material-{name}"
    shutil.copyfile(case.folder / given, folder / name)
    return case if name == given else replace(case, overrides=(*case.overrides, ("workpiece.material", name)))


def _write(folder: Path, setup: Setup, case: Case, history: History) -> None:
    kept = _with_material_beside(folder, case)
    texts = {
        "summary.json": summary_text(setup, case, history),
        "curves.csv": curves_csv(setup, case, history),
        "profiles.csv": profiles_csv(setup, case, history),
        "case.toml": as_run(kept),
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
