"""What build makes of the words of a case."""

from pathlib import Path

import numpy as np
import pytest

from materials import database
from thermal import from_text
from thermal.build import build
from thermal.case.starter import starter

DATA = Path(database.__file__).parent / "data"

BILLET = starter("billet")
STAGE = '[[schedule]]\nstage = "transfer"'
HOLD = '[[schedule]]\nstage = "hold"\nat = { surface = "850 °C" }\nduration = "5 s"\n\n'


def built(text, folder=Path(".")):
    return build(from_text(text, folder))


def material_file(tmp_path, magnetics):
    """steel-c45 with another magnetic table, as a user's own file."""
    text = (DATA / "steel/steel-c45.toml").read_text(encoding="utf-8")
    head, _, rest = text.partition("[magnetics]")
    _, _, tail = rest.partition("\n[")
    (tmp_path / "own.toml").write_text(f"{head}{magnetics}\n[{tail}", encoding="utf-8")
    return BILLET.replace('material = "steel-c45"', 'material = "own.toml"')


def test_the_use_of_the_permeability_data_is_said(tmp_path):
    assert any("normal B-H curve" in line for line in built(BILLET).assumptions)
    effective = """[magnetics]
curve = "effective"
H = [1, 10, 100, 1000]
H_unit = "kA/m"
mu_r = [900, 140, 17, 2.5]
mu_r_unit = "1"
source = "common-practice"
locator = "made up for this test"
kind = "assumed"
uncertainty = "50 %"
"""
    setup = built(material_file(tmp_path, effective), tmp_path)
    assert any("already given as effective" in line for line in setup.assumptions)


def test_a_touching_row_shares_the_coil():
    alone, row = built(BILLET), built(BILLET.replace('neighbours = "none" ', 'neighbours = "touching" '))
    assert alone.share == 1.0
    assert row.share == pytest.approx(200.0 / 240.0)
    assert alone.losses["coil"]["ends"] and not row.losses["coil"]["ends"]
    # In the open every piece is alone.
    assert row.losses["open"]["ends"]


def test_the_lining_is_left_behind_in_the_transfer():
    setup = built(BILLET)
    assert [loss.name for loss in setup.losses["coil"]["outer"]] == ["lining"]
    assert [loss.name for loss in setup.losses["open"]["outer"]] == ["radiation", "convection"]


def test_the_first_cell_follows_the_skin_depth_at_the_operating_field():
    coarse = built(BILLET)
    fine = built(BILLET.replace('frequency = "2 kHz"', 'frequency = "200 kHz"'))
    first = [np.diff(setup.section.mesh.edges)[-1] for setup in (coarse, fine)]
    assert first[1] < 0.2 * first[0]
    refined = built(BILLET + "\n[numerics]\nrefinement = 2\n")
    assert refined.section.mesh.volume.size == 2 * coarse.section.mesh.volume.size


def test_a_thin_coil_wall_is_noted():
    thin = built(BILLET.replace('tube = "12 mm" ', 'tube = "12 mm"\nwall = "1 mm" '))
    assert any("thin against" in note for note in thin.notes)
    assert not built(BILLET).notes


def test_mass_and_end_of_the_run():
    setup = built(BILLET)
    assert setup.mass == pytest.approx(7845.0 * np.pi * 0.025**2 * 0.2)
    assert setup.T_end == pytest.approx(1495.0 + 273.15)


@pytest.mark.parametrize(
    ("kind", "changes", "said"),
    [
        ("billet", (), "Curie point of steel-c45: rounded off by 1 K"),
        ("plate", (), "end effect of the coil that of a round one"),
        ("billet", (("initial =", 'axis = "vertical"\ninitial ='),), "upright plate"),
        ("heater", ((STAGE, HOLD + STAGE),), "schedule.1 (hold): at most what the heating before it used"),
    ],
)
def test_what_the_model_takes_for_granted_is_listed(kind, changes, said):
    text = starter(kind)
    for old, new in changes:
        text = text.replace(old, new)
    assert any(said in line for line in built(text).assumptions)


def test_nothing_is_listed_that_does_not_apply():
    copper = BILLET.replace("steel-c45", "copper").replace("1150 °C", "700 °C")
    lines = " ".join(built(copper).assumptions)
    assert "Curie" not in lines and "upright" not in lines and "(hold)" not in lines and "round one" not in lines
