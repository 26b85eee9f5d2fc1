import numpy as np
import pytest
from numpy.testing import assert_allclose

from thermal.boundary.convection import (
    constant_convection,
    cylinder_convection,
    forced_coefficient,
    free_coefficient,
    plate_convection,
)
from thermal.boundary.correlations import (
    CYLINDER_RAYLEIGH,
    PLATE_RAYLEIGH,
    cylinder_in_cross_flow,
    horizontal_cylinder,
    plate_in_parallel_flow,
    vertical_cylinder,
    vertical_plate,
)
from thermal.errors import OutOfRange

TA = 293.15
ABOVE = TA + np.geomspace(1e-3, 2900.0, 7001)
BELOW = TA - np.geomspace(1e-3, 80.0, 3001)


def direct(air, name):
    """The loss under test and the coefficient from the correlations themselves."""
    lying = free_coefficient(air, TA, 0.05, horizontal_cylinder, CYLINDER_RAYLEIGH)
    upright = free_coefficient(air, TA, 0.2, vertical_plate, PLATE_RAYLEIGH)
    round_side = free_coefficient(air, TA, 0.2, lambda Ra, Pr: vertical_cylinder(Ra, Pr, 4.0), PLATE_RAYLEIGH)
    across = forced_coefficient(air, TA, 0.05, 3.0, cylinder_in_cross_flow)
    along = forced_coefficient(air, TA, 0.2, 3.0, plate_in_parallel_flow)
    return {
        "lying": (cylinder_convection("c", air, TA, 0.05, 0.2, "horizontal"), lying),
        "upright": (cylinder_convection("c", air, TA, 0.05, 0.2, "vertical"), round_side),
        "plate": (plate_convection("c", air, TA, 0.2), upright),
        "lying, blown at": (
            cylinder_convection("c", air, TA, 0.05, 0.2, "horizontal", 3.0),
            lambda T: (lying(T) ** 3 + across(T) ** 3) ** (1 / 3),
        ),
        "plate, blown at": (
            plate_convection("c", air, TA, 0.2, 3.0),
            lambda T: (upright(T) ** 3 + along(T) ** 3) ** (1 / 3),
        ),
    }[name]


@pytest.mark.parametrize("name", ["lying", "upright", "plate", "lying, blown at", "plate, blown at"])
@pytest.mark.parametrize("T", [ABOVE, BELOW], ids=["hotter", "colder"])
def test_table_meets_the_correlation(air, name, T):
    loss, h = direct(air, name)
    q, _ = loss.flux(T, T)
    assert np.abs(q / (h(T) * (T - TA)) - 1).max() < 1e-4


@pytest.mark.parametrize("name", ["lying", "upright", "lying, blown at"])
def test_flux_passes_through_zero_without_a_step(air, name):
    loss, _ = direct(air, name)
    T = TA + np.linspace(-0.5, 0.5, 2001)
    q, slope = loss.flux(T, T)
    assert loss.flux(np.array([TA]), np.array([TA]))[0] == 0.0
    assert np.all(np.diff(q) > 0)
    assert np.diff(q).max() < 1.01 * slope.max() * 5e-4
    assert_allclose(q[::-1], -q, rtol=0.005, atol=1e-9)


def test_free_and_forced_together_are_a_little_more_than_the_larger(air):
    still = cylinder_convection("c", air, TA, 0.05, 0.2, "horizontal")
    T = np.array([1200.0])
    free = still.flux(T, T)[0]
    across = forced_coefficient(air, TA, 0.05, 0.6, cylinder_in_cross_flow)(T) * (T - TA)
    both = cylinder_convection("c", air, TA, 0.05, 0.2, "horizontal", 0.6).flux(T, T)[0]
    assert max(free, across) < both <= 2 ** (1 / 3) * max(free, across)


def test_constant_coefficient():
    q, slope = constant_convection("c", 15.0, TA).flux(np.array([TA - 10, TA + 100]), np.array([TA, 500.0]))
    assert_allclose(q, [-150.0, 1500.0], rtol=1e-12)
    assert_allclose(slope, [15.0, 15.0])


def test_refuses_a_surface_beyond_the_gas_table(air):
    loss = cylinder_convection("convection", air, TA, 0.05, 0.2, "horizontal")
    hottest = 2 * air.T_max - TA
    loss.flux(np.array([hottest - 0.1]), np.array([hottest]))
    with pytest.raises(OutOfRange, match=r"^convection: .* is tabulated from -23 to 1627 °C \(mean of surface"):
        loss.flux(np.array([hottest + 0.1]), np.array([hottest]))
    with pytest.raises(OutOfRange, match="is tabulated"):
        loss.flux(np.array([2 * air.T_min - TA - 0.1]), np.array([hottest]))


def test_refuses_surroundings_beyond_the_gas_table(air):
    with pytest.raises(OutOfRange, match="the surroundings are at -73 °C"):
        plate_convection("convection", air, 200.0, 0.2)


def test_refuses_where_the_forced_correlation_ends(air):
    # half a millimetre of wire at 0.05 m/s: Re Pr falls below 0.2 as the film gets hot
    loss = cylinder_convection("convection", air, TA, 0.0005, 0.2, "horizontal", 0.05)
    loss.flux(np.array([900.0]), np.array([900.0]))
    with pytest.raises(OutOfRange, match=r"Reynolds and Prandtl number is 0.2, the correlation holds for 0.2 or more"):
        loss.flux(np.array([1500.0]), np.array([1500.0]))


def test_refuses_in_the_middle_where_only_moderate_temperatures_are_out(air):
    # a cylinder of 8 m: the Rayleigh number is highest at a few hundred degrees and falls again beyond
    loss = cylinder_convection("convection", air, TA, 8.0, 20.0, "horizontal")
    loss.flux(np.array([TA + 10]), np.array([TA + 10]))
    with pytest.raises(OutOfRange, match="not known for a surface beyond 42 °C"):
        loss.flux(np.array([TA + 100]), np.array([TA + 100]))


def test_refuses_a_flow_that_is_out_of_range_everywhere(air):
    with pytest.raises(OutOfRange, match=r"^convection: forced flow along a plate: the Reynolds number is"):
        plate_convection("convection", air, TA, 1.0, 1e4)
