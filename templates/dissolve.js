// Twin of builder/collection/{mixture,dissolve}.py: how much of the sheet's salt dissolves.
// `data` is the payload of the sheet (builder/site/payload.py).
var Sparingly = Sparingly || {};
(function (S) {
  'use strict';

  var IDEAL = 0, EXTENDED = 1, DAVIES = 2;
  var LN10 = Math.LN10;
  var HYDROGEN = 'H^+', HYDROXIDE = 'OH^-';

  // Laws and variances travel without the zeros at their end.
  function filled(numbers, length) {
    var out = numbers.slice();
    while (out.length < length) { out.push(0); }
    return out;
  }

  // A side reaction's constant in the form of curve.js.
  function sideCurve(side) {
    var v = filled(side.variance, 3);
    return {
      law: filled(side.law, 7), covariance: [[v[0], 0, 0], [0, v[1], 0], [0, 0, v[2]]],
      range_c: [0, 100], carries_k: 0, thermodynamic: false, flat: side.flat, coverage_factor: 1.96
    };
  }

  // additions: [{base: {ion: n}, mol_per_kg}]. Returns {bases, forms, model, limit} or
  // {refused: 'sentence'}.
  function mixture(data, additions) {
    if (data.missing.length) {
      return { refused: 'it needs ' + data.missing.join(', ') + ', not in the collection yet' };
    }
    var present = {};
    present[HYDROGEN] = true;
    Object.keys(data.solid.base).forEach(function (ion) { present[ion] = true; });
    additions.forEach(function (a) {
      Object.keys(a.base).forEach(function (ion) { present[ion] = true; });
    });
    var bases = data.forms.filter(function (f) { return f.form !== HYDROGEN && present[f.form]; });
    bases.unshift(data.forms.filter(function (f) { return f.form === HYDROGEN; })[0]);
    var isBase = {};
    bases.forEach(function (f) { isBase[f.form] = true; });
    var made = data.forms.filter(function (f) {
      return !isBase[f.form] && Object.keys(f.base).every(function (b) { return present[b]; });
    });
    var ions = {};
    bases.forEach(function (f) { ions[f.form] = true; });
    ions[HYDROXIDE] = true;
    var unknown = data.unknown.filter(function (pair) { return ions[pair[0]] && ions[pair[1]]; });
    if (unknown.length) {
      return {
        refused: 'the collection holds nothing on how ' + unknown[0][2] + ' combine in solution'
      };
    }
    var forms = bases.concat(made);
    var sized = forms.every(function (f) { return f.size !== null; });
    return {
      bases: bases.map(function (f) { return f.form; }),
      forms: forms,
      model: sized ? EXTENDED : DAVIES,
      limit: limit(data, bases)
    };
  }

  function limit(data, bases) {
    var charge = {}, own = [];
    data.forms.forEach(function (f) { charge[f.form] = Math.abs(f.charge); });
    Object.keys(data.solid.base).forEach(function (ion) {
      if (ion !== HYDROGEN) { own.push(charge[ion]); }
    });
    if (data.solid.base[HYDROGEN] < 0) { own.push(1); } // a hydroxide: OH^- is its anion
    if (own.length && Math.min.apply(null, own) >= 2) {
      return data.limits.two_two;
    }
    var highest = Math.max.apply(null, bases.map(function (f) { return Math.abs(f.charge); }));
    return highest >= 3 ? data.limits.high_charge : data.limits.usual;
  }

  function textbook(mix) {
    return {
      bases: mix.bases,
      forms: mix.forms.filter(function (f) {
        return mix.bases.indexOf(f.form) >= 0 || f.form === HYDROXIDE;
      }),
      model: IDEAL,
      limit: 1e9
    };
  }

  function problem(data, mix, tCelsius, additions) {
    function row(base) {
      return mix.bases.map(function (b) { return base[b] || 0; });
    }
    var total = mix.bases.map(function (b) {
      return additions.reduce(function (sum, a) {
        return sum + (a.base[b] || 0) * a.mol_per_kg;
      }, 0);
    });
    return {
      t_celsius: tCelsius,
      model: mix.model,
      limit: mix.limit,
      stoichiometry: mix.forms.map(function (f) { return row(f.base); }),
      water: mix.forms.map(function (f) { return f.water; }),
      charge: mix.forms.map(function (f) { return f.charge; }),
      law: mix.forms.map(function (f) { return filled(f.law, 7); }),
      size: mix.forms.map(function (f) { return f.size || 0; }),
      linear: mix.forms.map(function (f) { return f.linear; }),
      total: total,
      hold: [row(data.solid.base)],
      hold_water: [data.solid.water],
      hold_law: [filled(data.solid.law, 7)],
      exchange: [row(data.solid.base)]
    };
  }

  // The answer at tCelsius: {state: 'computed' | 'refused', reason, constant, ...} with the field
  // names of Dissolved in Python.
  function answer(data, tCelsius, additions) {
    var constant = S.curve.at(data.curve, tCelsius);
    if (constant.log10_k === null) {
      return { state: 'refused', reason: beyondWords(data.curve, tCelsius), constant: constant };
    }
    var given = additions.filter(function (a) { return a.mol_per_kg > 0; });
    var mix = mixture(data, given);
    if (mix.refused) {
      return { state: 'refused', reason: mix.refused, constant: constant };
    }
    var asked = problem(data, mix, tCelsius, given);
    var solved = S.engine.solve(asked);
    var simple = S.engine.answer(problem(data, textbook(mix), tCelsius, given));
    var simpleAmount = simple.state === 0 ? simple.amount[0] : null;
    if (solved.state !== 0) {
      return {
        state: 'refused',
        reason: solved.state === 1
          ? 'the ionic strength would pass ' + mix.limit + ' mol/kg, where the activity model ends'
          : 'there is no solution within the range of the activity model',
        constant: constant,
        textbook_mol_per_kg: simpleAmount
      };
    }
    return computed(data, tCelsius, mix, asked, solved, constant, simpleAmount);
  }

  function beyondWords(curve, tCelsius) {
    var low = curve.range_c[0], high = curve.range_c[1];
    if (!(tCelsius >= 0 && tCelsius <= 100)) {
      return tCelsius + ' °C is outside 0 to 100 °C, where water is liquid at 1 bar';
    }
    var beyond = Math.max(low - tCelsius, tCelsius - high);
    return tCelsius + ' °C is ' + (+beyond.toPrecision(6)) + ' K beyond the range ' + low +
      ' to ' + high + ' °C of the law, which can be carried ' + curve.carries_k + ' K at most';
  }

  function computed(data, t, mix, asked, solved, constant, simple) {
    var s = solved.amount[0];
    var litre = S.water.density(t) / 1000;
    var metalTotal = 0;
    mix.forms.forEach(function (f, i) {
      metalTotal += (f.base[data.metal] || 0) * solved.molality[i];
    });
    var forms = mix.forms.map(function (f, i) {
      var n = f.base[data.metal] || 0;
      return {
        form: f.form,
        share: n ? n * solved.molality[i] / metalTotal : null,
        mol_per_kg: solved.molality[i],
        activity_coefficient: Math.pow(10, solved.log10_gamma[i])
      };
    });
    var spread = budget(data, t, mix, asked, solved, constant);
    var metalMg = metalTotal * data.metal_molar_mass * 1000;
    return {
      state: 'computed',
      reason: '',
      constant: constant,
      solubility_mol_per_kg: s,
      solubility_mol_per_l: s * litre,
      solubility_g_per_l: s * litre * data.molar_mass,
      solubility_g_per_l_anhydrous: s * litre * data.molar_mass_anhydrous,
      metal_mg_per_mol: data.solid.base[data.metal] * data.metal_molar_mass * 1000,
      metal_mg_per_kg: metalMg,
      metal_mg_per_l: metalMg * litre,
      forms: forms,
      ionic_strength: solved.ionic_strength,
      activity_model: ['ideal', 'extended Debye-Hückel', 'Davies'][mix.model],
      ph: -solved.ln_activity[0] / LN10,
      standard_uncertainty_log10: spread.u,
      budget: spread.lines,
      textbook_mol_per_kg: simple,
      other_solids: otherSolids(data, t, mix, solved)
    };
  }

  function budget(data, t, mix, asked, solved, constant) {
    if (constant.u === null) {
      return { u: null, lines: [] };
    }
    var byHold = solved.by_hold[0], powers = {};
    Object.keys(data.solid.constants).forEach(function (name) {
      powers[name] = (powers[name] || 0) - data.solid.constants[name] * byHold;
    });
    mix.forms.forEach(function (f, i) {
      Object.keys(f.constants).forEach(function (name) {
        powers[name] = (powers[name] || 0) + f.constants[name] * solved.by_form[i];
      });
    });
    var lines = [{ constant: 'solubility product', sensitivity: byHold, u: constant.u }];
    Object.keys(powers).forEach(function (name) {
      var side = S.curve.at(sideCurve(data.side[name]), t);
      lines.push({ constant: name, sensitivity: powers[name], u: side.u || 0 });
    });
    lines.push({
      constant: 'activity model', sensitivity: 1, u: Math.abs(modelChange(asked, solved))
    });
    var variance = lines.reduce(function (sum, line) {
      return sum + Math.pow(line.sensitivity * line.u, 2);
    }, 0);
    lines.forEach(function (line) {
      line.share = variance ? Math.pow(line.sensitivity * line.u, 2) / variance : 0;
    });
    lines.sort(function (a, b) {
      return b.share - a.share || (a.constant < b.constant ? -1 : 1);
    });
    return {
      u: Math.sqrt(variance),
      lines: lines.filter(function (line) { return line.share > 1e-4; })
    };
  }

  // First-order change of log10 s when the γ of Davies are put in.
  function modelChange(asked, solved) {
    if (asked.model !== EXTENDED) {
      return 0;
    }
    var a = S.water.debyeHuckel(asked.t_celsius).A, ionic = solved.ionic_strength;
    var root = Math.sqrt(ionic), sum = 0;
    asked.charge.forEach(function (z, i) {
      var strength = a * z * z;
      var q = z ? 0.3 * strength : asked.linear[i];
      var davies = -strength * root / (1 + root) + q * ionic;
      sum += solved.by_form[i] * (davies - solved.log10_gamma[i]);
    });
    return -sum;
  }

  function otherSolids(data, t, mix, solved) {
    var logA = {};
    mix.bases.forEach(function (b, i) { logA[b] = solved.ln_activity[i] / LN10; });
    return data.others.filter(function (o) {
      return t >= o.range_c[0] && t <= o.range_c[1] &&
        Object.keys(o.base).every(function (ion) { return ion in logA; });
    }).map(function (o) {
      var product = Object.keys(o.base).reduce(function (sum, ion) {
        return sum + o.base[ion] * logA[ion];
      }, o.water * solved.ln_water / LN10);
      return {
        salt: o.salt,
        name: o.name,
        saturation_index: product - S.temperature.log10K(filled(o.law, 7), S.water.kelvin(t))
      };
    }).filter(function (o) { return o.saturation_index > 0; })
      .sort(function (a, b) { return b.saturation_index - a.saturation_index; });
  }

  S.dissolve = { answer: answer, mixture: mixture };
})(Sparingly);
