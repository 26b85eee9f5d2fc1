"""Folders of results, written all at once or not at all."""

import os
import re
import secrets
import shutil
from collections.abc import Callable, Collection
from dataclasses import replace
from pathlib import Path

from materials import toml_text
from thermal.case import Case, as_run
from thermal.errors import ThermalError
from thermal.report.curves import curves_csv, profiles_csv
from thermal.report.figures import save_curves
from thermal.report.summary import summary_text
from thermal.report.swap import swapped
from thermal.results.history import History
from thermal.setup import Setup

FILES = ("summary.json", "curves.csv", "profiles.csv", "curves.png", "curves.svg", "case.toml")
"""What a folder of results holds, besides files of the user's own; nothing else is ever replaced."""

_BESIDE = {("workpiece", "material"): "material", ("lining", "material"): "lining", ("surroundings", "gas"): "gas"}
"""Table and key of what may be a file of the user's own, and what its copy is called where the name is taken."""


class OutputError(ThermalError):
    """The results cannot go where they were sent."""


def demand_place(folder: Path, force: bool, names: Collection[str] = FILES) -> None:
    """Refuse a folder that results cannot be written to, before time is spent on a run.

    What a killed run has left beside the folder is cleared away first. names : of the files that may be replaced.

    Raises
    ------
    OutputError : the folder has results and force is not set, holds other files, or cannot be made.
    """
    try:
        place = folder.resolve()
        _clear_leftovers(place)
        _demand_free(folder, place, force, names)
        above = next(path for path in place.parents if path.exists())
        trial = above / _fresh_name(place)
        trial.mkdir()
        trial.rmdir()
    except OSError as error:
        raise OutputError(f"{folder}: cannot be written ({error.strerror})") from None
    except RuntimeError:  # what Python 3.11 and 3.12 make of a link that leads back to itself
        raise OutputError(f"{folder}: cannot be written (a symbolic link leads back to itself)") from None


def write_results(folder: Path, setup: Setup, case: Case, history: History, *, force: bool = False) -> None:
    """Write all files of a run, see write_folder.

    Raises
    ------
    OutputError : the folder cannot be used, see demand_place, or writing fails.
    """
    write_folder(folder, FILES, lambda fresh: _write(fresh, setup, case, history), force=force)


def write_folder(folder: Path, names: Collection[str], fill: Callable[[Path], None], *, force: bool = False) -> None:
    """Write a folder of results; what was in it stays as it was until the new files are complete.

    A run killed at any moment leaves the old folder or the new one, and perhaps a hidden folder beside it that the
    next run to the same place clears away. Only where the system cannot swap two folders may the old one be found
    under a hidden name; the next run puts it back.

    Parameters
    ----------
    folder : where to; made with the folders above it.
    names : of the files it may hold, besides files of the user's own.
    fill : writes them into a folder that is empty.
    force : replace the results that are there.

    Raises
    ------
    OutputError : the folder cannot be used, see demand_place, or writing fails.
    """
    demand_place(folder, force, names)
    folder = folder.resolve()
    fresh = folder.with_name(_fresh_name(folder))
    try:
        folder.parent.mkdir(parents=True, exist_ok=True)
        try:
            fresh.mkdir()
            fill(fresh)
            _put_in_place(fresh, folder)
        finally:
            shutil.rmtree(fresh, ignore_errors=True)
    except OSError as error:
        raise OutputError(f"{folder}: cannot be written ({error.strerror})") from None


def _demand_free(folder: Path, place: Path, force: bool, names: Collection[str]) -> None:
    if place.exists() and not place.is_dir():
        raise OutputError(f"{folder}: is a file, results go into a folder")
    found = sorted(path.name for path in place.iterdir()) if place.is_dir() else []
    if found and not force:
        raise OutputError(f"{folder}: is not empty, add --force to replace the results or name another with --out")
    strange = [name for name in found if name not in names and name not in _materials_in(place)]
    if strange:
        raise OutputError(f"{folder}: holds '{strange[0]}', which is not of those results; name another with --out")


def _fresh_name(folder: Path) -> str:
    """Hidden name beside a folder, of this process; see _clear_leftovers."""
    return f".{folder.name}.{os.getpid()}-{secrets.token_hex(4)}.new"


def _clear_leftovers(folder: Path) -> None:
    """Delete what killed runs have left beside a folder; results that had stepped aside go back where none are."""
    pattern = re.compile(rf"\.{re.escape(folder.name)}\.(\d+)-[0-9a-f]{{8}}\.(new|old)")
    for path in sorted(folder.parent.iterdir()) if folder.parent.is_dir() else []:
        found = pattern.fullmatch(path.name)
        if found is None or _runs(int(found.group(1))):
            continue
        if found.group(2) == "old" and not folder.exists():
            path.rename(folder)
        else:
            shutil.rmtree(path, ignore_errors=True)


def _runs(process: int) -> bool:
    """Whether a process exists; False where that cannot be asked without harm."""
    if os.name != "posix":
        return False
    try:
        os.kill(process, 0)
    except (ProcessLookupError, OverflowError):
        return False
    except PermissionError:
        pass  # it runs and is somebody else's
    return True


def _materials_in(folder: Path) -> set[str]:
    """Names of the files of the user's own that the case in a folder of results looks for beside itself."""
    try:
        document = toml_text.parsed(toml_text.read(folder / "case.toml"))
    except (OSError, ValueError):
        return set()
    tables = [(document.get(table), key) for table, key in _BESIDE]
    named = [table.get(key) for table, key in tables if isinstance(table, dict)]
    return {name for name in named if isinstance(name, str) and name.endswith(".toml")}


def with_materials_beside(folder: Path, case: Case) -> Case:
    """The case with copies of the user's own files in the folder; a path to one becomes its bare name."""
    given = {"workpiece.material": case.workpiece.material, "surroundings.gas": case.surroundings.gas}
    if case.lining is not None:
        given["lining.material"] = case.lining.material
    taken, renamed = set(FILES), []
    for (table, key), prefix in _BESIDE.items():
        path = given.get(f"{table}.{key}", "")
        if path.endswith(".toml"):
            name = Path(path).name
            name = f"{prefix}-{name}" if name in taken else name
            taken.add(name)
            shutil.copyfile(case.folder / path, folder / name)
            renamed += [(f"{table}.{key}", name)] if name != path else []
    return replace(case, overrides=(*case.overrides, *renamed)) if renamed else case


def _write(folder: Path, setup: Setup, case: Case, history: History) -> None:
    kept = with_materials_beside(folder, case)
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
    """Put the new folder in its place; the old one is then under the name of the new one, or deleted."""
    if not folder.exists():
        fresh.rename(folder)
    elif not swapped(fresh, folder):
        aside = fresh.with_suffix(".old")
        folder.rename(aside)
        try:
            fresh.rename(folder)
        except BaseException:
            aside.rename(folder)
            raise
        shutil.rmtree(aside, ignore_errors=True)
