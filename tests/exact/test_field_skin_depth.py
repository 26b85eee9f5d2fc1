"""Skin depths of the usual metals (case HB-02).

Resistivities from memory, as handbooks print them; depths computed from sqrt(rho/(pi f mu_0 mu_r)) with mu_0 = 4 pi
1e-7 (E. J. Davies, Conduction and Induction Heating, 1990, from memory).
"""

import pytest
from numpy.testing import assert_allclose

from thermal.circuit.winding import copper_depth
from thermal.eddy.exact import skin_depth

FREQUENCIES = [50, 500, 1000, 3000, 10000, 30000, 100000, 200000, 450000]
"""[Hz]"""

METALS = [
    # Resistivity [ohm m], mu_r, skin depth [mm] at the frequencies above.
    pytest.param(
        1.7241e-08,
        1.0,
        [
            9.345797256,
            2.955400588,
            2.089783797,
            1.206537238,
            0.6608476616,
            0.3815405753,
            0.2089783797,
            0.1477700294,
            0.09851335294,
        ],
        id="copper 20C",
    ),
    pytest.param(
        2.13e-08,
        1.0,
        [
            10.38783233,
            3.284921012,
            2.322789924,
            1.341063388,
            0.7345306685,
            0.4240814792,
            0.2322789924,
            0.1642460506,
            0.1094973671,
        ],
        id="copper 80C (coil)",
    ),
    pytest.param(
        8.2e-08,
        1.0,
        [
            20.38177747,
            6.445283958,
            4.557503993,
            2.631276157,
            1.441209306,
            0.832082581,
            0.4557503993,
            0.3222641979,
            0.2148427986,
        ],
        id="copper 900C",
    ),
    pytest.param(
        2.82e-08,
        1.0,
        [
            11.95252563,
            3.779720478,
            2.672665981,
            1.543064424,
            0.8451711925,
            0.4879598155,
            0.2672665981,
            0.1889860239,
            0.1259906826,
        ],
        id="aluminium 20C",
    ),
    pytest.param(
        8.5e-08,
        1.0,
        [
            20.75126576,
            6.562126412,
            4.640124085,
            2.67897689,
            1.467336073,
            0.847166877,
            0.4640124085,
            0.3281063206,
            0.2187375471,
        ],
        id="aluminium 500C",
    ),
    pytest.param(
        1.8e-07,
        40.0,
        [
            4.774648293,
            1.509876363,
            1.067643815,
            0.6164044441,
            0.3376186186,
            0.1949242003,
            0.1067643815,
            0.07549381816,
            0.0503292121,
        ],
        id="carbon steel 20C mur 40",
    ),
    pytest.param(
        1.8e-07,
        100.0,
        [
            3.019752726,
            0.9549296586,
            0.6752372371,
            0.3898484006,
            0.213528763,
            0.1232808888,
            0.06752372371,
            0.04774648293,
            0.03183098862,
        ],
        id="carbon steel 20C mur 100",
    ),
    pytest.param(
        9e-07,
        10.0,
        [
            21.3528763,
            6.752372371,
            4.774648293,
            2.756644477,
            1.509876363,
            0.8717275247,
            0.4774648293,
            0.3376186186,
            0.225079079,
        ],
        id="carbon steel 700C",
    ),
    pytest.param(
        1.13e-06,
        1.0,
        [
            75.66139621,
            23.9262343,
            16.91840252,
            9.767844249,
            5.350068633,
            3.088863566,
            1.691840252,
            1.196311715,
            0.7975411432,
        ],
        id="carbon steel 900C",
    ),
    pytest.param(
        1.22e-06,
        1.0,
        [
            78.61674251,
            24.86079685,
            17.57923804,
            10.14937782,
            5.559043174,
            3.209515073,
            1.757923804,
            1.243039843,
            0.8286932285,
        ],
        id="carbon steel 1200C",
    ),
    pytest.param(
        7.2e-07,
        1.0,
        [
            60.39505453,
            19.09859317,
            13.50474474,
            7.796968012,
            4.270575261,
            2.465617776,
            1.350474474,
            0.9549296586,
            0.6366197724,
        ],
        id="austenitic 20C",
    ),
    pytest.param(
        1.28e-06,
        1.0,
        [
            80.52673937,
            25.46479089,
            18.00632632,
            10.39595735,
            5.694100347,
            3.287490368,
            1.800632632,
            1.273239545,
            0.8488263632,
        ],
        id="austenitic 1200C",
    ),
    pytest.param(
        6.5e-08,
        1.0,
        [
            18.14645549,
            5.738413081,
            4.057670803,
            2.34269733,
            1.283148173,
            0.7408259432,
            0.4057670803,
            0.286920654,
            0.191280436,
        ],
        id="brass 20C",
    ),
    pytest.param(
        1e-05,
        1.0,
        [
            225.079079,
            71.17625434,
            50.3292121,
            29.05758416,
            15.91549431,
            9.188814924,
            5.03292121,
            3.558812717,
            2.372541811,
        ],
        id="graphite",
    ),
]


@pytest.mark.parametrize(("rho", "mu_r", "depths"), METALS)
def test_skin_depth(rho, mu_r, depths):
    for frequency, depth in zip(FREQUENCIES, depths, strict=True):
        assert_allclose(1e3 * skin_depth(rho, frequency, mu_r), depth, rtol=1e-9)
        # The rule of thumb of the trade, 503 sqrt(rho/(mu_r f)) (common practice).
        assert_allclose(depth, 503e3 * (rho / (mu_r * frequency)) ** 0.5, rtol=1e-3)
        if mu_r == 1.0:
            assert_allclose(1e3 * copper_depth(rho, frequency), depth, rtol=1e-9)


def test_holds_arrays_of_properties():
    depths = skin_depth([1.22e-6, 1.8e-7], 10e3, [1.0, 40.0])
    assert_allclose(depths, [5.559043174e-3, 0.3376186186e-3], rtol=1e-9)


CARBON_STEEL = [
    # HB-01: steel with 0.4 % C at 1 kHz; resistivity [uohm cm] and mu_r of a printed exercise (holooly.com), depth
    # [cm] recomputed: three of the six printed answers keep mu_r = 40 and are wrong.
    (16.0, 40.0, 0.1007),
    (29.6, 36.0, 0.1443),
    (49.3, 30.0, 0.2040),
    (76.6, 15.0, 0.3597),
    (104.2, 1.0, 1.6246),
    (114.6, 1.0, 1.7038),
]


@pytest.mark.parametrize(("rho", "mu_r", "depth"), CARBON_STEEL)
def test_carbon_steel_on_the_way_up(rho, mu_r, depth):
    assert_allclose(100.0 * skin_depth(rho * 1e-8, 1e3, mu_r), depth, atol=5.1e-5)
