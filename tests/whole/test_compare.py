"""Different metals in the same coil: scaling laws, the stall at the Curie point, and what the trade expects."""

import math

import numpy as np
import pytest
from tiny_materials import constant_material

from materials import get
from materials.errors import MaterialError
from thermal.case import from_text, load_case, with_changes
from thermal.case.starter import starter
from thermal.errors import CaseError
from thermal.questions.compare import compare

ZERO = 273.15
BILLET = load_case("cases/billet_forging.toml")


def field_case(diameter, frequency, material, folder=".", H="20 kA/m"):
    return from_text(
        f"""
format = 1
[workpiece]
shape = "cylinder"
diameter = "{diameter} mm"
length = "100 mm"
material = "{material}"
emissivity = 0.8
initial = "20 °C"
[[schedule]]
stage = "heat"
drive = {{ surface_field = "{H}", frequency = "{frequency} Hz" }}
duration = "1 s"
""",
        folder,
    )


def test_thick_sections_follow_the_root_of_resistivity_times_permeability(tmp_path):
    pairs = {"a.toml": (1e-7, 1.0), "b.toml": (4e-7, 1.0), "c.toml": (1e-7, 9.0), "d.toml": (1e-6, 25.0)}
    for name, (resistivity, mu_r) in pairs.items():
        (tmp_path / name).write_text(constant_material(30.0, resistivity, mu_r=mu_r), encoding="utf-8")
    # 100 mm at 100 kHz: skins of at most 1.6 mm, curvature 1 - delta/D.
    case = field_case(100, 100000, "a.toml", tmp_path)
    found = compare(case, list(pairs), to=ZERO + 21.0, at="surface").result.metals
    for metal, (resistivity, mu_r) in zip(found, pairs.values(), strict=True):
        depth = metal.cold.skin_depth
        expected = math.sqrt(resistivity * mu_r / 1e-7) * (1.0 - depth / 0.1) / (1.0 - found[0].cold.skin_depth / 0.1)
        assert metal.cold.absorbed / found[0].cold.absorbed == pytest.approx(expected, rel=2e-3)


@pytest.mark.parametrize(
    ("diameter", "shares"),
    [
        pytest.param(6, {1: 0.001, 3: 0.002, 10: 0.013, 30: 0.057, 100: 0.18, 300: 0.22}, marks=pytest.mark.slow),
        pytest.param(10, {1: 0.002, 3: 0.010, 10: 0.051, 30: 0.16, 100: 0.22, 300: 0.23}, marks=pytest.mark.slow),
        (20, {1: 0.015, 3: 0.065, 10: 0.19, 30: 0.22, 100: 0.24, 300: 0.25}),
        pytest.param(60, {1: 0.18, 3: 0.22, 10: 0.24, 30: 0.25, 100: 0.25, 300: 0.25}, marks=pytest.mark.slow),
    ],
)
def test_power_left_above_the_curie_point(tmp_path, diameter, shares):
    # Power above over power below at the same current, mu_r 25 and 0.7 to 1.15 uohm m: ratio of (rho/delta) Re[kappa
    # I1(kappa)/I0(kappa)]/xi, Davies, Conduction and induction heating, 1990, ch. 9 (evaluated, two figures).
    (tmp_path / "below.toml").write_text(constant_material(30.0, 0.7e-6, mu_r=25.0), encoding="utf-8")
    (tmp_path / "above.toml").write_text(constant_material(30.0, 1.15e-6), encoding="utf-8")
    for kilohertz, share in shares.items():
        case = field_case(diameter, 1000 * kilohertz, "below.toml", tmp_path)
        below, above = compare(case, ["below.toml", "above.toml"], to=ZERO + 21.0, at="surface").result.metals
        digits = 5e-4 if share < 0.1 else 5e-3
        assert above.cold.absorbed / below.cold.absorbed == pytest.approx(share, abs=1.1 * digits)


def test_aluminium_and_copper_barely_warm_where_steel_glows():
    answer = compare(BILLET, ["steel-c45", "aluminium-6082", "copper"], to=ZERO + 500.0)
    steel, aluminium, copper = answer.result.metals
    time = steel.common.result.time
    for metal in (aluminium, copper):
        history = metal.common.result.history
        assert metal.cold.absorbed < 0.15 * steel.cold.absorbed
        at = float(np.interp(time, history.time, history.readings["core"])) - ZERO
        assert at < 250.0


def test_efficiency_of_a_forge_coil_is_what_the_trade_expects():
    # Common practice: cold steel 0.85-0.95, hot steel 0.65-0.85, aluminium 0.35-0.55, copper 0.3-0.5.
    cold_steel, aluminium, copper = compare(BILLET, ["steel-c45", "aluminium-6082", "copper"]).result.metals
    assert 0.85 < cold_steel.cold.efficiency < 0.95
    assert 0.35 < aluminium.cold.efficiency < 0.55
    assert 0.30 < copper.cold.efficiency < 0.50
    (hot,) = compare(BILLET, ["steel-c45"]).result.metals
    assert 0.65 < hot.hot.efficiency < 0.85


def test_efficiency_of_a_bench_coil_with_a_wide_gap(tmp_path):
    # Common practice at 200 kHz, rod of 12 mm in a bore of 30 mm: cold steel (here mu_r 40) 0.75-0.9, hot 0.5-0.7,
    # copper cold 0.13-0.3. In weak fields real cold steel has a higher permeability and does better.
    metals = {"cold.toml": (2e-7, 40.0), "hot.toml": (1.2e-6, 1.0), "copper.toml": (1.72e-8, 1.0)}
    for name, (resistivity, mu_r) in metals.items():
        (tmp_path / name).write_text(constant_material(30.0, resistivity, mu_r=mu_r), encoding="utf-8")
    case = from_text(
        """
format = 1
[workpiece]
shape = "cylinder"
diameter = "12 mm"
length = "50 mm"
material = "cold.toml"
emissivity = 0.8
initial = "20 °C"
[coil]
turns = 6
inner_diameter = "30 mm"
length = "50 mm"
tube = "6 mm"
[supply]
power = "500 W"
frequency = "200 kHz"
[[schedule]]
stage = "heat"
drive = { supply_power = "300 W" }
duration = "1 s"
""",
        tmp_path,
    )
    cold, hot, copper = compare(case, list(metals), to=ZERO + 21.0, at="surface").result.metals
    assert 0.75 < cold.cold.efficiency < 0.9
    assert 0.5 < hot.cold.efficiency < 0.7
    assert 0.13 < copper.cold.efficiency < 0.3


def test_the_common_temperature_spares_the_softest():
    answer = compare(BILLET, ["steel-c45", "aluminium-6082"])
    assert answer.result.T_common == pytest.approx(ZERO + 520.0)
    assert any("lowest solidus" in note for note in answer.notes)


def test_own_targets():
    answer = compare(BILLET, ["steel-c45", "copper"], to=ZERO + 400.0, targets={"copper": ZERO + 800.0})
    steel, copper = answer.result.metals
    assert steel.own is None
    assert copper.own.result.time > copper.common.result.time


def test_what_cannot_be_reached_is_said():
    weak = from_text(starter("heater"), ".", {"schedule.0.drive.absorbed_power": "60 W"})
    answer = compare(weak, ["steel-c45", "copper"], to=ZERO + 900.0, at="surface")
    assert not answer.met
    assert "never" in answer.sentence


def test_a_surface_state_it_does_not_have_is_replaced_aloud():
    case = with_changes(BILLET, {"workpiece.surface": "scaled"})
    assert "scaled" not in get("copper").surfaces
    answer = compare(case, ["steel-c45", "copper"], to=ZERO + 100.0)
    first = next(iter(get("copper").surfaces))
    assert f"copper has no surface state 'scaled': '{first}' was taken." in answer.notes


@pytest.mark.parametrize(
    ("keys", "more", "sentence"),
    [
        ([], {}, "name at least one"),
        (["copper", "copper"], {}, "named twice"),
        (["copper"], {"targets": {"brass": 500.0}}, "not among the materials"),
        (["copper", "gold-plated"], {}, "unknown material"),
        (["copper"], {"to": 2000.0}, "not below the solidus"),
    ],
)
def test_refusals(keys, more, sentence):
    with pytest.raises((CaseError, MaterialError), match=sentence):
        compare(BILLET, keys, **more)
