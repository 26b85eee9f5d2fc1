import csv
import json
import os
import shutil
from pathlib import Path

import numpy as np
import pytest

import materials
from thermal.build import build
from thermal.case import from_text, load_case
from thermal.case.starter import starter
from thermal.loop import run, run_case
from thermal.report import files
from thermal.report.curves import round_interval
from thermal.report.files import FILES, OutputError, demand_place, write_results
from thermal.results.verdict import sentence

HEADER = (
    "time_s,surface_C,core_C,mean_C,maximum_C,absorbed_power_W,supply_power_W,frequency_Hz,coil_current_A_rms,"
    "coil_voltage_V_rms,loss_W,stage"
)


@pytest.fixture(scope="module")
def written(run_of, tmp_path_factory):
    run = run_of("plate", output='{profiles_at = ["10 s", "20 s"]}', numerics__tolerance="0.2 K")
    folder = tmp_path_factory.mktemp("results") / "plate"
    write_results(folder, *run)
    return folder, *run


def rows_of(path):
    with path.open(newline="", encoding="utf-8") as file:
        return list(csv.DictReader(file))


def test_all_files_are_there_and_nothing_else(written):
    folder = written[0]
    assert sorted(os.listdir(folder)) == sorted(FILES)
    assert os.listdir(folder.parent) == [folder.name]
    assert (folder / "curves.png").read_bytes()[:8] == b"\x89PNG\r\n\x1a\n"
    assert "<svg" in (folder / "curves.svg").read_text()


def test_the_keys_scripts_rely_on(written):
    folder, setup, _, history = written
    told = json.loads((folder / "summary.json").read_text(encoding="utf-8"))
    for key in ("status", "sentence", "stages", "balance", "limits", "assumptions", "notes", "wall_s", "versions"):
        assert key in told
    assert told["status"] == "target"
    assert told["sentence"] == sentence(setup, history)
    assert [stage["name"] for stage in told["stages"]] == ["heat", "transfer"]
    heat = told["stages"][0]
    assert heat["end_s"] == history.stages[0].end
    assert heat["mean_C"] == pytest.approx(250.0, abs=0.01)
    assert heat["spread_K"] == pytest.approx(heat["surface_C"] - heat["core_C"])
    assert "quarter_C" in heat
    assert told["balance"]["absorbed_J"] == history.energy["absorbed"][-1]
    assert told["balance"]["relative_residual"] < 1e-11
    assert told["assumptions"] == list(setup.assumptions)
    assert {entry["kind"] for entry in told["sources"]} <= {
        "measured",
        "recommended",
        "estimated",
        "assumed",
        "memory",
    }


def test_json_has_no_nan_without_a_coil(run_of, tmp_path):
    write_results(tmp_path / "x", *run_of("heater"))

    def refuse(word):
        raise AssertionError(word)

    told = json.loads((tmp_path / "x" / "summary.json").read_text(encoding="utf-8"), parse_constant=refuse)
    assert told["peaks"]["coil_current_A_rms"] is None
    assert told["specific_energy_from"] == "absorbed"


def test_curves_have_the_promised_header_and_every_stage_end(written):
    folder, _, _, history = written
    text = (folder / "curves.csv").read_text(encoding="utf-8")
    assert text.splitlines()[0] == f"{HEADER},quarter_C"
    rows = rows_of(folder / "curves.csv")
    times = [float(row["time_s"]) for row in rows]
    assert times == sorted(set(times))
    assert 200 < len(rows) < 700
    for record in history.stages:
        row = min(rows, key=lambda row: abs(float(row["time_s"]) - record.end))
        assert float(row["time_s"]) == pytest.approx(record.end, rel=1e-8)
        assert row["stage"] == record.kind
        i = int(np.flatnonzero(history.time == record.end)[0])
        assert float(row["surface_C"]) == pytest.approx(history.readings["surface"][i] - 273.15, abs=1e-3)


def test_the_row_at_a_stage_end_has_the_power_of_the_ending_stage(written):
    folder, _, _, history = written
    row = next(row for row in rows_of(folder / "curves.csv") if float(row["time_s"]) > history.stages[0].end - 1e-6)
    assert float(row["supply_power_W"]) == pytest.approx(30e3, rel=1e-5)


def test_electrical_columns_are_empty_without_a_coil(run_of, tmp_path):
    write_results(tmp_path / "x", *run_of("heater"))
    rows = rows_of(tmp_path / "x" / "curves.csv")
    assert {row["coil_current_A_rms"] for row in rows} == {""}
    assert float(rows[0]["absorbed_power_W"]) == pytest.approx(800.0, rel=1e-5)


def test_the_case_sets_the_interval(run_of, tmp_path):
    write_results(tmp_path / "x", *run_of("heater", output='{interval = "10 s"}'))
    times = [float(row["time_s"]) for row in rows_of(tmp_path / "x" / "curves.csv")]
    assert times[:3] == [0.0, 10.0, 20.0]
    assert len(times) == int(times[-1] / 10.0) + 1 + 2


@pytest.mark.parametrize(
    ("duration", "interval"), [(400.0, 1.0), (161.4, 0.5), (1000.0, 2.0), (0.1, 0.0002), (7200.0, 20.0)]
)
def test_the_usual_interval_is_round(duration, interval):
    assert round_interval(duration) == pytest.approx(interval)
    assert 250 <= duration / interval <= 600


def test_profiles_at_stage_ends_and_at_the_moments_asked_for(written):
    folder, setup, _, history = written
    rows = rows_of(folder / "profiles.csv")
    times = sorted({float(row["time_s"]) for row in rows})
    assert times == pytest.approx([10.0, 20.0, *(record.end for record in history.stages)])
    assert len(rows) == 4 * setup.sampler.nodes.size
    last = rows[-1]
    assert float(last["depth_mm"]) == 0.0
    assert float(last["T_C"]) == pytest.approx(history.readings["surface"][-1] - 273.15, abs=1e-3)


def test_the_case_is_written_as_it_was_run(written):
    folder, _, case, _ = written
    again = from_text((folder / "case.toml").read_text(encoding="utf-8"), ".")
    assert again.numerics == case.numerics
    assert again.output == case.output
    assert again.workpiece == case.workpiece


def test_the_same_run_gives_the_same_bytes(written, run_of, tmp_path):
    folder = written[0]
    write_results(tmp_path / "again", *written[1:])
    for name in FILES:
        assert (tmp_path / "again" / name).read_bytes() == (folder / name).read_bytes(), name


def test_results_are_not_overwritten_without_force(run_of, tmp_path):
    folder = tmp_path / "x"
    write_results(folder, *run_of("heater"))
    before = (folder / "summary.json").read_bytes()
    with pytest.raises(OutputError, match=r"is not empty, add --force"):
        write_results(folder, *run_of("plate"))
    assert (folder / "summary.json").read_bytes() == before
    write_results(folder, *run_of("plate"), force=True)
    assert (folder / "summary.json").read_bytes() != before
    assert os.listdir(tmp_path) == ["x"]


def test_an_empty_folder_may_be_used(run_of, tmp_path):
    (tmp_path / "x").mkdir()
    write_results(tmp_path / "x", *run_of("heater"))
    assert (tmp_path / "x" / "summary.json").exists()


@pytest.mark.parametrize("failure", [OSError(28, "No space left on device"), KeyboardInterrupt(), ValueError("bug")])
def test_a_failure_while_writing_leaves_what_was_there(run_of, tmp_path, monkeypatch, failure):
    folder = tmp_path / "x"
    write_results(folder, *run_of("heater"))
    before = {name: (folder / name).read_bytes() for name in FILES}

    def fail(*_):
        raise failure

    monkeypatch.setattr(files, "save_curves", fail)
    expected = OutputError if isinstance(failure, OSError) else type(failure)
    with pytest.raises(expected):
        write_results(folder, *run_of("plate"), force=True)
    assert {name: (folder / name).read_bytes() for name in FILES} == before
    assert os.listdir(tmp_path) == ["x"]


def test_a_failure_of_the_last_rename_puts_the_old_results_back(run_of, tmp_path, monkeypatch):
    folder = tmp_path / "x"
    write_results(folder, *run_of("heater"))
    before = (folder / "summary.json").read_bytes()
    rename = Path.rename

    def fail(self, target):
        if self.suffix == ".new" and Path(target) == folder:
            raise OSError(5, "Input/output error")
        return rename(self, target)

    monkeypatch.setattr(Path, "rename", fail)
    monkeypatch.setattr(files, "swapped", lambda one, other: False)
    with pytest.raises(OutputError, match="Input/output error"):
        write_results(folder, *run_of("plate"), force=True)
    assert (folder / "summary.json").read_bytes() == before
    assert os.listdir(tmp_path) == ["x"]


def test_force_does_not_touch_a_folder_with_other_files(run_of, tmp_path):
    (tmp_path / "thesis.txt").write_text("years of work")
    with pytest.raises(OutputError, match=r"holds 'thesis.txt', which is not of those results"):
        write_results(tmp_path, *run_of("heater"), force=True)
    assert os.listdir(tmp_path) == ["thesis.txt"]


def test_a_file_in_the_place_is_refused(tmp_path):
    (tmp_path / "x").write_text("")
    with pytest.raises(OutputError, match="is a file"):
        demand_place(tmp_path / "x", force=True)
    with pytest.raises(OutputError, match="cannot be written"):
        demand_place(tmp_path / "x" / "y", force=False)


@pytest.mark.skipif(os.name != "posix" or os.geteuid() == 0, reason="the superuser may write anywhere")
def test_a_folder_without_permission_is_refused(tmp_path):
    tmp_path.chmod(0o500)
    try:
        with pytest.raises(OutputError, match=r"cannot be written \(Permission denied\)"):
            demand_place(tmp_path / "x", force=False)
    finally:
        tmp_path.chmod(0o700)


def test_a_folder_the_system_refuses_is_one_sentence(run_of, tmp_path, monkeypatch):
    def refuse(*_, **__):
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr(Path, "mkdir", refuse)
    with pytest.raises(OutputError, match=r"x: cannot be written \(Permission denied\)$"):
        write_results(tmp_path / "x", *run_of("heater"))


def test_the_place_is_tried_before_the_run(tmp_path, monkeypatch):
    demand_place(tmp_path / "a" / "x", force=False)
    assert os.listdir(tmp_path) == []

    def full(*_, **__):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(Path, "mkdir", full)
    with pytest.raises(OutputError, match=r"x: cannot be written \(No space left on device\)$"):
        demand_place(tmp_path / "x", force=False)


@pytest.mark.parametrize("given", ["my-steel.toml", "steels/my-steel.toml"])
def test_a_material_of_ones_own_is_kept_with_the_case(tmp_path, given):
    own = tmp_path / given
    own.parent.mkdir(exist_ok=True)
    shutil.copyfile(Path(materials.__file__).parent / "data" / "steel" / "steel-c45.toml", own)
    changes = {"schedule.0.until.surface": "60 °C"}
    text = starter("heater").replace('"steel-c45"', f'"{given}"')
    case = from_text(text, tmp_path, changes)
    setup = build(case)
    history = run(setup)
    folder = tmp_path / "x"
    write_results(folder, setup, case, history)
    write_results(folder, setup, case, history, force=True)
    own.unlink()
    assert sorted(os.listdir(folder)) == sorted([*FILES, "my-steel.toml"])
    again = load_case(folder / "case.toml")
    assert run_case(again).time[-1] == history.time[-1]


def test_a_material_called_like_a_result_gets_another_name(tmp_path):
    shutil.copyfile(Path(materials.__file__).parent / "data" / "steel" / "steel-c45.toml", tmp_path / "case.toml")
    text = starter("heater").replace('"steel-c45"', '"case.toml"')
    case = from_text(text, tmp_path, {"schedule.0.until.surface": "60 °C"})
    setup = build(case)
    write_results(tmp_path / "x", setup, case, run(setup))
    assert load_case(tmp_path / "x" / "case.toml").workpiece.material == "material-case.toml"


def test_lining_and_gas_of_ones_own_are_kept_with_the_case(tmp_path):
    data = Path(materials.__file__).parent / "data"
    for kind, source in (("lining", "lining/castable-alumina.toml"), ("gas", "gas/argon.toml")):
        text = (data / source).read_text(encoding="utf-8")
        key = Path(source).stem
        (tmp_path / f"{kind}.toml").write_text(text.replace(f'key = "{key}"', f'key = "my-{kind}"'), encoding="utf-8")
    own = {"lining": '{ material = "lining.toml", thickness = "5 mm" }', "surroundings.gas": "gas.toml"}
    short = {"schedule": '[{ stage = "heat", drive = { supply_power = "10 kW" }, duration = "1 s" }]'}
    case = from_text(starter("billet"), tmp_path, {**own, **short})
    setup = build(case)
    history = run(setup)
    write_results(tmp_path / "x", setup, case, history)
    assert {"lining.toml", "gas.toml"} <= {path.name for path in (tmp_path / "x").iterdir()}
    for name in ("lining.toml", "gas.toml"):
        (tmp_path / name).unlink()
    again = load_case(tmp_path / "x" / "case.toml")
    assert run(build(again)).readings["surface"][-1] == history.readings["surface"][-1]
