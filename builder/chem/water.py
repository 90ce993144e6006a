"""Liquid water from 0 to 100 °C: density, permittivity, Debye–Hückel slopes, ionisation.

Every function takes a Celsius temperature, a float or a numpy array, and returns the same kind.
Outside 0-100 °C it raises `BeyondWater`. Pressure is 1 atm (density) or saturation; over this
range the difference is far below the uncertainty of any constant in the collection. Kell's
temperatures are IPTS-68; read as ITS-90 they cost at most 0.02 kg/m3, at 100 °C.
"""

import math
from typing import TypeVar

import numpy as np
from numpy.typing import NDArray

Values = TypeVar("Values", float, NDArray[np.float64])

LOWEST_C = 0.0
HIGHEST_C = 100.0
ZERO_CELSIUS_K = 273.15

# Kell 1975, J. Chem. Eng. Data 20, 97, eq. 16 (recalled): density in kg/m3 at 1 atm, 0-150 °C,
# as a polynomial in t, constant term first, over 1 + KELL_DIVISOR t.
KELL_COEFFICIENTS = (
    999.83952,
    16.945176,
    -7.9870401e-3,
    -46.170461e-6,
    105.56302e-9,
    -280.54253e-12,
)
KELL_DIVISOR = 16.879850e-3

# Fernández, Goodwin, Lemmon, Levelt Sengers, Williams 1997, J. Phys. Chem. Ref. Data 26, 1125
# (the IAPWS release R8-97; recalled): terms N, i, j of the Harris–Alder factor
# g = 1 + sum N (rho/rho_c)^i (T_c/T)^j + N12 (rho/rho_c) (T/228 - 1)^-1.2.
PERMITTIVITY_TERMS = (
    (0.978224486826, 1, 0.25),
    (-0.957771379375, 1, 1.0),
    (0.237511794148, 1, 2.5),
    (0.714692244396, 2, 1.5),
    (-0.298217036956, 3, 1.5),
    (-0.108863472196, 3, 2.5),
    (0.949327488264e-1, 4, 2.0),
    (-0.980469816509e-2, 5, 2.0),
    (0.165167634970e-4, 6, 5.0),
    (0.937359795772e-4, 7, 0.5),
    (-0.123179218720e-9, 10, 10.0),
)
PERMITTIVITY_LAST = 0.196096504426e-2
CRITICAL_TEMPERATURE_K = 647.096
CRITICAL_DENSITY_KG_M3 = 322.0
# The constants the permittivity was fitted with belong to the fit: they are not today's.
FIT_BOLTZMANN = 1.380658e-23
FIT_AVOGADRO = 6.0221367e23
FIT_EPSILON_0 = 1.0 / (4e-7 * math.pi * 299792458.0**2)
FIT_DIPOLE_C_M = 6.138e-30
FIT_POLARISABILITY = 1.636e-40
FIT_MOLAR_MASS_KG = 0.018015268

# Marshall & Franck 1981, J. Phys. Chem. Ref. Data 10, 295 (recalled): log10 Kw =
# A + B/T + C/T^2 + D/T^3 + (E + F/T + G/T^2) log10(density in g/cm3).
KW_CONSTANT = (-4.098, -3245.2, 2.2362e5, -3.984e7)
KW_DENSITY = (13.957, -1262.3, 8.5641e5)

# CODATA 2018; the first three are exact.
ELEMENTARY_CHARGE = 1.602176634e-19
BOLTZMANN = 1.380649e-23
AVOGADRO = 6.02214076e23
EPSILON_0 = 8.8541878128e-12


class BeyondWater(ValueError):  # noqa: N818 - it reads as the sentence it says
    """A temperature at which this module does not describe water; limits in °C."""

    def __init__(self, value: float, low: float = LOWEST_C, high: float = HIGHEST_C) -> None:
        super().__init__(
            f"{value:g} °C is beyond liquid water as described here, {low:g} to {high:g} °C"
        )
        self.value = value
        self.low = low
        self.high = high


def kelvin(t_celsius: Values) -> Values:
    """Thermodynamic temperature in K. The only place where 273.15 is added."""
    return t_celsius + ZERO_CELSIUS_K


def density_kg_m3(t_celsius: Values) -> Values:
    """Density of water in kg/m3 at 1 atm (Kell 1975)."""
    _require_liquid(t_celsius)
    t = t_celsius
    c = KELL_COEFFICIENTS
    top = c[0] + t * (c[1] + t * (c[2] + t * (c[3] + t * (c[4] + t * c[5]))))
    return top / (1.0 + KELL_DIVISOR * t)


def permittivity(t_celsius: Values) -> Values:
    """Relative permittivity of water at 1 atm (Fernández et al. 1997 with Kell's density)."""
    rho = density_kg_m3(t_celsius)
    T = kelvin(t_celsius)
    delta = rho / CRITICAL_DENSITY_KG_M3
    tau = CRITICAL_TEMPERATURE_K / T
    g: Values = 1.0 + PERMITTIVITY_LAST * delta * (T / 228.0 - 1.0) ** -1.2
    for n, i, j in PERMITTIVITY_TERMS:
        g = g + n * delta**i * tau**j
    molar_density = rho / FIT_MOLAR_MASS_KG
    a = FIT_AVOGADRO * FIT_DIPOLE_C_M**2 * molar_density * g / (FIT_EPSILON_0 * FIT_BOLTZMANN * T)
    b = FIT_AVOGADRO * FIT_POLARISABILITY * molar_density / (3.0 * FIT_EPSILON_0)
    root: Values = (9.0 + 2.0 * a + 18.0 * b + a * a + 10.0 * a * b + 9.0 * b * b) ** 0.5
    return (1.0 + a + 5.0 * b + root) / (4.0 - 4.0 * b)


def debye_huckel(t_celsius: Values) -> tuple[Values, Values]:
    """(A, B): A of log10 gamma in kg^0.5 mol^-0.5, B in kg^0.5 mol^-0.5 Å^-1, molal basis."""
    return debye_huckel_from(t_celsius, density_kg_m3(t_celsius), permittivity(t_celsius))


def debye_huckel_from(
    t_celsius: Values, density: Values, relative_permittivity: Values
) -> tuple[Values, Values]:
    """As `debye_huckel`, from a density in kg/m3 and a relative permittivity given.

    The limiting law of Debye and Hückel 1923: with l = e^2/(4 pi eps0 eps k T),
    A = (2 pi N rho)^(1/2) l^(3/2) / ln 10 and B = (8 pi N rho l)^(1/2).
    """
    bjerrum_m = ELEMENTARY_CHARGE**2 / (
        4.0 * math.pi * EPSILON_0 * relative_permittivity * BOLTZMANN * kelvin(t_celsius)
    )
    A = (2.0 * math.pi * AVOGADRO * density) ** 0.5 * bjerrum_m**1.5 / math.log(10.0)
    B = (8.0 * math.pi * AVOGADRO * density * bjerrum_m) ** 0.5 * 1e-10
    return A, B


def log10_kw(t_celsius: Values) -> Values:
    """log10 of the ion product of water, molal (Marshall & Franck 1981 with Kell's density)."""
    inverse_T = 1.0 / kelvin(t_celsius)
    c = KW_CONSTANT
    d = KW_DENSITY
    log10_density = _log10(density_kg_m3(t_celsius) / 1000.0)
    constant = c[0] + inverse_T * (c[1] + inverse_T * (c[2] + inverse_T * c[3]))
    return constant + (d[0] + inverse_T * (d[1] + inverse_T * d[2])) * log10_density


def _log10(x: Values) -> Values:
    return np.log10(x) if isinstance(x, np.ndarray) else math.log10(x)


def _require_liquid(t_celsius: float | NDArray[np.float64]) -> None:
    t = np.ravel(t_celsius)
    outside = t[~((t >= LOWEST_C) & (t <= HIGHEST_C))]  # NaN is outside too
    if outside.size:
        raise BeyondWater(float(outside[0]))
