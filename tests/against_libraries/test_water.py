"""Water against the iapws library: IAPWS-95 density, IAPWS R8-97 permittivity."""

import math

import numpy as np
import pytest
from iapws import IAPWS95

from builder.chem.water import (
    BeyondWater,
    debye_huckel,
    debye_huckel_from,
    density_kg_m3,
    kelvin,
    log10_kw,
    permittivity,
)

# At 1 atm; 100 °C is taken just above its vapour pressure, so that the library stays in the liquid.
POINTS = [(t, 0.101325) for t in (0, 4, 10, 15, 20, 25, 30, 37, 40, 50, 60, 70, 80, 90, 99)]
POINTS.append((100, 0.1020))

EVERYTHING = (density_kg_m3, permittivity, log10_kw)


@pytest.mark.parametrize(("t", "pressure_mpa"), POINTS)
def test_density(t: int, pressure_mpa: float) -> None:
    water = IAPWS95(T=kelvin(float(t)), P=pressure_mpa)
    # 0.004 kg/m3: Kell's maximum is 999.972, the present one 999.975. Beyond 50 °C the two
    # temperature scales part, by up to 0.026 K, which at 0.75 kg/m3 a kelvin is 0.02.
    assert density_kg_m3(float(t)) == pytest.approx(water.rho, abs=0.004 if t <= 50 else 0.02)


@pytest.mark.parametrize(("t", "pressure_mpa"), POINTS)
def test_permittivity(t: int, pressure_mpa: float) -> None:
    water = IAPWS95(T=kelvin(float(t)), P=pressure_mpa)
    # The same formulation: what remains is the density, relative 2e-5, and it enters about
    # linearly (0.001 of 55).
    assert permittivity(float(t)) == pytest.approx(water.epsilon, abs=0.002)


@pytest.mark.parametrize(("t", "pressure_mpa"), POINTS)
def test_slopes_from_the_kappa_of_scipy_constants(t: int, pressure_mpa: float) -> None:
    from scipy.constants import N_A, e, epsilon_0, k

    water = IAPWS95(T=kelvin(float(t)), P=pressure_mpa)
    # Inverse Debye length at I = 1 mol/kg from its textbook form, then A = kappa l / (2 ln 10).
    kappa = math.sqrt(2 * N_A * e**2 * water.rho / (water.epsilon * epsilon_0 * k * water.T))
    bjerrum = e**2 / (4 * math.pi * epsilon_0 * water.epsilon * k * water.T)
    a, b = debye_huckel_from(float(t), water.rho, water.epsilon)
    # Only the vacuum permittivity differs (CODATA 2018 or later, 1e-9).
    assert a == pytest.approx(kappa * bjerrum / (2 * math.log(10)), rel=1e-8)
    assert b == pytest.approx(kappa * 1e-10, rel=1e-8)


@pytest.mark.parametrize("function", EVERYTHING)
def test_arrays_give_what_floats_give(function) -> None:
    t = np.array([0.0, 4.0, 25.0, 37.0, 99.9, 100.0])
    together = function(t)
    assert isinstance(together, np.ndarray)
    for one, value in zip(t, together, strict=True):
        alone = function(float(one))
        assert type(alone) is float
        # Powers and logarithms of arrays may differ from those of floats in the last bit.
        assert value == pytest.approx(alone, rel=1e-14)


def test_slopes_of_an_array() -> None:
    a, b = debye_huckel(np.array([0.0, 100.0]))
    assert [a[0], b[0]] == pytest.approx(debye_huckel(0.0), rel=1e-14)
    assert [a[1], b[1]] == pytest.approx(debye_huckel(100.0), rel=1e-14)
    assert a[1] > a[0]
    assert b[1] > b[0]


@pytest.mark.parametrize("function", (*EVERYTHING, debye_huckel))
@pytest.mark.parametrize("t", [-0.01, 100.01, -300.0, 1e9, math.nan, math.inf])
def test_beyond_liquid_water_is_refused_in_words(function, t: float) -> None:
    with pytest.raises(BeyondWater, match="beyond liquid water as described here, 0 to 100 °C"):
        function(t)
    with pytest.raises(BeyondWater):
        function(np.array([25.0, t]))


def test_the_limits_themselves_belong_to_the_range() -> None:
    for function in EVERYTHING:
        assert math.isfinite(function(0.0))
        assert math.isfinite(function(100.0))
    with pytest.raises(BeyondWater) as caught:
        density_kg_m3(101.5)
    assert (caught.value.value, caught.value.low, caught.value.high) == (101.5, 0.0, 100.0)


def test_kelvin() -> None:
    # By definition of the Celsius temperature.
    assert kelvin(25.0) == 298.15
    assert list(kelvin(np.array([0.0, 37.0]))) == [273.15, 310.15]
