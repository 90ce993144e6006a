// Twin of builder/chem/curve.py: a law with its uncertainty and range, evaluated at a temperature.
// Same order of operations as the Python; log10 K is summed term by term.
var Sparingly = Sparingly || {};
(function (S) {
  'use strict';

  var ZERO_CELSIUS_K = 273.15;
  var CURVATURE_FROM_C = 55.0;
  var CURVATURE_PER_K = 0.06 / 35.0;
  var BEYOND_PER_K = 0.01;

  // curve: {law: [7], covariance: [[3],[3],[3]] or null, range_c: [low, high], carries_k,
  // thermodynamic, flat, coverage_factor}. Answer: {state, beyond_by_k, log10_k, u, interval}
  // with null where there is none.
  function at(curve, tCelsius) {
    var low = curve.range_c[0], high = curve.range_c[1];
    var beyond = Math.max(low - tCelsius, tCelsius - high, 0);
    var answer = {
      state: 'refused', beyond_by_k: beyond, log10_k: null, u: null, interval: null,
      coverage_factor: curve.coverage_factor
    };
    if (!(tCelsius >= 0 && tCelsius <= 100) || beyond > curve.carries_k) {
      return answer;
    }
    var t = tCelsius + ZERO_CELSIUS_K, t0 = curve.law[0];
    var b = [
      1, 1 / t - 1 / t0, t0 / t - 1 + Math.log(t / t0),
      t - t0, 1 / (t * t) - 1 / (t0 * t0), t * t - t0 * t0
    ];
    var value = 0;
    for (var i = 0; i < 6; i += 1) {
      value += curve.law[i + 1] * b[i];
    }
    answer.state = beyond > 0 ? 'beyond-range' : 'within-range';
    answer.log10_k = value;
    answer.u = uncertainty(curve, b, tCelsius, beyond);
    if (answer.u !== null) {
      var half = curve.coverage_factor * answer.u;
      answer.interval = [Math.pow(10, value - half), Math.pow(10, value + half)];
    }
    return answer;
  }

  function uncertainty(curve, b, tCelsius, beyond) {
    var c = curve.covariance, variance = 0;
    if (c === null) {
      return null;
    }
    for (var j = 0; j < 3; j += 1) {
      for (var k = 0; k < 3; k += 1) {
        variance += b[j] * c[j][k] * b[k];
      }
    }
    var curvature = curve.thermodynamic
      ? CURVATURE_PER_K * Math.max(0, tCelsius - CURVATURE_FROM_C) : 0;
    var outside = curve.thermodynamic ? 0 : BEYOND_PER_K * beyond;
    return Math.sqrt(
      Math.max(variance, 0) + curve.flat * curve.flat + curvature * curvature + outside * outside
    );
  }

  S.curve = { at: at };
})(Sparingly);
