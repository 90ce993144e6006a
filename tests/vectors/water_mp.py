"""Water in 50 digits: the published formulae once more, for the answers of the vectors.

Density: Kell 1975. Permittivity: Fernández et al. 1997 (IAPWS R8-97). Debye–Hückel slopes from
the limiting law with CODATA 2018 constants. The numbers are those of version 1 of the vectors.
"""

from __future__ import annotations

from typing import Any

from mpmath import mp, mpf

KELL = (
    "999.83952",
    "16.945176",
    "-7.9870401e-3",
    "-46.170461e-6",
    "105.56302e-9",
    "-280.54253e-12",
)
HARRIS_ALDER = (
    ("0.978224486826", 1, "0.25"),
    ("-0.957771379375", 1, "1"),
    ("0.237511794148", 1, "2.5"),
    ("0.714692244396", 2, "1.5"),
    ("-0.298217036956", 3, "1.5"),
    ("-0.108863472196", 3, "2.5"),
    ("0.0949327488264", 4, "2"),
    ("-0.00980469816509", 5, "2"),
    ("0.000016516763497", 6, "5"),
    ("0.0000937359795772", 7, "0.5"),
    ("-0.00000000012317921872", 10, "10"),
)


def density(t_celsius: Any) -> Any:
    """kg/m3 at 1 atm."""
    t = mpf(t_celsius)
    above = mp.fsum(mpf(c) * t**n for n, c in enumerate(KELL))
    return above / (1 + mpf("16.879850e-3") * t)


def permittivity(t_celsius: Any) -> Any:
    """Relative permittivity at 1 atm."""
    T = mpf(t_celsius) + mpf("273.15")
    rho = density(t_celsius)
    compressed, tau = rho / 322, mpf("647.096") / T
    g = 1 + mp.fsum(mpf(n) * compressed**i * tau ** mpf(j) for n, i, j in HARRIS_ALDER)
    g += mpf("0.00196096504426") * compressed / (T / 228 - 1) ** mpf("1.2")
    eps0 = 1 / (4 * mp.pi * mpf("1e-7") * mpf(299792458) ** 2)
    number = mpf("6.0221367e23") * rho / mpf("0.018015268")  # molecules/m3
    a = number * mpf("6.138e-30") ** 2 * g / (eps0 * mpf("1.380658e-23") * T)
    b = number * mpf("1.636e-40") / (3 * eps0)
    root = mp.sqrt(9 + 2 * a + 18 * b + a**2 + 10 * a * b + 9 * b**2)
    return (1 + a + 5 * b + root) / (4 * (1 - b))


def debye_huckel(t_celsius: Any) -> tuple[Any, Any]:
    """(A of log10 γ in kg^½ mol^-½, B in kg^½ mol^-½ Å^-1)."""
    T = mpf(t_celsius) + mpf("273.15")
    e, k, avogadro = mpf("1.602176634e-19"), mpf("1.380649e-23"), mpf("6.02214076e23")
    kappa2 = 2 * avogadro * e**2 * density(t_celsius)
    kappa2 /= mpf("8.8541878128e-12") * permittivity(t_celsius) * k * T  # m^-2 at I = 1 mol/kg
    kappa = mp.sqrt(kappa2)
    contact = e**2 / (8 * mp.pi * mpf("8.8541878128e-12") * permittivity(t_celsius) * k * T)
    return contact * kappa / mp.log(10), kappa * mpf("1e-10")
