/* The one rule by which numbers are rounded and written (twin of builder/chem/rounding.py).
   Decimal, half away from zero, on the exact value of the binary number; texts are ASCII. */
var Sparingly = Sparingly || {};
(function (S) {
  'use strict';

  // Beyond these magnitudes a number is written with a power of ten.
  var PLAIN_FROM_EXPONENT = -4;
  var PLAIN_BELOW_EXPONENT = 6;
  var MOST_DIGITS = 15;

  var NUMBER = /^(-?)([0-9]+(?:\.[0-9]+)?)(?:e([+-]?[0-9]+))?$/;
  var SUPERSCRIPTS = '⁰¹²³⁴⁵⁶⁷⁸⁹';

  function requireFinite(x) {
    if (!Number.isFinite(x)) {
      throw new RangeError(x + ' cannot be written as a number');
    }
  }

  // x times 10^decimals as an integer (BigInt), half away from zero, exact.
  function units(x, decimals) {
    requireFinite(x);
    var top = Math.abs(x);
    var halvings = 0;
    while (!Number.isInteger(top)) { // doubling a double loses nothing
      top *= 2;
      halvings += 1;
    }
    top = BigInt(top);
    var bottom = 1n << BigInt(halvings);
    if (decimals >= 0) {
      top *= 10n ** BigInt(decimals);
    } else {
      bottom *= 10n ** BigInt(-decimals);
    }
    var whole = (2n * top + bottom) / (2n * bottom);
    return x < 0 ? -whole : whole;
  }

  function magnitude(n) {
    return n < 0n ? -n : n;
  }

  // Power of ten of the first digit of non-zero x once rounded to so many digits.
  function roundedExponent(x, digits) {
    var exponent = Number(x.toExponential().split('e')[1]);
    var carried = magnitude(units(x, digits - 1 - exponent)) === 10n ** BigInt(digits);
    return carried ? exponent + 1 : exponent;
  }

  // An integer number of 10^-decimals in plain writing; zero has no sign.
  function point(n, decimals) {
    var sign = n < 0n ? '-' : '';
    var digits = magnitude(n).toString();
    if (decimals <= 0) {
      return sign + (n === 0n ? '0' : digits + '0'.repeat(-decimals));
    }
    digits = digits.padStart(decimals + 1, '0');
    return sign + digits.slice(0, -decimals) + '.' + digits.slice(-decimals);
  }

  // Plain or with a power of ten, by the exponent.
  function written(n, decimals, exponent) {
    if (PLAIN_FROM_EXPONENT <= exponent && exponent < PLAIN_BELOW_EXPONENT) {
      return point(n, decimals);
    }
    return point(n, decimals + exponent) + 'e' + exponent;
  }

  function fixed(x, decimals) {
    return point(units(x, decimals), decimals);
  }

  function significant(x, digits) {
    if (!(digits >= 1 && digits <= MOST_DIGITS)) {
      throw new RangeError(digits + ' significant digits asked for: from 1 to ' + MOST_DIGITS + ' can be');
    }
    requireFinite(x);
    if (x === 0) {
      return '0';
    }
    var exponent = roundedExponent(x, digits);
    var decimals = digits - 1 - exponent;
    return written(units(x, decimals), decimals, exponent);
  }

  // [text of the value, text of u]: u to two significant digits, the value to match (GUM 7.2.6).
  function withUncertainty(value, u) {
    requireFinite(value);
    requireFinite(u);
    if (u <= 0) {
      throw new RangeError('an uncertainty is greater than zero, not ' + u);
    }
    var exponent = roundedExponent(u, 2);
    var decimals = 1 - exponent;
    var n = units(value, decimals);
    if (n !== 0n) {
      exponent = Math.max(exponent, magnitude(n).toString().length - 1 - decimals);
    }
    return [written(n, decimals, exponent), written(units(u, decimals), decimals, exponent)];
  }

  // Typographic form of an ASCII number: '-1.23e-8' becomes '−1.23 × 10⁻⁸'.
  function display(text) {
    var match = NUMBER.exec(text);
    if (!match) {
      throw new RangeError('"' + text + '" is not a number as this script writes it');
    }
    var shown = (match[1] ? '−' : '') + match[2];
    if (match[3] === undefined) {
      return shown;
    }
    var power = String(Number(match[3])).replace(/[0-9]/g, function (d) {
      return SUPERSCRIPTS[Number(d)];
    });
    return shown + ' × 10' + power.replace('-', '⁻');
  }

  S.rounding = {
    fixed: fixed,
    significant: significant,
    withUncertainty: withUncertainty,
    display: display
  };
})(Sparingly);
