import json
import shutil
from pathlib import Path

import pytest
from quick_case import QUICK

import materials
from thermal.case import from_text
from thermal.questions import sweep_store
from thermal.questions.sweep_plan import axis_of
from thermal.questions.sweep_store import PLAN, RUNS, Records, Row, SweepError

AXES = (axis_of("schedule.0.drive.absorbed_power=100 W:500 W:5"),)


def row(run: int, **changes) -> Row:
    values = {
        "run": run,
        "values": (f"{100 * run} W",),
        "status": "target",
        "met": True,
        "sentence": "Reaches 200 °C.",
        "figures": {"time_s": 0.1 + 0.2},
        "limits": ("current",),
        "wall_s": 0.5,
    }
    return Row(**{**values, **changes})


@pytest.fixture
def case(tmp_path):
    return from_text(QUICK, tmp_path, name="pin")


@pytest.fixture
def folder(tmp_path):
    return tmp_path / "deep" / "sweep"


def test_rows_come_back_as_they_were(folder, case):
    kept = [row(3), row(1, met=None, status="failed", figures={}, limits=())]
    with Records(folder, case, AXES) as records:
        assert records.rows == ()
        records.add(kept[:1])
        records.add(kept[1:])
    with Records(folder, case, AXES) as again:
        assert again.rows == tuple(kept)
    assert len((folder / RUNS).read_text(encoding="utf-8").splitlines()) == 2


def test_a_row_is_on_the_disk_before_the_next_one_is_made(folder, case):
    with Records(folder, case, AXES) as records:
        records.add([row(1)])
        assert json.loads((folder / RUNS).read_bytes())["run"] == 1


@pytest.mark.parametrize("kept", [0, 1, 60, -1])
def test_a_line_cut_short_is_dropped_and_the_next_one_starts_clean(folder, case, kept):
    with Records(folder, case, AXES) as records:
        records.add([row(1)])
        whole = (folder / RUNS).stat().st_size
        records.add([row(2)])
    content = (folder / RUNS).read_bytes()
    torn = content[whole:][:kept]
    (folder / RUNS).write_bytes(content[:whole] + torn)
    with Records(folder, case, AXES) as again:
        assert again.rows == (row(1),)
        again.add([row(4)])
    with Records(folder, case, AXES) as third:
        assert third.rows == (row(1), row(4))


def test_damage_inside_is_told(folder, case):
    with Records(folder, case, AXES) as records:
        records.add([row(1), row(2)])
    lines = (folder / RUNS).read_bytes().splitlines(keepends=True)
    (folder / RUNS).write_bytes(lines[0][:20] + b"\n" + lines[1])
    with pytest.raises(SweepError, match=r"line 1 of runs.jsonl is damaged, add --force"):
        Records(folder, case, AXES)
    (folder / PLAN).write_text("{", encoding="utf-8")
    with pytest.raises(SweepError, match=r"plan.json is damaged"):
        Records(folder, case, AXES)
    with Records(folder, case, AXES, force=True) as fresh:
        assert fresh.rows == ()


def changed(case, text=QUICK, overrides=None):
    return from_text(text, case.folder, overrides or {}, name=case.name)


@pytest.mark.parametrize(
    ("text", "axes", "words"),
    [
        (QUICK.replace("60 mm", "70 mm"), AXES, r"in its case workpiece.length is 60 mm, now it is 70 mm\)"),
        (
            QUICK.replace("60 mm", "70 mm").replace('longest = "10 s"', ""),
            AXES,
            r"workpiece.length is 60 mm, now it is 70 mm and 1 more\)",
        ),
        (QUICK, (axis_of("schedule.0.drive.absorbed_power=100 W:500 W:6"),), "its axes are others"),
    ],
)
def test_another_sweep_is_refused_and_the_difference_told(folder, case, text, axes, words):
    with Records(folder, case, AXES) as records:
        records.add([row(1)])
    with pytest.raises(SweepError, match=words):
        Records(folder, changed(case, text), axes)
    with Records(folder, changed(case, text), axes, force=True) as fresh:
        assert fresh.rows == ()
    with pytest.raises(SweepError, match="holds another sweep"):
        Records(folder, case, AXES)


def test_a_change_from_outside_counts_and_a_comment_does_not(folder, case):
    with Records(folder, case, AXES):
        pass
    with pytest.raises(SweepError, match=r"workpiece.length is 60 mm, now it is 90 mm"):
        Records(folder, changed(case, QUICK, {"workpiece.length": "90 mm"}), AXES)
    with Records(folder, changed(case, f"# another day\n{QUICK}"), AXES) as again:
        assert again.rows == ()


def test_another_version_is_told(folder, case, monkeypatch):
    with Records(folder, case, AXES):
        pass
    monkeypatch.setattr(sweep_store, "version", lambda _: "9.9")
    with pytest.raises(SweepError, match=r"made by version .*, this is 9.9"):
        Records(folder, case, AXES)


def test_material_of_ones_own_counts_also_where_only_an_axis_names_it(folder, case):
    shipped = Path(materials.__file__).parent / "data" / "copper" / "copper.toml"
    own = case.folder / "own.toml"
    shutil.copy(shipped, own)
    axes = (axis_of("workpiece.material=copper,own.toml,unknown"),)
    with Records(folder, case, axes):
        pass
    with Records(folder, case, axes):
        pass
    own.write_text(f"# measured anew\n{own.read_text(encoding='utf-8')}", encoding="utf-8")
    with pytest.raises(SweepError, match=r"\(the material data are not the same\)"):
        Records(folder, case, axes)


def test_foreign_folders_are_left_alone(tmp_path, case):
    file = tmp_path / "file"
    file.write_text("keep")
    with pytest.raises(SweepError, match="is a file"):
        Records(file, case, AXES, force=True)
    (tmp_path / "notes").mkdir()
    (tmp_path / "notes" / "a.txt").write_text("keep")
    with pytest.raises(SweepError, match=r"holds 'a.txt' and no sweep"):
        Records(tmp_path / "notes", case, AXES, force=True)
    with pytest.raises(SweepError, match=r"cannot be written \(Not a directory\)"):
        Records(file / "below", case, AXES)
    assert file.read_text() == "keep"


def test_beginning_anew_takes_old_tables_away_and_nothing_else(folder, case):
    with Records(folder, case, AXES) as records:
        records.add([row(1)])
    for name in ("sweep.csv", "sweep.png", "mine.txt"):
        (folder / name).write_text("old")
    with Records(folder, case, AXES, force=True):
        pass
    assert sorted(path.name for path in folder.iterdir()) == ["mine.txt", PLAN, RUNS]


def test_a_start_that_was_cut_short_is_no_obstacle(folder, case):
    folder.mkdir(parents=True)
    (folder / sweep_store.fresh_name(PLAN)).write_text("{")
    with Records(folder, case, AXES) as records:
        assert records.rows == ()


def test_a_full_disk_is_one_sentence(folder, case, monkeypatch):
    def full(_):
        raise OSError(28, "No space left on device")

    with Records(folder, case, AXES) as records:
        monkeypatch.setattr(sweep_store.os, "fsync", full)
        with pytest.raises(SweepError, match=r"cannot be written \(No space left on device\)"):
            records.add([row(1)])
