"""The verification table: all of it passes, and every row says what it is."""

import re
from importlib import import_module
from pathlib import Path

import pytest

import thermal
from thermal.crosscheck.checks.row import Check
from thermal.crosscheck.verify import PARTS, Verification, verify
from thermal.report.verification import HEADINGS, verification_json, verification_text

IDS = {
    "EM-01 EM-02 EM-03 EM-05 EM-08b EM-09 EM-10",
    "TH-01 TH-02 TH-04 TH-05 TH-06 TH-07 TH-09 TH-10 TH-14 TH-15",
    "CP-01 CP-03 CP-04 CP-05",
    "CL-01 CL-02 CL-03 CL-07",
    "ME-01 ME-02 ME-03 ME-04",
}
NOT_IN_RUNS = {"thermal.eddy.exact.tube_bore_field", "thermal.eddy.exact.wire_resistance_ratio"}


@pytest.fixture(scope="module")
def quick():
    return verify()


@pytest.fixture(scope="module")
def full():
    return verify(full=True)


def wrong(result):
    return [f"{row.check.id} {row.quantity}: {row.error:.3g} of {row.allowed:.3g}" for row in result.failed]


def test_every_row_of_the_quick_table_passes(quick):
    assert wrong(quick) == []
    assert quick.wall_s < 20.0


@pytest.mark.slow
def test_every_row_of_the_full_table_passes(full, quick):
    assert wrong(full) == []
    assert full.wall_s < 150.0
    known = {(row.check, row.quantity) for row in full.rows}
    assert all((row.check, row.quantity) in known for row in quick.rows if row.check.group != "measured")


def test_every_case_asked_for_is_there(quick):
    found = {row.check.id for row in quick.rows}
    assert set(" ".join(IDS).split()) <= found
    assert {row.check.group for row in quick.rows} == set(PARTS) == set(HEADINGS)


def test_plates_and_bars_cool_at_three_biot_numbers(quick):
    told = " ".join(row.quantity for row in quick.rows if row.check.id == "TH-04")
    assert all(f"{shape}, Bi {Bi}," in told for shape in ("bar", "plate") for Bi in ("0.1", "1", "10"))


def test_every_row_names_meaning_function_grid_and_source(quick):
    for row in quick.rows:
        check = row.check
        assert all((check.meaning, check.grid, check.source, row.quantity, row.unit)), row
        if check.function == "thermal.loop.run":
            assert re.search(r"[\d.]+ K per step", check.grid), row


def test_the_named_functions_exist(quick):
    for name in {row.check.function for row in quick.rows}:
        parts = name.split(".")
        module = next(end for end in range(len(parts), 0, -1) if Path(_file(parts[:end])).exists())
        found = import_module(".".join(parts[:module]))
        for part in parts[module:]:
            found = getattr(found, part)
        assert callable(found), name


def _file(parts):
    return Path(thermal.__file__).parents[1].joinpath(*parts).with_suffix(".py")


def test_closed_forms_that_no_run_calls_are_marked(quick):
    assert {row.check.function for row in quick.rows if not row.check.in_runs} == NOT_IN_RUNS
    assert all("no run" in row.check.meaning for row in quick.rows if not row.check.in_runs)
    # Once a run calls them the mark is wrong.
    sources = [
        path.read_text(encoding="utf-8")
        for path in Path(thermal.__file__).parent.rglob("*.py")
        if path.name != "exact.py" and "crosscheck" not in path.parts
    ]
    assert not any(name.rpartition(".")[2] in source for name in NOT_IN_RUNS for source in sources)


WIDEST = {
    # Relative errors no row may be allowed more than.
    **dict.fromkeys(["EM-01", "EM-02", "EM-03", "EM-04", "EM-05"], 2e-3),
    **{"EM-08b": 3e-3, "EM-09": 1e-9, "EM-10": 2e-3},
    **dict.fromkeys(["TH-01", "TH-02", "TH-04", "TH-15"], 1e-3),
    **{"TH-05": 2e-3, "TH-06": 2e-3, "TH-07": 1e-4, "TH-09": 1e-4, "TH-10": 5e-3, "TH-14": 5e-4},
    **{"CP-01": 5e-3, "CP-03": 1e-3, "CP-04": 3e-3, "CP-05": 3e-3},
    **{"CL-01": 1e-10, "CL-02": 1e-7, "CL-03": 3e-6, "CL-07": 1e-8},
    **{"ME-01": 0.08, "ME-02": 0.06, "ME-03": 0.05, "ME-04": 0.05},
}


@pytest.mark.slow
def test_allowances_are_not_widened(full):
    for row in full.rows:
        if row.relative:
            assert row.allowed <= WIDEST[row.check.id], row
    degrees = {row.check.id: row.allowed for row in full.rows if row.unit == "°"}
    assert degrees == {"ME-01": 3.0, "ME-02": 3.0, "ME-03": 3.0, "ME-04": 2.0}


MADE_UP = Check("XX-01", "heat", "Made up", "thermal.loop.run", "none, 1 K per step", "nowhere")


def test_errors_are_shares_or_in_the_unit_of_the_row():
    relative = MADE_UP.relative("q", 200.0, 199.0, "K", 5e-3)
    assert (relative.error, relative.passed) == (pytest.approx(5e-3), True)
    absolute = MADE_UP.absolute("q", -200.0, -199.0, "K", 0.9)
    assert (absolute.error, absolute.passed) == (1.0, False)
    assert not MADE_UP.relative("q", 1.0, float("nan"), "-", 1.0).passed


def test_the_screen_tells_failures_and_counts():
    rows = (MADE_UP.relative("good", 200.0, 200.1, "K", 1e-3), MADE_UP.absolute("bad", 3.0, 4.5, "°C", 0.5))
    text = verification_text(Verification(rows, full=False, wall_s=1.25))
    good, bad = (
        next(line for line in text.splitlines() if line.startswith(f"    {name},")) for name in ("good", "bad")
    )
    assert good.split() == ["good,", "K", "200", "200.1", "0.05", "/", "0.1", "%"]
    assert bad.split() == ["bad,", "°C", "3", "4.5", "1.5", "/", "0.5", "K", "FAILS"]
    assert "XX-01, bad: 4.5 °C instead of 3 °C, error over allowed 1.5 / 0.5 K (thermal.loop.run)" in text
    assert text.splitlines()[-1].startswith("1 of 2 rows FAIL (")
    assert text.splitlines()[-1].endswith("; 1.2 s.")


def readable(result, width):
    text = verification_text(result)
    assert max(map(len, text.splitlines())) <= width
    assert "…" not in text
    # One block of columns a group: nothing was moved below for want of width.
    assert text.count("error / allowed") == len(PARTS)
    for words in ("saturation", "Curie point", "Not verified", f"{len(result.rows)} rows agree"):
        assert words in text


def test_the_quick_screen_fits_eighty_columns(quick, monkeypatch):
    monkeypatch.setattr("thermal.report.text.width", lambda: 80)
    readable(quick, 80)


@pytest.mark.slow
def test_the_full_screen_fits_a_hundred_columns(full):
    readable(full, 100)


def test_a_table_that_fails_throughout_still_fits(quick):
    rows = tuple(row.check.relative(row.quantity, row.expected, -row.expected, row.unit, 1e-3) for row in quick.rows)
    text = verification_text(Verification(rows, full=False, wall_s=1.0))
    assert max(map(len, text.splitlines())) <= 100
    assert len(re.findall(r" FAILS$", text, flags=re.MULTILINE)) == len(rows)
    assert f"{len(rows)} of {len(rows)} rows FAIL" in text


def test_json_holds_every_row(quick):
    told = verification_json(quick)
    assert (told["passed"], told["failed"]) == (len(quick.rows), 0)
    first, row = told["rows"][0], quick.rows[0]
    assert (first["id"], first["error"], first["error_is"]) == (row.check.id, row.error, "relative")
    assert first["function"] == "thermal.eddy.exact.skin_depth"


def test_no_two_rows_go_by_the_same_name():
    names = [(row.check.id, row.quantity) for row in verify(full=True).rows]
    assert len(names) == len(set(names))
