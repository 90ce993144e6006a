// Twin of builder/site/words.py, and the strict reading of what people type.
var Sparingly = Sparingly || {};
(function (S) {
  'use strict';

  var NUMBER = /^[+-]?(\d+(\.\d*)?|\.\d+)(e[+-]?\d+)?$/i;

  function shown(x, digits) {
    return S.rounding.display(S.rounding.significant(x, digits || 3));
  }

  function constantText(value, reason) {
    if (value.log10_k === null) {
      return {
        log10_k: '', u: '', k: '', low: '', high: '', state: 'refused',
        state_words: 'refused: ' + reason
      };
    }
    var out = {
      k: shown(Math.pow(10, value.log10_k)), low: '', high: '', state: value.state,
      state_words: value.state === 'beyond-range'
        ? 'beyond the range of the law by ' + S.rounding.fixed(value.beyond_by_k, 1) + ' K'
        : 'within the range of the law'
    };
    if (value.u === null) {
      out.log10_k = S.rounding.display(S.rounding.fixed(value.log10_k, 2));
      out.u = 'not evaluated';
      return out;
    }
    var pair = S.rounding.withUncertainty(value.log10_k, value.u);
    out.log10_k = S.rounding.display(pair[0]);
    out.u = S.rounding.display(pair[1]);
    out.low = shown(value.interval[0]);
    out.high = shown(value.interval[1]);
    return out;
  }

  function amountText(answer) {
    var out = {
      mol_per_kg: '', metal_mg_per_l: '', g_per_l: '', low_mg_per_l: '', high_mg_per_l: '',
      factor: ''
    };
    if (answer.state !== 'computed') {
      return out;
    }
    var s = answer.solubility_mol_per_kg, u = answer.standard_uncertainty_log10;
    out.mol_per_kg = shown(Math.abs(s));
    out.metal_mg_per_l = shown(answer.metal_mg_per_l);
    out.g_per_l = shown(Math.abs(answer.solubility_g_per_l));
    if (u !== null) {
      // what was added is exact, what dissolves is not
      var half = answer.constant.coverage_factor * u;
      var ends = [s * Math.pow(10, -half), s * Math.pow(10, half)].map(function (bound) {
        return (bound - s) * answer.metal_mg_per_mol * answer.solubility_mol_per_l / s;
      }).sort(function (a, b) { return a - b; });
      out.low_mg_per_l = shown(Math.max(answer.metal_mg_per_l + ends[0], 0));
      out.high_mg_per_l = shown(answer.metal_mg_per_l + ends[1]);
    }
    if (s > 0 && answer.textbook_mol_per_kg > 0) {
      out.factor = shown(s / answer.textbook_mol_per_kg);
    }
    return out;
  }

  // A typed number: {value} or {error: 'sentence'}. U+2212 is a minus; a comma is refused.
  function readNumber(text) {
    var plain = text.trim().replace(/\u2212/g, '-');
    if (plain === '') {
      return { error: 'Type a number.' };
    }
    if (plain.indexOf(',') >= 0) {
      return { error: 'Write the decimals with a point, as in 0.05; there is a comma in \u201c' +
        text.trim() + '\u201d.' };
    }
    if (!NUMBER.test(plain)) {
      return { error: '\u201c' + text.trim() + '\u201d is not a number.' };
    }
    return { value: Number(plain) };
  }

  // A typed temperature in °C; "313 K" and "37 °C" are understood.
  function readTemperature(text) {
    var match = /^(.*?)\s*(°\s*C|C|K)?$/i.exec(text.trim());
    var number = readNumber(match[1]);
    if (number.error) {
      return number;
    }
    var kelvin = match[2] && match[2].toUpperCase() === 'K';
    var t = kelvin ? Number((number.value - 273.15).toFixed(6)) : number.value;
    if (!(t >= 0 && t <= 100)) {
      return { error: 'Between 0 and 100 °C, please: beyond that water is not liquid at 1 bar.' };
    }
    return { value: t };
  }

  S.words = {
    shown: shown,
    constantText: constantText,
    amountText: amountText,
    readNumber: readNumber,
    readTemperature: readTemperature
  };
})(Sparingly);
