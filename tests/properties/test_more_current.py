"""More current never makes colder, nor more field where there is no coil.

With constant resistivity and permeability this is the comparison principle: heat grows with the square of the current
in every cell, losses grow with temperature, so no temperature anywhere is ever lower. It needs a surface that does
not remember: one that has been hotter keeps the oxide it grew and may cool below the other.

With real properties a hotter piece may take up less; past the Curie point a small part. It still holds for the mean
where the heat depends on the temperature of the skin alone (thick sections) or of each cell alone (thin ones): at
equal temperatures there the larger current heats more, so the first to be caught up would draw ahead again. A passage
of the Curie point is no exception: a surface that falls back regains its permeability. In between, the field couples
the cells and nothing forbids that the means cross, but no pair of runs did by more than the runs are good for. The
ground of it holds exactly: at given temperatures the power absorbed rises with the current. (Not so the heat of every
cell: deep cells are shielded better while the permeability still rises with the field.)
"""

import copy
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from whole_cases import FEW, MANY, Document, Draw, Drawn, between, setup_of, share, whole_cases

from materials import database
from materials.parsing import material_from
from materials.reader import Section
from thermal.case.write import to_toml
from thermal.interfaces import Array
from thermal.loop import run
from thermal.results.dense import Sampled, sample
from thermal.results.history import History
from thermal.setup import Setup

FIXED = ("coil_current", "surface_field")
FACTORS = (1.02, 1.1, 1.5, 3.0)
TOLERANCE = 0.1
"""[K] of the runs."""
AT_THE_CURIE_POINT = 3.0
"""Tolerances by which the mean may be off where a piece comes to rest there (measured 2.8 in 1000 pairs)."""
Run = tuple[Setup, History]


def driven(document: Document, factor: float) -> Document:
    """The same case at a multiple of its drives."""
    changed = copy.deepcopy(document)
    for stage in changed["schedule"]:
        for name in FIXED:
            if name in stage.get("drive", {}):
                value, unit = stage["drive"][name].split()
                stage["drive"][name] = f"{float(value) * factor!r} {unit}"
    return changed


def both(document: Document, factor: float, folder: str = ".") -> tuple[Run, Run]:
    setups = [setup_of(driven(document, each), folder) for each in (1.0, factor)]
    less, more = ((setup, run(setup)) for setup in setups)
    return less, more


def side_by_side(less: Run, more: Run) -> tuple[Sampled, Sampled]:
    """Both runs at the steps of the first, as far as the other goes."""
    time, stage = less[1].time, less[1].stage
    far = (time <= more[1].time[-1]) & (stage <= more[1].stage[-1])
    return sample(*less, stage[far], time[far]), sample(*more, stage[far], time[far])


# Constant resistivity and permeability ------------------------------------------------------------------------------

CONSTANT = {"source": "made-up", "locator": "for this test", "kind": "assumed", "uncertainty": "10 %"}


def table(unit: str, *values: float) -> Document:
    T = [20, 500, 1000][: len(values)]
    return {"T": T, "T_unit": "°C", "value": list(values), "unit": unit, "rule": "linear", "beyond": "hold", **CONSTANT}


@st.composite
def constant_alloys(draw: Draw) -> Document:
    """A file of an alloy of constant resistivity and permeability; conductivity and specific heat do as they like."""
    k, c = draw(between(5.0, 300.0)), draw(between(300.0, 1000.0))
    return {
        "format": 1,
        "key": "constant",
        "title": "Constant resistivity and permeability",
        "group": "steel",
        "sources": {"made-up": {"title": "A metal made up"}},
        "density": {"value": f"{draw(between(2500.0, 9000.0)):.4g} kg/m3", **CONSTANT},
        "conductivity": table("W/(m K)", k, k * draw(share(0.4, 1.5)), k * draw(share(0.4, 1.5))),
        "resistivity": table("uohm m", draw(between(0.017, 1.3))),
        "specific_heat": table("J/(kg K)", c, c * draw(share(1.0, 2.0)), c * draw(share(1.0, 1.5))),
        "magnetics": {"mu_r": f"{draw(between(1.0, 100.0)):.4g}", **CONSTANT},
        "surface": {"grey": {"grows": False, **table("1", draw(share(0.1, 0.9)))}},
    }


@st.composite
def constant_cases(draw: Draw) -> tuple[Document, Drawn]:
    alloy = draw(constant_alloys())
    material = material_from(Section("constant.toml", "", alloy), database.sources())
    plans = (("heat",), ("heat", "transfer"), ("transfer", "heat"), ("heat", "transfer", "heat"))
    case = draw(
        whole_cases(
            drives=FIXED,
            tolerances=("0.1 K",),
            refinements=(1,),
            plans=plans,
            free=False,
            own=("constant.toml", material),
        )
    )
    return alloy, case


def no_temperature_is_lower(alloy: Document, case: Drawn, factor: float, folder: Path) -> None:
    (folder / "constant.toml").write_text(to_toml(alloy), encoding="utf-8")
    less, more = side_by_side(*both(case.document, factor, str(folder)))
    assert np.all(more.extended >= less.extended - TOLERANCE)


@given(drawn=constant_cases(), factor=st.sampled_from(FACTORS))
@FEW
def test_constant_properties(
    drawn: tuple[Document, Drawn], factor: float, tmp_path_factory: pytest.TempPathFactory
) -> None:
    no_temperature_is_lower(*drawn, factor, tmp_path_factory.mktemp("alloy"))


@pytest.mark.slow
@given(drawn=constant_cases(), factor=st.sampled_from(FACTORS))
@MANY
def test_constant_properties_of_many(
    drawn: tuple[Document, Drawn], factor: float, tmp_path_factory: pytest.TempPathFactory
) -> None:
    no_temperature_is_lower(*drawn, factor, tmp_path_factory.mktemp("alloy"))


# Real properties ----------------------------------------------------------------------------------------------------

real_cases = whole_cases(drives=FIXED, tolerances=(f"{TOLERANCE} K",), refinements=(1,), plans=(("heat",),), free=False)


def the_mean_is_not_lower(case: Drawn, factor: float) -> None:
    less, more = side_by_side(*both(case.document, factor))
    assert np.all(more.readings["mean"] >= less.readings["mean"] - AT_THE_CURIE_POINT * TOLERANCE)


@given(case=real_cases, factor=st.sampled_from(FACTORS))
@FEW
def test_real_properties(case: Drawn, factor: float) -> None:
    the_mean_is_not_lower(case, factor)


@pytest.mark.slow
@given(case=real_cases, factor=st.sampled_from(FACTORS))
@MANY
def test_real_properties_of_many(case: Drawn, factor: float) -> None:
    the_mean_is_not_lower(case, factor)


@st.composite
def sections(draw: Draw) -> tuple[Drawn, Array]:
    """A case, and how hot its section is from the core outwards: (2,) as a share of the range of its data."""
    return draw(real_cases), np.array([draw(share(0.0, 1.0)), draw(share(0.0, 1.0))])


@given(drawn=sections(), factor=st.sampled_from(FACTORS), excitation=between(1.0, 1e5))
@settings(FEW, max_examples=50)
def test_the_power_rises_with_the_current_at_given_temperatures(
    drawn: tuple[Drawn, Array], factor: float, excitation: float
) -> None:
    case, ends = drawn
    setup = setup_of(case.document)
    depth = np.linspace(0.0, 1.0, setup.section.mesh.r.size)
    T = setup.T_initial + (setup.T_end - setup.T_initial) * np.interp(depth, [0.0, 1.0], ends)
    field_of = setup.source.at(T)
    less, more = (field_of(excitation * each, setup.frequency, None) for each in (1.0, factor))
    assert more.H_surface_rms > less.H_surface_rms
    assert more.power > less.power
