/* The bath table: recompute every row for a typed temperature, sort by a column, keep the address. */
(function (S) {
  'use strict';

  var REFERENCE_C = 25;
  var data = JSON.parse(document.getElementById('data').textContent);
  var table = document.getElementById('bath');
  var body = table.tBodies[0];
  var input = document.getElementById('temperature');
  var temperatureError = document.getElementById('temperature-error');
  var addressError = document.getElementById('address-error');

  var rows = Array.from(body.rows, function (row, i) {
    var link = row.querySelector('a');
    return {
      row: row, salt: data.salts[i], link: link, sheet: link.getAttribute('href'),
      // what the columns are sorted by, text or number; null goes last
      keys: [row.cells[0].textContent, row.cells[1].textContent]
    };
  });
  var sorted = { column: 0, falling: false };

  function put(cell, text) {
    cell.textContent = text;
  }

  // Two spans, so that a column of numbers stands on the decimal point.
  function putAligned(cell, text) {
    var at = text.indexOf('.');
    var parts = at < 0 ? [text, ''] : [text.slice(0, at), text.slice(at)];
    cell.textContent = '';
    ['whole', 'part'].forEach(function (name, i) {
      var span = document.createElement('span');
      span.className = name;
      span.textContent = parts[i];
      cell.append(span);
    });
  }

  function refusal(curve, t, value) {
    return Number(t.toPrecision(6)) + ' °C is ' + Number(value.beyond_by_k.toPrecision(6)) + ' K beyond the range ' +
      curve.range_c[0] + ' to ' + curve.range_c[1] + ' °C of the law, which can be carried ' +
      curve.carries_k + ' K at most';
  }

  function fill(entry, t) {
    var curve = entry.salt.curve;
    var cells = entry.row.cells;
    entry.link.setAttribute('href', entry.sheet + (t === REFERENCE_C ? '' : '#t=' + t));
    if (curve === null) {
      entry.keys = entry.keys.slice(0, 2).concat([null, null, null, null, null, null, 'refused']);
      return;
    }
    var value = S.curve.at(curve, t);
    var at25 = S.curve.at(curve, REFERENCE_C).log10_k;
    var text = S.words.constantText(value, refusal(curve, t, value));
    var change = value.log10_k === null || at25 === null ? null : value.log10_k - at25;
    putAligned(cells[2], text.log10_k);
    if (value.u === null) {
      put(cells[3], text.u || '');
    } else {
      putAligned(cells[3], text.u);
    }
    put(cells[4], text.k || '');
    put(cells[5], text.low);
    put(cells[6], text.high);
    putAligned(cells[7], change === null ? '' : S.words.shown(Math.pow(10, change), 2));
    var state = document.createElement('span');
    state.className = 'state ' + text.state;
    state.textContent = text.state_words.replace(' the range of the law', ' range');
    cells[8].replaceChildren(state);
    var interval = value.interval || [null, null];
    entry.keys = entry.keys.slice(0, 2).concat([
      value.log10_k, value.u, value.log10_k, interval[0], interval[1], change, text.state_words
    ]);
  }

  function compare(a, b) {
    var x = a.keys[sorted.column], y = b.keys[sorted.column];
    if (x === null || y === null) {
      return (x === null) - (y === null);
    }
    var order = typeof x === 'string' ? x.localeCompare(y, 'en', { numeric: true }) : x - y;
    return sorted.falling ? -order : order;
  }

  function sort() {
    rows.sort(compare).forEach(function (entry) { body.append(entry.row); });
    Array.from(table.tHead.rows[0].cells, function (cell, i) {
      if (i === sorted.column) {
        cell.setAttribute('aria-sort', sorted.falling ? 'descending' : 'ascending');
      } else {
        cell.removeAttribute('aria-sort');
      }
    });
  }

  function show(t) {
    rows.forEach(function (entry) { fill(entry, t); });
    sort();
    put(document.getElementById('at'), String(t));
    put(document.getElementById('announce'), 'Table at ' + t + ' °C');
  }

  // Shows what was typed, or says why not and leaves the table as it is.
  function read(text) {
    var found = S.words.readTemperature(text);
    put(temperatureError, found.error || '');
    if (found.error) {
      input.setAttribute('aria-invalid', 'true');
      return false;
    }
    input.removeAttribute('aria-invalid');
    show(found.value);
    return found;
  }

  function decoded(text) {
    try {
      return decodeURIComponent(text);
    } catch (malformed) {
      return text;
    }
  }

  function fromAddress() {
    var unknown = [];
    var t = String(REFERENCE_C);
    location.hash.slice(1).split('&').filter(Boolean).forEach(function (part) {
      if (part.slice(0, 2) === 't=') {
        t = decoded(part.slice(2));
      } else {
        unknown.push('“' + decoded(part) + '”');
      }
    });
    put(addressError, unknown.length === 0 ? ''
      : 'The address holds ' + unknown.join(', ') + ', which this page does not know; it is left out.');
    input.value = t;
    read(t);
  }

  // Headers become buttons only here: without the script they would do nothing.
  table.tHead.querySelectorAll('.sort').forEach(function (label, i) {
    var button = document.createElement('button');
    button.type = 'button';
    button.append.apply(button, Array.from(label.childNodes));
    label.replaceWith(button);
    button.addEventListener('click', function () {
      sorted = { column: i, falling: sorted.column === i && !sorted.falling };
      sort();
    });
  });
  input.addEventListener('input', function () {
    var found = read(input.value);
    if (found) {
      put(addressError, '');
      history.replaceState(null, '', '#t=' + found.value);
    }
  });
  window.addEventListener('hashchange', fromAddress);
  fromAddress();
})(Sparingly);
