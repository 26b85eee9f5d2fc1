"""The air table against live CoolProp, and its limits."""

import numpy as np
import pytest

from materials.database import gas
from materials.errors import MaterialError


def test_air_against_coolprop() -> None:
    coolprop = pytest.importorskip("CoolProp.CoolProp")
    state = coolprop.AbstractState("HEOS", "Air")
    air = gas("air")
    for T in [250.0, *np.linspace(251.3, 1898.7, 133), 1900.0]:
        state.update(coolprop.PT_INPUTS, 101325.0, float(T))
        for found, expected in (
            (air.density(T), state.rhomass()),
            (air.viscosity(T), state.viscosity()),
            (air.conductivity(T), state.conductivity()),
            (air.heat_capacity(T), state.cpmass()),
            (air.prandtl(T), state.Prandtl()),
            (air.kinematic_viscosity(T), state.viscosity() / state.rhomass()),
        ):
            assert float(found) == pytest.approx(expected, rel=1e-3)


def test_expansion_is_that_of_an_ideal_gas() -> None:
    assert gas("air").expansion([300.0, 1000.0]) == pytest.approx([1 / 300.0, 1e-3])


@pytest.mark.parametrize("method", ["density", "kinematic_viscosity", "prandtl", "expansion", "conductivity"])
@pytest.mark.parametrize("T", [249.0, 1901.0])
def test_refused_outside_the_tables(method: str, T: float) -> None:
    air = gas("air")
    assert (air.T_min, air.T_max) == (250.0, 1900.0)
    with pytest.raises(MaterialError, match=r"air.* 250 to 1900 K"):
        getattr(air, method)(np.array([300.0, T]))
