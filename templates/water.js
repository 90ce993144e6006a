/* Liquid water from 0 to 100 °C and the Debye–Hückel slopes (twin of builder/chem/water.py,
   where the sources of the numbers are). Temperatures in °C; outside the range: RangeError. */
var Sparingly = Sparingly || {};
(function (S) {
  'use strict';

  var ZERO_CELSIUS_K = 273.15;
  var LOWEST_C = 0;
  var HIGHEST_C = 100;

  // Kell 1975: density, constant term first, over 1 + KELL_DIVISOR t.
  var KELL = [999.83952, 16.945176, -7.9870401e-3, -46.170461e-6, 105.56302e-9, -280.54253e-12];
  var KELL_DIVISOR = 16.879850e-3;

  // Fernández et al. 1997: terms N, i, j of the Harris–Alder factor.
  var TERMS = [
    [0.978224486826, 1, 0.25], [-0.957771379375, 1, 1], [0.237511794148, 1, 2.5],
    [0.714692244396, 2, 1.5], [-0.298217036956, 3, 1.5], [-0.108863472196, 3, 2.5],
    [0.949327488264e-1, 4, 2], [-0.980469816509e-2, 5, 2], [0.165167634970e-4, 6, 5],
    [0.937359795772e-4, 7, 0.5], [-0.123179218720e-9, 10, 10]
  ];
  var LAST_TERM = 0.196096504426e-2;
  var CRITICAL_TEMPERATURE_K = 647.096;
  var CRITICAL_DENSITY_KG_M3 = 322;
  // The constants the permittivity was fitted with belong to the fit: they are not today's.
  var FIT_BOLTZMANN = 1.380658e-23;
  var FIT_AVOGADRO = 6.0221367e23;
  var FIT_EPSILON_0 = 1 / (4e-7 * Math.PI * 299792458 * 299792458);
  var FIT_DIPOLE_C_M = 6.138e-30;
  var FIT_POLARISABILITY = 1.636e-40;
  var FIT_MOLAR_MASS_KG = 0.018015268;

  // CODATA 2018
  var ELEMENTARY_CHARGE = 1.602176634e-19;
  var BOLTZMANN = 1.380649e-23;
  var AVOGADRO = 6.02214076e23;
  var EPSILON_0 = 8.8541878128e-12;

  // Thermodynamic temperature in K; the only place where 273.15 is added.
  function kelvin(tCelsius) {
    return tCelsius + ZERO_CELSIUS_K;
  }

  // kg/m3 at 1 atm
  function density(tCelsius) {
    if (!(tCelsius >= LOWEST_C && tCelsius <= HIGHEST_C)) {
      throw new RangeError(tCelsius + ' °C is beyond liquid water as described here, ' +
        LOWEST_C + ' to ' + HIGHEST_C + ' °C');
    }
    var top = KELL.reduceRight(function (sum, c) { return sum * tCelsius + c; }, 0);
    return top / (1 + KELL_DIVISOR * tCelsius);
  }

  // relative, at 1 atm
  function permittivity(tCelsius) {
    var rho = density(tCelsius);
    var T = kelvin(tCelsius);
    var delta = rho / CRITICAL_DENSITY_KG_M3;
    var tau = CRITICAL_TEMPERATURE_K / T;
    var g = TERMS.reduce(function (sum, term) {
      return sum + term[0] * Math.pow(delta, term[1]) * Math.pow(tau, term[2]);
    }, 1 + LAST_TERM * delta * Math.pow(T / 228 - 1, -1.2));
    var molarDensity = rho / FIT_MOLAR_MASS_KG;
    var a = FIT_AVOGADRO * FIT_DIPOLE_C_M * FIT_DIPOLE_C_M * molarDensity * g /
      (FIT_EPSILON_0 * FIT_BOLTZMANN * T);
    var b = FIT_AVOGADRO * FIT_POLARISABILITY * molarDensity / (3 * FIT_EPSILON_0);
    var root = Math.sqrt(9 + 2 * a + 18 * b + a * a + 10 * a * b + 9 * b * b);
    return (1 + a + 5 * b + root) / (4 - 4 * b);
  }

  // { A: of log10 γ, kg^0.5 mol^-0.5; B: kg^0.5 mol^-0.5 Å^-1 }, molal
  function debyeHuckel(tCelsius) {
    var rho = density(tCelsius);
    var bjerrum = ELEMENTARY_CHARGE * ELEMENTARY_CHARGE /
      (4 * Math.PI * EPSILON_0 * permittivity(tCelsius) * BOLTZMANN * kelvin(tCelsius));
    return {
      A: Math.sqrt(2 * Math.PI * AVOGADRO * rho) * Math.pow(bjerrum, 1.5) / Math.LN10,
      B: Math.sqrt(8 * Math.PI * AVOGADRO * rho * bjerrum) * 1e-10
    };
  }

  S.water = {
    kelvin: kelvin,
    density: density,
    permittivity: permittivity,
    debyeHuckel: debyeHuckel
  };
})(Sparingly);
