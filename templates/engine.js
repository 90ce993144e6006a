/* The engine of the page: solves one problem (twin of builder/chem/equilibrium.py).

     m_i γ_i = K_i Π_b a_b^ν_ib · a_w^ν_iw        dissolved form i
     Π_b a_b^r_kb · a_w^r_kw = K_k                hold k
     Σ_i ν_ib m_i = T_b + Σ_k e_kb s_k            balance of base ion b

   Unknowns are x = ln a of the base ions, the amounts s exchanged by the holds, the ionic strength
   I and Σ m. At a fixed I one root exists and damped Newton finds it. Then Newton on everything
   at once, from the solution at I = 0; where that does not arrive at a root with falling
   I_calc(I) - I, the root is bracketed from I = 0 upwards, so that the lowest one is given.

   Matrices are flat arrays, row after row. Fields of problem and answer have the names they have
   in builder/chem/problem.py, where they are described. */
var Sparingly = Sparingly || {};
(function (S) {
  'use strict';

  var IDEAL = 0, EXTENDED = 1, DAVIES = 2;
  var COMPUTED = 0, BEYOND_LIMIT = 1, NO_SOLUTION = 2;

  var LN10 = Math.LN10;
  var MOLAR_MASS_WATER = 0.018015; // kg/mol
  var LARGEST_STEP = 4; // in ln a
  var LOWEST_LN_A = -230;
  var INNER_STEPS = 200;
  var COUPLED_STEPS = 40;
  var SCAN_STEPS = 120;
  var ALLOWANCE = 1.000001; // 0.5 mol/kg of a salt is not beyond 0.5 for the H+ and OH- of water
  var MOST_SOLUTES = 20; // mol/kg: beyond it the scan holds the activity of water
  var CONVERGED = 1e-13; // balance error relative to the sum of absolute terms
  var ACCEPTED = 1e-12;
  var TINY = 1e-300;

  // log10 K of a law [T0, c0 ... c5] at T in kelvin (see builder/chem/temperature.py).
  function log10K(law, t) {
    var t0 = law[0];
    return law[1] +
      law[2] * (1 / t - 1 / t0) +
      law[3] * (t0 / t - 1 + Math.log(t / t0)) +
      law[4] * (t - t0) +
      law[5] * (1 / (t * t) - 1 / (t0 * t0)) +
      law[6] * (t * t - t0 * t0);
  }

  // ---- the problem at its temperature, in natural logarithms

  function flat(rows, width) {
    var out = new Float64Array(rows.length * width);
    rows.forEach(function (row, i) { out.set(row, i * width); });
    return out;
  }

  function evaluate(problem) {
    var t = S.water.kelvin(problem.t_celsius);
    var slopes = S.water.debyeHuckel(problem.t_celsius);
    var model = problem.model;
    var bases = problem.total.length;
    // one kind of array throughout: the browser then compiles the loops once
    function each(list, change) { return Float64Array.from(list, change); }
    function lnK(law) { return LN10 * log10K(law, t); }
    // an ideal solution has an ideal solvent too: no water term
    function wet(nu) { return model === IDEAL ? 0 : nu; }
    var z2 = each(problem.charge, function (z) { return z * z; });
    var strength = each(z2, function (z) { return model === IDEAL ? 0 : slopes.A * z; });
    var hold = flat(problem.hold, bases);
    var exchange = flat(problem.exchange, bases);
    return {
      forms: problem.charge.length,
      bases: bases,
      holds: problem.hold.length,
      nu: flat(problem.stoichiometry, bases),
      nuWater: each(problem.water, wet),
      z2: z2,
      lnK: each(problem.law, lnK),
      strength: strength,
      p: each(problem.size, function (size) {
        return model === EXTENDED ? slopes.B * size : model === DAVIES ? 1 : 0;
      }),
      q: each(problem.linear, function (linear, i) {
        if (model === DAVIES && z2[i] > 0) {
          return 0.3 * strength[i];
        }
        return model === IDEAL ? 0 : linear;
      }),
      total: each(problem.total),
      hold: hold,
      holdWater: each(problem.hold_water, wet),
      holdLnK: each(problem.hold_law, lnK),
      exchange: exchange,
      // every hold exchanges what it holds: only then is the problem convex
      symmetric: hold.every(function (r, at) { return r === exchange[at]; }),
      limit: model === IDEAL ? Infinity : problem.limit * ALLOWANCE
    };
  }

  // ---- small linear algebra

  function dot(a, fromA, b, fromB, length) {
    var sum = 0;
    for (var i = 0; i < length; i += 1) {
      sum += a[fromA + i] * b[fromB + i];
    }
    return sum;
  }

  function sumOf(a) {
    var sum = 0;
    for (var i = 0; i < a.length; i += 1) {
      sum += a[i];
    }
    return sum;
  }

  // Solves matrix · y = right by elimination with partial pivoting. Overwrites both and returns
  // right; a singular matrix gives NaN.
  function solveLinear(matrix, right) {
    var n = right.length, i, j, k, factor, held;
    for (k = 0; k < n; k += 1) {
      var best = k;
      for (i = k + 1; i < n; i += 1) {
        if (Math.abs(matrix[i * n + k]) > Math.abs(matrix[best * n + k])) {
          best = i;
        }
      }
      if (matrix[best * n + k] === 0) {
        return right.fill(NaN);
      }
      if (best !== k) {
        for (j = k; j < n; j += 1) {
          held = matrix[k * n + j];
          matrix[k * n + j] = matrix[best * n + j];
          matrix[best * n + j] = held;
        }
        held = right[k];
        right[k] = right[best];
        right[best] = held;
      }
      for (i = k + 1; i < n; i += 1) {
        factor = matrix[i * n + k] / matrix[k * n + k];
        if (factor !== 0) {
          for (j = k + 1; j < n; j += 1) {
            matrix[i * n + j] -= factor * matrix[k * n + j];
          }
          right[i] -= factor * right[k];
        }
      }
    }
    for (k = n - 1; k >= 0; k -= 1) {
      right[k] = (right[k] - dot(matrix, k * n + k + 1, right, k + 1, n - k - 1)) /
        matrix[k * n + k];
    }
    return right;
  }

  function multiplied(a, factors) {
    var out = new Float64Array(a.length);
    for (var i = 0; i < a.length; i += 1) {
      out[i] = a[i] * factors[i];
    }
    return out;
  }

  function transposed(matrix, n) {
    return matrix.map(function (ignored, at) { return matrix[(at % n) * n + Math.floor(at / n)]; });
  }

  // ---- the equations

  function log10Gamma(n, i, ionic) {
    var root = Math.sqrt(ionic);
    return -n.strength[i] * root / (1 + n.p[i] * root) + n.q[i] * ionic;
  }

  // d log10 γ / dI; infinite at I = 0, where it is not asked for
  function log10GammaSlope(n, i, ionic) {
    var root = Math.sqrt(ionic);
    var below = 1 + n.p[i] * root;
    return -n.strength[i] / (2 * root * below * below) + n.q[i];
  }

  function molality(n, x, ionic, solutes) {
    var m = new Float64Array(n.forms);
    var lnWater = -MOLAR_MASS_WATER * solutes;
    for (var i = 0; i < n.forms; i += 1) {
      var lnM = n.lnK[i] + dot(n.nu, i * n.bases, x, 0, n.bases) + n.nuWater[i] * lnWater -
        LN10 * log10Gamma(n, i, ionic);
      m[i] = Math.exp(Math.min(Math.max(lnM, -700), 700));
    }
    return m;
  }

  // Balance errors of the base ions and the sums of their absolute terms.
  function balance(n, m, s) {
    var error = new Float64Array(n.bases);
    var size = new Float64Array(n.bases);
    for (var b = 0; b < n.bases; b += 1) {
      var term, i, k;
      error[b] = -n.total[b];
      size[b] = Math.abs(n.total[b]);
      for (i = 0; i < n.forms; i += 1) {
        term = n.nu[i * n.bases + b] * m[i];
        error[b] += term;
        size[b] += Math.abs(term);
      }
      for (k = 0; k < n.holds; k += 1) {
        term = n.exchange[k * n.bases + b] * s[k];
        error[b] -= term;
        size[b] += Math.abs(term);
      }
      size[b] = Math.max(size[b], TINY);
    }
    return { error: error, size: size };
  }

  // Largest balance error relative to the sum of absolute terms.
  function residual(n, m, s) {
    var b = balance(n, m, s);
    var worst = 0;
    for (var i = 0; i < n.bases; i += 1) {
      worst = Math.max(worst, Math.abs(b.error[i]) / b.size[i]);
    }
    return worst;
  }

  // How far hold k is from being met, in ln K.
  function gap(n, k, x, solutes) {
    return n.holdLnK[k] - dot(n.hold, k * n.bases, x, 0, n.bases) +
      n.holdWater[k] * MOLAR_MASS_WATER * solutes;
  }

  // Σ_i ν_ib m_i ν_ic, written into the upper left of a matrix of so many columns.
  function putHessian(n, m, matrix, columns) {
    for (var i = 0; i < n.forms; i += 1) {
      for (var b = 0; b < n.bases; b += 1) {
        var part = n.nu[i * n.bases + b] * m[i];
        if (part !== 0) {
          for (var c = 0; c < n.bases; c += 1) {
            matrix[b * columns + c] += part * n.nu[i * n.bases + c];
          }
        }
      }
    }
  }

  // I and Σ m that follow from the solution at the I and Σ m assumed.
  function close(n, state) {
    var m = molality(n, state.x, state.ionic, state.solutes);
    return { ionic: 0.5 * dot(n.z2, 0, m, 0, n.forms), solutes: sumOf(m) };
  }

  // Jacobian of balances, holds, I and Σ m (rows) by x, s, I and Σ m (columns).
  function jacobian(n, m, ionic) {
    var order = n.bases + n.holds + 2;
    var byI = order - 2, byW = order - 1;
    var j = new Float64Array(order * order);
    var b, i, k;
    putHessian(n, m, j, order);
    for (k = 0; k < n.holds; k += 1) {
      for (b = 0; b < n.bases; b += 1) {
        j[b * order + n.bases + k] = -n.exchange[k * n.bases + b];
        j[(n.bases + k) * order + b] = n.hold[k * n.bases + b];
      }
      j[(n.bases + k) * order + byW] = -MOLAR_MASS_WATER * n.holdWater[k];
    }
    for (i = 0; i < n.forms; i += 1) {
      var mByI = -LN10 * log10GammaSlope(n, i, Math.max(ionic, TINY)) * m[i];
      var mByW = -MOLAR_MASS_WATER * n.nuWater[i] * m[i];
      var half = 0.5 * n.z2[i];
      for (b = 0; b < n.bases; b += 1) {
        var nu = n.nu[i * n.bases + b];
        j[b * order + byI] += nu * mByI;
        j[b * order + byW] += nu * mByW;
        j[byI * order + b] += half * m[i] * nu;
        j[byW * order + b] += m[i] * nu;
      }
      j[byI * order + byI] += half * mByI;
      j[byI * order + byW] += half * mByW;
      j[byW * order + byI] += mByI;
      j[byW * order + byW] += mByW;
    }
    j[byI * order + byI] -= 1;
    j[byW * order + byW] -= 1;
    return j;
  }

  // ---- inner problem: x and s at a fixed I and Σ m

  // First guess: the amounts given, moved onto the plane of the holds.
  function start(n) {
    var x = Float64Array.from(n.total, function (t) { return Math.log(Math.max(t, 1e-7)); });
    var gram = new Float64Array(n.holds * n.holds);
    var right = new Float64Array(n.holds);
    for (var k = 0; k < n.holds; k += 1) {
      for (var l = 0; l < n.holds; l += 1) {
        gram[k * n.holds + l] = dot(n.hold, k * n.bases, n.hold, l * n.bases, n.bases);
      }
      right[k] = n.holdLnK[k] - dot(n.hold, k * n.bases, x, 0, n.bases);
    }
    solveLinear(gram, right);
    for (var b = 0; b < n.bases; b += 1) {
      for (k = 0; k < n.holds; k += 1) {
        x[b] += n.hold[k * n.bases + b] * right[k];
      }
    }
    return { x: x, s: new Float64Array(n.holds), ionic: 0, solutes: 0, error: Infinity };
  }

  // Newton step in x and the new s of the balances and holds together.
  function innerStep(n, state, m) {
    var order = n.bases + n.holds;
    var matrix = new Float64Array(order * order);
    var right = new Float64Array(order);
    var sizes = new Float64Array(n.bases);
    var unit = Infinity; // in which s is solved for
    var b, c, k;
    putHessian(n, m, matrix, order);
    for (b = 0; b < n.bases; b += 1) {
      sizes[b] = Math.max(matrix[b * order + b] + Math.abs(n.total[b]), TINY);
      unit = Math.min(unit, sizes[b]);
      right[b] = n.total[b];
    }
    for (c = 0; c < n.forms; c += 1) {
      for (b = 0; b < n.bases; b += 1) {
        right[b] -= n.nu[c * n.bases + b] * m[c];
      }
    }
    for (b = 0; b < n.bases; b += 1) {
      right[b] /= sizes[b];
      for (c = 0; c < n.bases; c += 1) {
        matrix[b * order + c] /= sizes[b];
      }
      for (k = 0; k < n.holds; k += 1) {
        matrix[b * order + n.bases + k] = -n.exchange[k * n.bases + b] / sizes[b] * unit;
      }
    }
    for (k = 0; k < n.holds; k += 1) {
      matrix.set(n.hold.subarray(k * n.bases, (k + 1) * n.bases), (n.bases + k) * order);
      right[n.bases + k] = gap(n, k, state.x, state.solutes);
    }
    solveLinear(matrix, right);
    return {
      x: right.subarray(0, n.bases),
      s: right.slice(n.bases).map(function (s) { return s * unit; })
    };
  }

  function largestOf(a) {
    var most = 0;
    for (var i = 0; i < a.length; i += 1) {
      most = Math.max(most, Math.abs(a[i])); // NaN stays NaN
    }
    return most;
  }

  function moved(x, step, damping) {
    var out = new Float64Array(x.length);
    for (var b = 0; b < x.length; b += 1) {
      out[b] = x[b] + damping * step[b];
    }
    return out;
  }

  // Halves the damping until the convex function Σ m - T·x falls; small steps need no check.
  // Off the plane of the holds it may have to rise: only descents are checked.
  function descend(n, state, m, step, damping, largest) {
    var before = sumOf(m) - dot(n.total, 0, state.x, 0, n.bases);
    var slope = -dot(n.total, 0, step, 0, n.bases);
    for (var i = 0; i < n.forms; i += 1) {
      slope += m[i] * dot(n.nu, i * n.bases, step, 0, n.bases);
    }
    if (!(n.symmetric && largest > 1e-3 && slope < 0)) {
      return damping;
    }
    for (var tries = 0; tries < 30; tries += 1) {
      var x = moved(state.x, step, damping);
      var after = sumOf(molality(n, x, state.ionic, state.solutes)) -
        dot(n.total, 0, x, 0, n.bases);
      if (after <= before + 1e-4 * damping * slope + 1e-15 * Math.abs(before)) {
        break;
      }
      damping *= 0.5;
    }
    return damping;
  }

  // Where a hold exchanges something else, the ion exchanged may ask for a negative amount until
  // the others settle: it must not hold them up, nor go beyond return.
  function limitEach(step, x) {
    step.forEach(function (v, b) {
      var limited = Math.min(Math.max(v, -LARGEST_STEP), LARGEST_STEP);
      step[b] = Math.max(limited, Math.min(LOWEST_LN_A - x[b], 0));
    });
  }

  // Newton at the I and Σ m of the state; updates x, s and error in place.
  function inner(n, state) {
    var m = molality(n, state.x, state.ionic, state.solutes);
    for (var round = 0; round < INNER_STEPS; round += 1) {
      var step = innerStep(n, state, m);
      state.s = step.s;
      if (!n.symmetric) {
        limitEach(step.x, state.x);
      }
      var largest = largestOf(step.x);
      if (!Number.isFinite(largest)) {
        state.error = Infinity;
        return;
      }
      var damping = Math.min(1, LARGEST_STEP / Math.max(largest, TINY));
      damping = descend(n, state, m, step.x, damping, largest);
      state.x = moved(state.x, step.x, damping);
      m = molality(n, state.x, state.ionic, state.solutes);
      state.error = residual(n, m, state.s);
      if ((state.error < CONVERGED && largest < 1e-6) || largest < 1e-14) {
        return;
      }
    }
  }

  // ---- outer problem

  // The Jacobian with each row relative to the size of its equation and each column in the unit of
  // its unknown: without this, amounts of 1e-20 drown among those of 1.
  function scaled(n, state, m, sizes) {
    var order = n.bases + n.holds + 2;
    var matrix = jacobian(n, m, state.ionic);
    var rows = new Float64Array(order).fill(1);
    var columns = new Float64Array(order).fill(1);
    var unit = Infinity;
    for (var b = 0; b < n.bases; b += 1) {
      rows[b] = 1 / sizes[b];
      unit = Math.min(unit, sizes[b]);
    }
    columns.fill(unit, n.bases, n.bases + n.holds);
    rows[order - 2] = 1 / state.ionic;
    columns[order - 2] = state.ionic;
    for (var r = 0; r < order; r += 1) {
      for (var c = 0; c < order; c += 1) {
        matrix[r * order + c] *= rows[r] * columns[c];
      }
    }
    return { matrix: matrix, rows: rows, columns: columns };
  }

  // Newton on everything at once. True where it arrives at a root with falling I_calc - I.
  function coupled(n, state) {
    var order = n.bases + n.holds + 2;
    var byI = order - 2, byW = order - 1;
    var closed = close(n, state);
    state.ionic = Math.max(closed.ionic, 1e-12);
    state.solutes = closed.solutes;
    if (!Number.isFinite(state.error)) {
      return false;
    }
    for (var round = 0; round < COUPLED_STEPS; round += 1) {
      var m = molality(n, state.x, state.ionic, state.solutes);
      var bal = balance(n, m, state.s);
      var j = scaled(n, state, m, bal.size);
      var right = new Float64Array(order);
      for (var r = 0; r < byI; r += 1) {
        right[r] = r < n.bases ? -bal.error[r] : gap(n, r - n.bases, state.x, state.solutes);
      }
      right[byI] = state.ionic - 0.5 * dot(n.z2, 0, m, 0, n.forms);
      right[byW] = state.solutes - sumOf(m);
      right = multiplied(right, j.rows);
      state.error = largestOf(right);
      var step = multiplied(solveLinear(j.matrix, right), j.columns);
      var largest = Math.max(largestOf(step.subarray(0, n.bases)), Math.abs(step[byI]) / state.ionic);
      if (!Number.isFinite(largest)) {
        return false;
      }
      var damping = Math.min(1, 1 / Math.max(largest, TINY));
      state.x = moved(state.x, step, damping);
      state.s = moved(state.s, step.subarray(n.bases), damping);
      state.ionic = Math.max(state.ionic + damping * step[byI], 1e-14);
      state.solutes += damping * step[byW];
      if (largest < 1e-9) {
        return falling(n, state);
      }
      if (state.ionic > 20 * Math.max(n.limit, 1)) {
        return false;
      }
    }
    return false;
  }

  // True where d I_calc/dI < 1: the (I, I) entry of the inverse Jacobian is 1/(I_calc' - 1), and
  // scaling keeps its sign.
  function falling(n, state) {
    var m = molality(n, state.x, state.ionic, state.solutes);
    var unit = new Float64Array(n.bases + n.holds + 2);
    unit[n.bases + n.holds] = 1;
    var j = scaled(n, state, m, balance(n, m, state.s).size);
    return solveLinear(j.matrix, unit)[n.bases + n.holds] < 0;
  }

  // Brackets the lowest root of I_calc(I) - I from I = 0. Returns the state of the answer.
  function scan(n, state) {
    var top = Math.min(n.limit, 50);
    var low = 0, high = Infinity;
    state.ionic = 0;
    state.solutes = 0;
    for (var round = 0; round < SCAN_STEPS; round += 1) {
      inner(n, state);
      var closed = close(n, state);
      if (closed.ionic >= state.ionic) {
        low = state.ionic;
        if (state.ionic >= top) {
          // what is not solved at a fixed I says nothing about the limit
          return state.error < ACCEPTED ? BEYOND_LIMIT : NO_SOLUTION;
        }
      } else {
        high = state.ionic;
      }
      state.solutes = Math.min(closed.solutes, MOST_SOLUTES);
      state.ionic = high < Infinity ? 0.5 * (low + high)
        : Math.min(Math.max(closed.ionic, 1.05 * state.ionic), top);
    }
    inner(n, state);
    closed = close(n, state);
    state.solutes = closed.solutes;
    var open = Math.abs(closed.ionic - state.ionic) > 1e-9 * Math.max(closed.ionic, 1e-9);
    return open || !(state.error < ACCEPTED) ? NO_SOLUTION : COMPUTED;
  }

  // Solves the problem; returns the state of the answer and where the iteration stands.
  function settle(n) {
    var state = start(n);
    inner(n, state);
    var afterZero = Object.assign({}, state); // x and s are replaced by every step, never changed
    var outcome = COMPUTED;
    if (!coupled(n, state)) {
      state = afterZero;
      outcome = scan(n, state);
    }
    if (outcome === COMPUTED && state.ionic > n.limit) {
      outcome = BEYOND_LIMIT;
    }
    state.molality = molality(n, state.x, state.ionic, state.solutes);
    state.residual = residual(n, state.molality, state.s);
    if (outcome === COMPUTED && !(state.residual < ACCEPTED)) {
      outcome = NO_SOLUTION;
    }
    state.outcome = outcome;
    return state;
  }

  // ---- the answer

  // Adjoint of the Jacobian for s_0: one solve gives the slope by every constant.
  function sensitivities(n, state) {
    var order = n.bases + n.holds + 2;
    var m = state.molality, s0 = state.s[0];
    if (n.holds === 0) {
      return {
        by_form: new Array(n.forms).fill(0), by_hold: [], by_total: new Array(n.bases).fill(0)
      };
    }
    var j = scaled(n, state, m, balance(n, m, state.s).size);
    var unit = new Float64Array(order);
    unit[n.bases] = j.columns[n.bases];
    var adjoint = multiplied(solveLinear(transposed(j.matrix, order), unit), j.rows);
    return {
      by_form: Array.from(m, function (mi, i) {
        // d(equations)/d ln K_i = m_i times (ν_i, 0, z²/2, 1); of a hold: -1 in its own row
        var pull = dot(n.nu, i * n.bases, adjoint, 0, n.bases) +
          0.5 * n.z2[i] * adjoint[order - 2] + adjoint[order - 1];
        return -mi * pull / s0;
      }),
      by_hold: Array.from(adjoint.subarray(n.bases, n.bases + n.holds), function (a) {
        return a / s0;
      }),
      by_total: Array.from(adjoint.subarray(0, n.bases), function (a) { return a / s0; })
    };
  }

  // All but the state is NaN where there is no answer.
  function shown(n, state, fields) {
    var blank = state.outcome !== COMPUTED;
    Object.keys(fields).forEach(function (name) {
      if (blank) {
        fields[name] = Array.isArray(fields[name]) ? fields[name].map(function () { return NaN; }) : NaN;
      }
    });
    fields.state = state.outcome;
    return fields;
  }

  function main(n, state) {
    return {
      molality: Array.from(state.molality),
      log10_gamma: Array.from(state.molality, function (ignored, i) {
        return log10Gamma(n, i, state.ionic);
      }),
      amount: Array.from(state.s),
      ln_activity: Array.from(state.x),
      ionic_strength: state.ionic,
      ln_water: -MOLAR_MASS_WATER * state.solutes,
      residual: state.residual
    };
  }

  // The answer without sensitivities: what a slider or a curve needs.
  function answer(problem) {
    var n = evaluate(problem);
    var state = settle(n);
    return shown(n, state, main(n, state));
  }

  // The whole answer.
  function solve(problem) {
    var n = evaluate(problem);
    var state = settle(n);
    return shown(n, state, Object.assign(main(n, state), sensitivities(n, state)));
  }

  S.temperature = { log10K: log10K };
  S.engine = {
    COMPUTED: COMPUTED,
    BEYOND_LIMIT: BEYOND_LIMIT,
    NO_SOLUTION: NO_SOLUTION,
    answer: answer,
    solve: solve
  };
})(Sparingly);
