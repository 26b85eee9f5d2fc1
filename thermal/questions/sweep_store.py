"""What is kept of a sweep while it runs: one line for every run that has ended, safe against a sudden end."""

import hashlib
import json
import os
import tomllib
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import asdict, dataclass
from importlib.metadata import PackageNotFoundError, version
from pathlib import Path
from types import TracebackType
from typing import Any

import materials
from thermal.case import Case, as_run, with_changes
from thermal.errors import CaseError, ThermalError
from thermal.questions.sweep_plan import Axis

PLAN, RUNS = "plan.json", "runs.jsonl"
RESULTS = ("sweep.csv", "sweep.png", "sweep.svg")
"""What a finished sweep adds; nothing else is ever replaced."""


class SweepError(ThermalError):
    """The folder of a sweep cannot be used."""


@dataclass(frozen=True, slots=True)
class Row:
    """One run of a sweep.

    run : from 1, in the order of the grid ; values : of the axes, as set in the case ; status : as of a History, or
    "failed" ; met : whether the first heating stage with targets met them, None where there is none or it was not
    reached ; sentence : the answer, or why there is none ; figures : name with its unit -> number, without those that
    do not exist ; limits : of the supply that bound ; wall_s : [s] the run took.
    """

    run: int
    values: tuple[str, ...]
    status: str
    met: bool | None
    sentence: str
    figures: Mapping[str, float]
    limits: tuple[str, ...]
    wall_s: float


class Records:
    """The folder of a sweep, with rows to which more are added; used as a context.

    Every line is on the disk before `add` returns. A line that was cut short by a sudden end is dropped.

    Parameters
    ----------
    folder : made where it is missing.
    case, axes : what is swept; runs of another sweep are never mixed in.
    force : throw away what is there.

    Raises
    ------
    SweepError : the folder holds another sweep or other files, is damaged, or cannot be written.
    """

    def __init__(self, folder: Path, case: Case, axes: Sequence[Axis], *, force: bool = False) -> None:
        self._folder = folder
        plan = _plan(case, axes)
        try:
            fresh = self._demand_place(force) or force
            folder.mkdir(parents=True, exist_ok=True)
            if fresh:
                for name in (RUNS, PLAN, *RESULTS):
                    (folder / name).unlink(missing_ok=True)
                write_whole(folder / PLAN, json.dumps(plan, indent=2, ensure_ascii=False) + "\n")
            elif differences := list(_differences(self._plan_there(), plan)):
                raise SweepError(
                    f"{folder}: holds another sweep ({'; '.join(differences)}): name another folder with --out, "
                    "or add --force to throw its runs away"
                )
            whole, _ = self._there()
            self._file = (folder / RUNS).open("ab", buffering=0)
            self._file.truncate(whole)
        except OSError as error:
            raise self._unwritable(error) from None

    def __enter__(self) -> "Records":
        return self

    def __exit__(self, kind: type[BaseException] | None, error: BaseException | None, _: TracebackType | None) -> None:
        self._file.close()

    @property
    def rows(self) -> tuple[Row, ...]:
        """What is on the disk now."""
        return self._there()[1]

    def add(self, rows: Sequence[Row]) -> None:
        """Keep rows.

        Raises
        ------
        SweepError : the disk is full or gone.
        """
        lines = [json.dumps(asdict(row), ensure_ascii=False, allow_nan=False) + "\n" for row in rows]
        rest = memoryview("".join(lines).encode())
        try:
            while rest:
                rest = rest[self._file.write(rest) :]
            os.fsync(self._file.fileno())
        except OSError as error:
            raise self._unwritable(error) from None

    def _demand_place(self, force: bool) -> bool:
        """Refuse a folder of something else; whether a sweep is still to be begun in it."""
        folder = self._folder
        if folder.exists() and not folder.is_dir():
            raise SweepError(f"{folder}: is a file, a sweep goes into a folder")
        found = sorted(path.name for path in folder.iterdir()) if folder.is_dir() else []
        found = [name for name in found if name != fresh_name(PLAN)]
        if found and PLAN not in found:
            raise SweepError(f"{folder}: holds '{found[0]}' and no sweep; name another folder with --out")
        return not found

    def _plan_there(self) -> dict[str, Any]:
        try:
            found = json.loads((self._folder / PLAN).read_text(encoding="utf-8"))
        except ValueError:
            found = None
        if not isinstance(found, dict):
            raise self._damaged(PLAN)
        return found

    def _there(self) -> tuple[int, tuple[Row, ...]]:
        """Length [bytes] of the whole lines, and their rows."""
        path = self._folder / RUNS
        content = path.read_bytes() if path.exists() else b""
        whole = content.rfind(b"\n") + 1
        rows: dict[int, Row] = {}
        for number, line in enumerate(content[:whole].splitlines(), 1):
            try:
                found = json.loads(line)
                row = Row(**{**found, "values": tuple(found["values"]), "limits": tuple(found["limits"])})
            except (ValueError, KeyError, TypeError):
                raise self._damaged(f"line {number} of {RUNS}") from None
            rows[row.run] = row
        return whole, tuple(rows.values())

    def _damaged(self, what: str) -> SweepError:
        return SweepError(f"{self._folder}: {what} is damaged, add --force to throw the runs away and begin anew")

    def _unwritable(self, error: OSError) -> SweepError:
        return SweepError(f"{self._folder}: cannot be written ({error.strerror})")


def fresh_name(name: str) -> str:
    """What a file is called while it is being written."""
    return f".{name}.new"


def write_whole(path: Path, text: str) -> None:
    """Write a file so that it is there complete or as it was before."""
    fresh = path.with_name(fresh_name(path.name))
    with fresh.open("w", encoding="utf-8", newline="\n") as file:
        file.write(text)
        file.flush()
        os.fsync(file.fileno())
    fresh.replace(path)


def _plan(case: Case, axes: Sequence[Axis]) -> dict[str, Any]:
    """Everything the rows depend on."""
    try:
        program = version("workpiece-heating")
    except PackageNotFoundError:
        program = "not installed"
    return {
        "program": program,
        "materials_sha256": _material_data(case, axes),
        "axes": [{"path": axis.path, "values": list(axis.values)} for axis in axes],
        "case": as_run(case),
    }


def _material_data(case: Case, axes: Sequence[Axis]) -> str:
    """Hash of the shipped data and of the user's own materials in the sweep."""
    shipped = Path(materials.__file__).parent / "data"
    used = [case]
    for axis in axes:
        if axis.path in ("workpiece", "workpiece.material"):
            used += _valid(case, axis)
    names = {each.workpiece.material for each in used}
    own = sorted(case.folder / name for name in names if name.endswith(".toml"))
    total = hashlib.sha256()
    for path in (*sorted(shipped.rglob("*.toml")), *own):
        total.update(path.read_bytes() + b"\0")
    return total.hexdigest()


def _valid(case: Case, axis: Axis) -> Iterator[Case]:
    for value in axis.values:
        try:
            yield with_changes(case, {axis.path: value})
        except CaseError:
            continue


def _differences(there: Mapping[str, Any], now: Mapping[str, Any]) -> Iterator[str]:
    """What tells two plans apart, in words."""
    if there.get("program") != now["program"]:
        yield f"made by version {there.get('program')}, this is {now['program']}"
    if there.get("materials_sha256") != now["materials_sha256"]:
        yield "the material data are not the same"
    if there.get("axes") != now["axes"]:
        yield "its axes are others"
    try:
        before = _flat(tomllib.loads(str(there.get("case"))))
    except tomllib.TOMLDecodeError:
        before = {}
    after = _flat(tomllib.loads(now["case"]))
    changed = [path for path in {**before, **after} if before.get(path) != after.get(path)]
    if changed:
        more = f" and {len(changed) - 1} more" if len(changed) > 1 else ""
        was, now_is = (case.get(changed[0], "not given") for case in (before, after))
        yield f"in its case {changed[0]} is {was}, now it is {now_is}{more}"


def _flat(value: Any, path: str = "") -> dict[str, str]:
    """Dotted path -> text of every single value."""
    if isinstance(value, dict):
        inner = value.items()
    elif isinstance(value, list):
        inner = {str(i): each for i, each in enumerate(value)}.items()
    else:
        return {path: str(value)}
    return {p: text for key, each in inner for p, text in _flat(each, f"{path}.{key}" if path else key).items()}
