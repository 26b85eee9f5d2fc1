"""The gas tables against live CoolProp, and a case in each gas."""

import numpy as np
import pytest

from materials.database import gas, gas_names

coolprop = pytest.importorskip("CoolProp.CoolProp")


@pytest.mark.parametrize("key", gas_names())
def test_tables_between_their_nodes(key):
    state, found = coolprop.AbstractState("HEOS", key.capitalize()), gas(key)
    for T in np.geomspace(found.T_min, found.T_max, 211):
        T = float(np.clip(T, found.T_min, found.T_max))
        state.update(coolprop.PT_INPUTS, 101325.0, T)
        for value, expected in (
            (found.density(T), state.rhomass()),
            (found.viscosity(T), state.viscosity()),
            (found.conductivity(T), state.conductivity()),
            (found.heat_capacity(T), state.cpmass()),
            (found.prandtl(T), state.Prandtl()),
            (found.kinematic_viscosity(T), state.viscosity() / state.rhomass()),
        ):
            assert float(value) == pytest.approx(expected, rel=1e-3)


@pytest.mark.parametrize("key", gas_names())
def test_expansion_is_near_that_of_the_real_gas(key):
    state, found = coolprop.AbstractState("HEOS", key.capitalize()), gas(key)
    for T in np.geomspace(found.T_min * 1.0001, found.T_max, 30):
        state.update(coolprop.PT_INPUTS, 101325.0, float(T))
        assert float(found.expansion(T)) == pytest.approx(state.isobaric_expansion_coefficient(), rel=0.05)


@pytest.mark.parametrize("key", gas_names())
def test_tables_reach_as_far_as_the_equations(key):
    state, found = coolprop.AbstractState("HEOS", key.capitalize()), gas(key)
    assert state.Tmin() < found.T_min
    assert found.T_max <= state.Tmax()
    if key != "air":
        assert found.T_max == state.Tmax() == 2000.0
