"""Finding materials, reading a user's file, and every refusal with its sentence."""

from pathlib import Path

import numpy as np
import pytest

import materials
from materials import database
from materials.errors import MaterialError

CITE = 'source = "mill"\nlocator = "page 1"\nkind = "measured"\nuncertainty = "5 %"\n'
OVER_T = 'T = [20, 500, 1000]\nT_unit = "°C"\nrule = "linear"\nbeyond = "hold"\n'
GOOD = f"""
format = 1
key = "mine"
title = "Steel of mine"
group = "steel"

[sources.mill]
title = "Mill certificate"
year = "2024"

[density]
value = "7.85 g/cm3"
{CITE}
[conductivity]
{OVER_T}value = [50, 40, 30]
unit = "W/(m K)"
{CITE}
[resistivity]
{OVER_T}value = [20, 70, 120]
unit = "uohm cm"
{CITE}
[specific_heat]
{OVER_T}value = [0.45, 0.6, 0.7]
unit = "kJ/(kg K)"
{CITE}
[magnetics]
mu_r = "1"
{CITE}
[surface.black]
grows = true
{OVER_T}value = [0.8, 0.8, 0.9]
unit = "1"
{CITE}"""
CURIE = f'[curie_temperature]\nvalue = "770 °C"\n{CITE}[saturation_exponent]\nvalue = "3"\n{CITE}'


SHIPPED = [
    "aluminium-1050",
    "aluminium-6082",
    "brass-cuzn37",
    "copper",
    "iron",
    "nickel",
    "stainless-304",
    "steel-42crmo4",
    "steel-c10",
    "steel-c45",
    "titanium-grade2",
]


def load(folder: Path, text: str) -> materials.Material:
    path = folder / "mine.toml"
    path.write_text(text, encoding="utf-8")
    return database.load_file(path)


def magnetic(lines: str) -> str:
    return GOOD.replace('mu_r = "1"\n', lines) + CURIE


def test_shipped_names() -> None:
    assert materials.names() == SHIPPED
    for key in materials.names():
        material = materials.get(key)
        assert material.key == key
        assert (Path(database.__file__).parent / "data" / material.group / f"{key}.toml").is_file()
        assert all(materials.get(alias.upper()) is material for alias in material.aliases)
        assert {"bright", "oxidised"} <= set(material.surfaces)


def test_no_name_stands_for_two_files() -> None:
    called = [alias.lower() for key in materials.names() for alias in (key, *materials.get(key).aliases)]
    called += [*database.gas_names(), *database.lining_names()]
    assert len(called) == len(set(called))
    assert set(database.taken()) == set(called)


def test_shipped_numbers_in_si() -> None:
    steel = materials.get("C45")
    assert steel.density == 7845.0
    assert float(steel.resistivity(293.15)) == pytest.approx(1.71e-7)
    assert float(steel.resistivity(3000.0)) == pytest.approx(1.23e-6)
    assert float(steel.conductivity(973.15)) == pytest.approx(30.1)
    assert (steel.solidus, steel.liquidus, steel.latent_heat) == (1703.15, 1768.15, 260e3)
    assert steel.curie_temperature == pytest.approx(1041.15)
    assert steel.conductivity.published_unit == "W/(m K)"
    assert steel.surfaces["oxidised"].grows
    assert not steel.surfaces["bright"].grows
    machined = steel.surfaces["machined"].emissivity([293.15, 653.15, 723.15, 793.15, 1500.0])
    assert machined == pytest.approx([0.28, 0.28, 0.485, 0.69, 0.69])


def test_data_limits() -> None:
    limits = materials.get("steel-c45").data_limit()
    assert limits["specific_heat"] == pytest.approx(1473.15)
    assert limits["resistivity"] == pytest.approx(1473.15)
    assert limits["emissivity (oxidised)"] == pytest.approx(1500.15)


def test_lining() -> None:
    lining = database.lining("castable-alumina")
    assert lining.density == 2700.0
    assert float(lining.conductivity(1073.15)) == pytest.approx(1.62)
    assert 0.3 < float(lining.emissivity(1273.15)) < 0.6
    assert {datum.source.kind for datum in lining.data} == {"memory"}


def test_a_file_of_the_user(tmp_path: Path) -> None:
    mine = load(tmp_path, GOOD)
    assert (mine.density, mine.latent_heat, mine.curie_temperature) == (7850.0, None, None)
    assert float(mine.resistivity(773.15)) == pytest.approx(7e-7)
    assert float(mine.specific_heat(293.15)) == pytest.approx(450.0)
    assert mine.surfaces["black"].grows
    assert mine.references["mill"].title == "Mill certificate"
    assert mine.conductivity.source.kind == "measured"
    assert next(d.text for d in mine.data if d.name == "density") == "7.85 g/cm3"


def test_temperatures_in_fahrenheit(tmp_path: Path) -> None:
    mine = load(tmp_path, GOOD.replace('T = [20, 500, 1000]\nT_unit = "°C"', 'T = [68, 932, 1832]\nT_unit = "°F"'))
    assert mine.conductivity.T == pytest.approx([293.15, 773.15, 1273.15])


def test_magnetic_laws_of_the_user(tmp_path: Path) -> None:
    froehlich = load(tmp_path, magnetic('law = "froehlich-kennelly"\nsaturation = "2 T"\nH_k = "10 Oe"\n'))
    assert froehlich.magnetics.definition == "froehlich-kennelly"
    assert froehlich.magnetics.initial_susceptibility == pytest.approx(2.0 / 1.25663706212e-6 / 795.774715)
    normal = load(
        tmp_path,
        magnetic(
            'curve = "normal"\nH = [0.2, 1, 100]\nH_unit = "kA/m"\n'
            'B = [0.2, 1, 2.1]\nB_unit = "T"\nmu_r_initial = 500\n'
        ),
    )
    assert float(normal.magnetics.mu_r(0.0, 293.15)) == pytest.approx(500.0)
    effective = load(
        tmp_path,
        magnetic('curve = "effective"\nH = [1, 10]\nH_unit = "kA/m"\nmu_r = [600, 110]\nmu_r_unit = "1"\n'),
    )
    assert float(effective.magnetics.mu_r(1e4, 293.15)) == pytest.approx(110.0)
    for each in (froehlich, normal, effective):
        assert each.curie_temperature == pytest.approx(1043.15)
        assert np.all(each.magnetics.mu_r([1e3, 1e5], 1100.0) == 1.0)


def test_unknown_names() -> None:
    known = f"(known: {', '.join(SHIPPED)})"
    for name, hint in (("steel-c54", ", did you mean 'steel-c45'?"), ("xyz", "")):
        with pytest.raises(MaterialError) as refusal:
            materials.get(name)
        assert str(refusal.value) == f"unknown material '{name}'{hint} {known}"
    with pytest.raises(MaterialError, match=r"^unknown gas 'neon' \(known: air, argon, helium, nitrogen\)$"):
        database.gas("neon")
    with pytest.raises(MaterialError, match=r"did you mean 'castable-alumina'\?"):
        database.lining("castable-alumna")


REFUSALS = {
    "missing unit": ('unit = "W/(m K)"\n', "", "conductivity.unit: missing, write the unit of the numbers (W/(m K))"),
    "wrong unit": ('"W/(m K)"', '"mm"', "conductivity.unit: 'mm' does not fit here (accepted: W/(m K))"),
    "bare number": (
        '"7.85 g/cm3"',
        '"7850"',
        'density.value: write the unit: "7850 kg/m3" (accepted: kg/m3, g/cm3, lb/in3)',
    ),
    "missing value": ('value = "7.85 g/cm3"\n', "", "density.value: missing"),
    "unknown key": ("[density]\n", '[density]\nvlaue = "1"\n', "density.vlaue: unknown key, did you mean 'value'?"),
    "unknown table": ("[density]", "[densiti]\n[density]", "densiti: unknown key, did you mean 'density'?"),
    "missing table": ("[resistivity]", "[other]", "resistivity: missing table"),
    "unsorted": (
        "T = [20, 500, 1000]",
        "T = [20, 500, 400]",
        "conductivity.T: must rise from value to value, 400 °C follows 500 °C",
    ),
    "negative": (
        "[20, 70, 120]",
        "[20, -70, 120]",
        "resistivity.value: must be above zero, found -70 uohm cm at 500 °C",
    ),
    "emissivity above 1": (
        "[0.8, 0.8, 0.9]",
        "[0.8, 0.8, 1.1]",
        "surface.black.value: must be above zero and at most 1, found 1.1 at 1000 °C",
    ),
    "lengths": ("[50, 40, 30]", "[50, 40]", "conductivity.value: 2 numbers for 3 temperatures"),
    "no list": ("[50, 40, 30]", "50", "conductivity.value: must be a list of numbers, at least one"),
    "text in list": ("[50, 40, 30]", '[50, "40", 30]', "conductivity.value: must be a list of numbers, at least one"),
    "infinite": (
        "[50, 40, 30]",
        "[50, inf, 30]",
        "conductivity.value: every entry must be a finite number",
    ),
    "absolute zero": ("T = [20,", "T = [-300,", "conductivity.T: '-300 °C' is below absolute zero (-273.15 °C)"),
    "missing source": (
        '[density]\nvalue = "7.85 g/cm3"\nsource = "mill"\n',
        '[density]\nvalue = "7.85 g/cm3"\n',
        "density.source: missing, every number names its source",
    ),
    "missing locator": ('locator = "page 1"\n', "", "density.locator: missing"),
    "empty locator": ('locator = "page 1"', 'locator = " "', "density.locator: must be a text in quotes"),
    "unknown kind": (
        '"measured"',
        '"guessed"',
        "density.kind: 'guessed' is not one of measured, recommended, estimated, assumed, memory",
    ),
    "negative uncertainty": ('"5 %"', '"-5 %"', "density.uncertainty: must be from 0 to 100 %"),
    "unknown rule": (
        'rule = "linear"',
        'rule = "cubic"',
        "conductivity.rule: 'cubic' is not one of linear, monotone, step",
    ),
    "format": ("format = 1", "format = 2", "format: this version reads format = 1"),
    "flag": ("grows = true", 'grows = "yes"', "surface.black.grows: must be true or false"),
    "no surface": (
        "[surface.black]\ngrows = true",
        "[nothing]",
        "surface: missing, give the emissivity of at least one surface state ([surface.oxidised])",
    ),
    "melting in part": ("[magnetics]", f'[solidus]\nvalue = "1400 °C"\n{CITE}[magnetics]', "liquidus: missing table"),
    "no magnetics": ('mu_r = "1"\n', "", "magnetics: give mu_r, curve or law"),
    "permeability": ('mu_r = "1"', 'mu_r = "-1"', "magnetics.mu_r: must be above zero"),
    "aliases": ('group = "steel"', 'group = "steel"\naliases = "x"', "aliases: must be a list of texts"),
    "not a table": ("[surface.black]", "[surface]\nblack = 0.8\n[rest]", "surface.black: must be a table"),
    "narrow transformation": (
        "[magnetics]",
        f'[transformation.a]\ntemperature = "900 °C"\nwidth = "0.1 K"\nheat = "1 kJ/kg"\n{CITE}[magnetics]',
        "transformation.a.width: spread the heat over at least 1 K",
    ),
    "difference": (
        "[magnetics]",
        f'[transformation.a]\ntemperature = "900 °C"\nwidth = "2 °C"\nheat = "1 kJ/kg"\n{CITE}[magnetics]',
        "transformation.a.width: '2 °C' is a temperature, a temperature difference is wanted: write \"2 K\"",
    ),
}


@pytest.mark.parametrize(("old", "new", "message"), REFUSALS.values(), ids=REFUSALS.keys())
def test_refusal_names_file_and_key(tmp_path: Path, old: str, new: str, message: str) -> None:
    assert old in GOOD
    with pytest.raises(MaterialError) as refusal:
        load(tmp_path, GOOD.replace(old, new, 1))
    assert str(refusal.value) == f"{tmp_path / 'mine.toml'}: {message}"


MAGNETIC_REFUSALS = {
    "law": ('law = "brauer"\n', "magnetics.law: 'brauer' is not one of froehlich-kennelly"),
    "nothing": ("", "magnetics: give mu_r, curve or law"),
    "saturation": (
        'law = "froehlich-kennelly"\nsaturation = "0 T"\nH_k = "1 kA/m"\n',
        "magnetics.saturation: must be above zero",
    ),
    "origin": (
        'curve = "normal"\nH = [0, 1]\nH_unit = "kA/m"\n',
        "magnetics.H: must be above zero (the origin is understood)",
    ),
    "unsorted": (
        'curve = "normal"\nH = [2, 1]\nH_unit = "kA/m"\n',
        "magnetics.H: must rise from value to value, 1 kA/m follows 2 kA/m",
    ),
    "below air": (
        'curve = "normal"\nH = [1, 2e6]\nH_unit = "A/m"\nB = [1, 2]\nB_unit = "T"\nmu_r_initial = 500\n',
        "magnetics.B: needs one number for each H, all above mu0 H",
    ),
    "initial": (
        'curve = "normal"\nH = [100]\nH_unit = "A/m"\nB = [1]\nB_unit = "T"\nmu_r_initial = 1\n',
        "magnetics.mu_r_initial: must be above 1",
    ),
    "effective": (
        'curve = "effective"\nH = [100]\nH_unit = "A/m"\nmu_r = [0.5]\nmu_r_unit = "1"\n',
        "magnetics.mu_r: needs one number for each H, none below 1",
    ),
}


@pytest.mark.parametrize(("lines", "message"), MAGNETIC_REFUSALS.values(), ids=MAGNETIC_REFUSALS.keys())
def test_refusal_of_a_magnetic_law(tmp_path: Path, lines: str, message: str) -> None:
    with pytest.raises(MaterialError) as refusal:
        load(tmp_path, magnetic(lines))
    assert str(refusal.value) == f"{tmp_path / 'mine.toml'}: {message}"


def test_laws_need_a_curie_temperature_above_room_temperature(tmp_path: Path) -> None:
    text = magnetic('law = "froehlich-kennelly"\nsaturation = "2 T"\nH_k = "1 kA/m"\n')
    with pytest.raises(MaterialError, match=r"curie_temperature: missing table$"):
        load(tmp_path, text.replace("[curie_temperature]", "[curie]"))
    with pytest.raises(MaterialError, match=r"curie_temperature\.value: must be above 27 °C"):
        load(tmp_path, text.replace("770 °C", "10 °C"))


def test_unreadable_files(tmp_path: Path) -> None:
    with pytest.raises(MaterialError, match=r"nowhere\.toml: cannot be read \(No such file or directory\)"):
        database.load_file("nowhere.toml")
    with pytest.raises(MaterialError, match=r"mine\.toml: line 1: this is not TOML: invalid value"):
        load(tmp_path, "a = = 1")


def test_unknown_source_lists_the_known_ones(tmp_path: Path) -> None:
    with pytest.raises(MaterialError, match=r"density\.source: 'nobody' is not one of .*bisra-1953.*mill"):
        load(tmp_path, GOOD.replace('source = "mill"', 'source = "nobody"', 1))
