// The sheet: reads temperature and added electrolytes, shows constant, amounts and working.
// The address keeps the state: #t=37&with=Na2SO4:0.05mol/kg;NaCl:1g/L
(function (S) {
  'use strict';

  var data = JSON.parse(document.getElementById('data').textContent);
  var UNITS = {
    'mol/kg': ['mol', 'kg', 1], 'mmol/kg': ['mol', 'kg', 1e-3],
    'mol/L': ['mol', 'L', 1], 'mmol/L': ['mol', 'L', 1e-3],
    'g/kg': ['g', 'kg', 1], 'mg/kg': ['g', 'kg', 1e-3], 'g/L': ['g', 'L', 1], 'mg/L': ['g', 'L', 1e-3]
  };
  var MADE_UP_AT_C = 20;
  var TERMS = ['c0', 'c1 (1/T - 1/T0)', 'c2 (T0/T - 1 + ln(T/T0))', 'c3 (T - T0)',
    'c4 (1/T² - 1/T0²)', 'c5 (T² - T0²)'];

  function el(id) { return document.getElementById(id); }
  function put(id, text) { if (el(id)) { el(id).textContent = text; } }

  // A formula as text nodes with real sub- and superscripts.
  function formula(text) {
    var span = document.createElement('span');
    var caret = text.indexOf('^');
    var body = caret < 0 ? text : text.slice(0, caret);
    body.split(/(\d+)/).forEach(function (part, i) {
      var after = i % 2 === 1;
      var node = after ? document.createElement('sub') : document.createTextNode(part);
      if (after) { node.textContent = part; }
      span.appendChild(node);
    });
    if (caret >= 0) {
      var sup = document.createElement('sup');
      sup.textContent = text.slice(caret + 1).replace('-', '\u2212');
      span.appendChild(sup);
    }
    return span;
  }

  function cells(row, texts) {
    texts.forEach(function (text) {
      var td = document.createElement('td');
      td.className = 'n';
      td.textContent = text;
      row.appendChild(td);
    });
  }

  // Hyphens that stand for a minus sign made one; those inside words stay.
  function minus(text) {
    return text.replace(/(^|[^A-Za-z0-9])-(?=[0-9(ΔA-Z])/g, '$1\u2212').replace(/([ )])-(?= )/g, '$1\u2212')
      .replace(/e-(?=[0-9])/g, 'e\u2212');
  }

  // One added electrolyte as mol per kg of water, or a sentence.
  function molality(electrolyte, amountText, unit) {
    var number = S.words.readNumber(amountText);
    if (number.error) { return number; }
    if (number.value < 0) { return { error: 'An amount is not negative.' }; }
    var kind = UNITS[unit];
    if (!kind) { return { error: '\u201c' + unit + '\u201d is not a unit of this page.' }; }
    var amount = number.value * kind[2] / (kind[0] === 'mol' ? 1 : electrolyte.molar_mass);
    if (amount > 20) { return { error: 'More than water can hold; the models end at 0.5 mol/kg.' }; }
    return { value: kind[1] === 'kg' ? amount : amount / (S.water.density(MADE_UP_AT_C) / 1000) };
  }

  var rows = Array.prototype.slice.call(document.querySelectorAll('.added'));
  function part(row, css) { return row.querySelector(css); }

  function electrolyte(name) {
    return data.electrolytes.filter(function (e) { return e.formula === name; })[0];
  }

  function fail(field, errorId, sentence) {
    field.setAttribute('aria-invalid', sentence ? 'true' : 'false');
    put(errorId, sentence || '');
  }

  // What stands in the fields: {t, additions, words} or null where a field is wrong.
  function read() {
    var t = S.words.readTemperature(el('t').value), sound = !t.error;
    fail(el('t'), 't-error', t.error);
    var additions = [], words = [], labels = [];
    rows.forEach(function (row, i) {
      var salt = electrolyte(part(row, '.electrolyte').value);
      var amount = part(row, '.amount');
      if (!salt) { fail(amount, 'amount-error-' + i, ''); return; }
      var unit = part(row, '.unit').value;
      if (amount.value.trim() === '') {
        fail(amount, 'amount-error-' + i, '');
        return;
      }
      var m = molality(salt, amount.value, unit);
      fail(amount, 'amount-error-' + i, m.error);
      if (m.error) { sound = false; return; }
      additions.push({ base: salt.base, mol_per_kg: m.value });
      labels.push(amount.value.trim() + ' ' + unit + ' ' + salt.formula);
      words.push(salt.formula + ':' + amount.value.trim().replace(/\u2212/g, '-') + unit);
    });
    return sound ? { t: t.value, additions: additions, words: words, labels: labels } : null;
  }

  function show(asked) {
    var answer = S.dissolve.answer(data, asked.t, asked.additions);
    var tWords = +asked.t.toFixed(6) + ' °C';
    var medium = asked.words.length
      ? 'with ' + asked.labels.join(' and ')
      : 'in water';
    put('t-words', tWords);
    showConstant(answer);
    showAmounts(answer, medium, tWords);
    showWorking(answer, asked.t, tWords);
  }

  function showConstant(answer) {
    var text = S.words.constantText(answer.constant, answer.reason);
    el('state').className = 'state ' + text.state;
    put('state', text.state_words);
    el('constant-numbers').hidden = !text.k;
    put('k', text.k);
    put('k-low', text.low);
    put('k-high', text.high);
    put('log10-k', text.log10_k);
    put('u', text.u);
  }

  function showAmounts(answer, medium, tWords) {
    var text = S.words.amountText(answer), computed = answer.state === 'computed';
    var state = el('amount-state').firstElementChild;
    state.className = 'state ' + answer.state;
    state.textContent = computed ? 'computed' : 'refused: ' + answer.reason;
    if (!el('amount-numbers')) { return; } // refused in water already: no numbers on the page
    el('amount-numbers').hidden = el('shares-box').hidden = !computed;
    put('mg', text.metal_mg_per_l);
    put('mg-low', text.low_mg_per_l);
    put('mg-high', text.high_mg_per_l);
    el('comes-out').hidden = !(answer.solubility_mol_per_kg < 0);
    put('mol', text.mol_per_kg);
    put('g', text.g_per_l);
    el('textbook').hidden = !text.factor;
    put('textbook-mol', computed ? S.words.shown(answer.textbook_mol_per_kg) : '');
    put('factor', text.factor);
    showAlso(answer);
    showShares(answer, medium, tWords);
    put('medium', computed
      ? 'Ionic strength ' + S.words.shown(answer.ionic_strength) + ' mol/kg; pH ' +
        S.rounding.display(S.rounding.fixed(answer.ph, 2)) +
        ', from charge balance, without carbon dioxide; activity model: ' + answer.activity_model +
        '. A litre is a litre at the bath temperature.'
      : '');
  }

  function showShares(answer, medium, tWords) {
    var caption = el('shares-caption');
    caption.textContent = 'Dissolved forms that hold ';
    caption.appendChild(formula(data.metal));
    caption.appendChild(document.createTextNode(', ' + medium + ' at ' + tWords));
    var body = el('shares');
    body.textContent = '';
    (answer.forms || []).filter(function (f) {
      return f.share !== null && f.share >= 0.0005;
    }).sort(function (a, b) { return b.share - a.share; }).forEach(function (f) {
      var row = body.insertRow(), head = document.createElement('th');
      head.scope = 'row';
      head.appendChild(formula(f.form));
      row.appendChild(head);
      cells(row, [S.rounding.fixed(100 * f.share, 1) + ' %', S.words.shown(f.mol_per_kg),
        S.words.shown(f.activity_coefficient)]);
    });
    body = el('budget');
    body.textContent = '';
    (answer.budget || []).forEach(function (line) {
      var row = body.insertRow(), head = document.createElement('th');
      head.scope = 'row';
      head.textContent = line.constant;
      row.appendChild(head);
      cells(row, [S.rounding.display(S.rounding.fixed(line.sensitivity, 2)),
        S.rounding.fixed(line.u, 3), S.rounding.fixed(100 * line.share, 1) + ' %']);
    });
  }

  // Another solid that would form from this solution.
  function showAlso(answer) {
    var box = el('also');
    box.textContent = '';
    (answer.other_solids || []).forEach(function (o) {
      var p = document.createElement('p'), link = document.createElement('a');
      link.href = o.salt + '.html';
      link.textContent = o.name;
      p.className = 'caution';
      p.appendChild(document.createTextNode('This solution is supersaturated with '));
      p.appendChild(link);
      p.appendChild(document.createTextNode(' (saturation index ' +
        S.rounding.display(S.rounding.fixed(o.saturation_index, 2)) +
        '): where that solid forms, the answer above does not hold.'));
      box.appendChild(p);
    });
  }

  // The lines of the working that depend on the temperature are the last ones of the table.
  function showWorking(answer, t, tWords) {
    var body = el('working');
    if (!body || answer.constant.log10_k === null) { return; }
    put('working-t', tWords);
    var law = data.curve.law, T = t + 273.15, T0 = law[0], lines = [];
    var b = [1, 1 / T - 1 / T0, T0 / T - 1 + Math.log(T / T0), T - T0,
      1 / (T * T) - 1 / (T0 * T0), T * T - T0 * T0];
    b.forEach(function (value, i) {
      if (law[i + 1] !== 0) {
        lines.push(['term ' + TERMS[i], law[i + 1] + ' × ' + S.rounding.significant(value, 6),
          S.rounding.fixed(law[i + 1] * value, 5)]);
      }
    });
    var text = S.words.constantText(answer.constant, '');
    lines.push(['sum of the terms, log10 K', 'T = ' + S.rounding.fixed(T, 2) + ' K, T0 = ' +
      S.rounding.fixed(T0, 2) + ' K', S.rounding.fixed(answer.constant.log10_k, 5)]);
    lines.push(['rounded to match its uncertainty', 'u = ' + text.u, text.log10_k]);
    lines.push(['K = 10^(log10 K)', text.log10_k, text.k]);
    var first = body.rows.length - lines.length;
    lines.forEach(function (line, i) {
      var row = body.rows[first + i];
      line.forEach(function (cell, j) { row.cells[j].textContent = minus(cell); });
    });
  }

  function update(keepAddress) {
    var asked = read();
    revealRows();
    if (!asked) { return; }
    show(asked);
    if (!keepAddress) {
      var state = '#t=' + asked.t + (asked.words.length ? '&with=' + asked.words.join(';') : '');
      history.replaceState(null, '', state);
    }
    put('address-error', '');
  }

  // A further row appears when the one before is in use.
  function revealRows() {
    rows.forEach(function (row, i) {
      var before = i === 0 || part(rows[i - 1], '.electrolyte').value !== '';
      row.hidden = !before && part(row, '.electrolyte').value === '';
    });
  }

  // The address: what is not understood is said, and nothing of it is used.
  function readAddress() {
    var text = location.hash.slice(1), wrong = [], t = null, added = [];
    try {
      text = decodeURIComponent(text);
    } catch (e) {
      put('address-error', 'The part of the address after # can not be read.');
      return;
    }
    text.split('&').filter(Boolean).forEach(function (piece) {
      var cut = piece.indexOf('='), key = piece.slice(0, cut), value = piece.slice(cut + 1);
      if (key === 't') {
        t = S.words.readTemperature(value);
        if (t.error) { wrong.push(piece); t = null; }
      } else if (key === 'with') {
        value.split(';').forEach(function (one) {
          var match = /^([^:]+):([^a-z]*(?:e[+-]?\d+)?)\s*([a-z]+\/[a-zA-Z]+)$/i.exec(one);
          if (match && electrolyte(match[1]) && UNITS[match[3]] && added.length < rows.length &&
              !S.words.readNumber(match[2]).error) {
            added.push(match);
          } else {
            wrong.push(one);
          }
        });
      } else if (!/^(value|source)-/.test(piece) && cut >= 0) {
        wrong.push(piece);
      }
    });
    if (t) { el('t').value = String(t.value); }
    rows.forEach(function (row, i) {
      part(row, '.electrolyte').value = added[i] ? added[i][1] : '';
      part(row, '.amount').value = added[i] ? added[i][2].trim() : '';
      part(row, '.unit').value = added[i] ? added[i][3] : 'mol/kg';
    });
    update(true);
    put('address-error', wrong.length
      ? 'Not understood in the address, and left out: ' + wrong.join(', ') + '.' : '');
  }

  if (data.refused) { return; }
  rows.forEach(function (row) {
    var select = part(row, '.electrolyte');
    data.electrolytes.forEach(function (e) {
      var option = document.createElement('option');
      option.value = e.formula;
      option.textContent = e.formula + ', ' + e.name;
      select.appendChild(option);
    });
    Array.prototype.forEach.call(row.querySelectorAll('input, select'), function (field) {
      field.addEventListener('input', function () { update(false); });
    });
  });
  el('t').addEventListener('input', function () { update(false); });
  window.addEventListener('hashchange', readAddress);
  readAddress();
})(Sparingly);
