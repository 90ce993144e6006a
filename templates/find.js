/* Finds salts as one types: formula in any writing, name, mineral, CAS number, ion, temperature. */
(function (S) {
  'use strict';

  var MOST_SHOWN = 12;
  var SHORTEST_FORGIVEN = 5; // letters of a word in which one slip is forgiven

  // How well an entry answers; from COMPLETE on the salt is named completely.
  var EXACT = 9, COMPLETE = 8, START = 6, ION = 5, WORD = 4, FORMULA = 3, INSIDE = 2;

  var data = JSON.parse(document.getElementById('data').textContent);
  var field = document.getElementById('query');
  var said = document.getElementById('said');
  var list = document.getElementById('answers');

  // ---- writing

  // Lower case without accents; subscripts, superscripts and the minus sign as plain characters.
  function fold(text) {
    return text.normalize('NFKD').replace(/[\u0300-\u036f]/g, '').replace(/[\u2212\u2010-\u2015]/g, '-')
      .toLowerCase().replace(/\s+/g, ' ').trim();
  }

  function formulaKey(text) {
    return fold(text).replace(/[\s.*^\u00b7\u2022\u2219\u22c5\u30fb\u2027]/g, '');
  }

  function words(text) {
    return fold(text).split(/[^a-z0-9]+/).filter(Boolean);
  }

  // A formula as the page shows it: digits after a letter or bracket lowered, charges raised.
  function writeFormula(element, text) {
    text.split(/(\^[0-9]*[+-]|(?<=[A-Za-z)\]])[0-9]+)/).forEach(function (part, i) {
      var name = i % 2 === 0 ? null : part[0] === '^' ? 'sup' : 'sub';
      var shown = part.replace('^', '').replace('-', '−');
      if (name) {
        var piece = document.createElement(name);
        piece.textContent = shown;
        element.append(piece);
      } else {
        element.append(part);
      }
    });
  }

  var salts = data.salts.map(function (entry) {
    var names = [entry[2]].concat(entry[3], entry[4] || []);
    var ions = entry[6].split(' ');
    var ionNames = ions.reduce(function (all, ion) { return all.concat(data.ions[ion] || []); }, []);
    return {
      id: entry[0], formula: entry[1], name: entry[2], mineral: entry[4], cas: entry[5],
      log10K: entry[7], amount: entry[8],
      key: formulaKey(entry[1]),
      dry: formulaKey(entry[1].split('·')[0]),
      names: names.map(fold),
      words: words(names.concat(ionNames).join(' ')),
      ions: ions.reduce(function (all, ion) {
        return all.concat(formulaKey(ion), formulaKey(ion.split('^')[0]));
      }, [])
    };
  });

  var vocabulary = Array.from(new Set(salts.reduce(function (all, salt) {
    return all.concat(salt.words);
  }, []))).filter(function (word) { return word.length >= SHORTEST_FORGIVEN; }).sort();

  // ---- looking

  function rank(salt, query) {
    var text = fold(query), key = formulaKey(query), typed = words(query);
    if (!typed.length) {
      return 0;
    }
    if (key === salt.key || text === salt.cas || salt.names.indexOf(text) >= 0) {
      return EXACT;
    }
    if (key === salt.dry) {
      return COMPLETE;
    }
    if (salt.names.some(function (name) { return name.indexOf(text) === 0; })) {
      return START;
    }
    if (salt.ions.indexOf(key) >= 0) {
      return ION;
    }
    if (typed.every(function (word) {
      return salt.words.some(function (own) { return own.indexOf(word) === 0; });
    })) {
      return WORD;
    }
    if (salt.key.indexOf(key) === 0 || (salt.cas && salt.cas.indexOf(text) === 0)) {
      return FORMULA;
    }
    var inside = text.length > 2 && salt.names.some(function (name) { return name.indexOf(text) >= 0; });
    return inside ? INSIDE : 0;
  }

  function look(query) {
    return salts.map(function (salt, order) {
      return { salt: salt, rank: rank(salt, query), order: order };
    }).filter(function (hit) { return hit.rank > 0; }).sort(function (a, b) {
      return b.rank - a.rank || a.order - b.order;
    });
  }

  function complete(hits) {
    return hits.length > 0 && hits[0].rank >= COMPLETE;
  }

  // A number after a space and a complete name is a temperature: {query, t, error}.
  function split(query) {
    var match = /^(.*\S)\s+([+\-\u2212]?[0-9][0-9.,]*\s*(?:°\s*)?[a-z]?)\s*$/i.exec(query.normalize('NFKC'));
    if (!match || !complete(look(match[1]))) {
      return { query: query };
    }
    var read = S.words.readTemperature(match[2]);
    return { query: match[1], t: read.value, error: read.error };
  }

  // ---- one slip

  // True where one letter added, dropped, changed or two neighbours exchanged lead from a to b.
  function oneSlip(a, b) {
    var i = 0;
    while (i < a.length && a[i] === b[i]) {
      i += 1;
    }
    var rest = [a.slice(i), b.slice(i)];
    return rest[0].slice(1) === rest[1].slice(1) || rest[0].slice(1) === rest[1] ||
      rest[0] === rest[1].slice(1) ||
      (rest[0][0] === rest[1][1] && rest[0][1] === rest[1][0] && rest[0].slice(2) === rest[1].slice(2));
  }

  function looksLikeFormula(word) {
    return /[0-9^(]|[a-z][A-Z]|[A-Z]{2}/.test(word);
  }

  // The query with one word put right, or null. Formulae are never put right.
  function forgiven(query) {
    var typed = query.trim().split(/\s+/);
    for (var i = 0; i < typed.length; i += 1) {
      var word = fold(typed[i]);
      if (word.length < SHORTEST_FORGIVEN || !/^[a-z]+$/.test(word) || looksLikeFormula(typed[i])) {
        continue;
      }
      for (var j = 0; j < vocabulary.length; j += 1) {
        var tried = typed.slice();
        tried[i] = vocabulary[j];
        if (oneSlip(word, vocabulary[j]) && look(split(tried.join(' ')).query).length) {
          return tried.join(' ');
        }
      }
    }
    return null;
  }

  // ---- showing

  // {hits, t, text, opens}: what is listed and said, and what Enter opens (null: nothing).
  function answer(query) {
    if (!query.trim()) {
      return { hits: [], text: '', opens: null };
    }
    var asked = split(query);
    var hits = look(asked.query);
    if (!hits.length) {
      var better = forgiven(query);
      if (better === null) {
        return { hits: [], opens: null, text: 'Nothing found for “' + query.trim() +
          '”. Try the formula without charges (PbSO4), a shorter part of the name, the CAS number ' +
          'or one of the ions; a temperature comes last, as in “gypsum 60”.' };
      }
      asked = split(better);
      return { hits: look(asked.query), t: asked.t, opens: null, text: 'Did you mean “' + better + '”?' };
    }
    if (asked.error) {
      return { hits: hits, text: asked.error, opens: null };
    }
    var best = hits.filter(function (hit) { return hit.rank === hits[0].rank; });
    var sure = hits.length === 1 || (complete(hits) && best.length === 1);
    var named = asked.t === undefined ? hits[0].salt.name : hits[0].salt.name + ' at ' + asked.t + ' °C';
    var text = sure ? 'Enter opens ' + named + '.'
      : complete(hits) ? best.length + ' salts are called that: choose one.'
        : hits.length + ' salts found: choose one with the arrow keys.';
    return { hits: hits, t: asked.t, text: text, opens: sure ? address(hits[0].salt, asked.t) : null };
  }

  function address(salt, t) {
    return 'salts/' + encodeURIComponent(salt.id) + '.html' + (t === undefined ? '' : '#t=' + t);
  }

  function part(name, text) {
    var span = document.createElement('span');
    span.className = name;
    span.textContent = text;
    return span;
  }

  function item(salt, t) {
    var link = document.createElement('a');
    var formula = part('formula', '');
    var others = salt.mineral && salt.mineral !== salt.name ? salt.mineral : '';
    link.href = address(salt, t);
    writeFormula(formula, salt.formula);
    link.append(formula, part('name', salt.name + (t === undefined ? '' : ' at ' + t + ' °C')));
    if (others) {
      link.append(part('fine', others));
    }
    link.append(constants(salt));
    var line = document.createElement('li');
    line.append(link);
    return line;
  }

  // What the index keeps of a salt at 25 °C; empty where it keeps nothing.
  function constants(salt) {
    var kept = part('k', '');
    if (salt.log10K) {
      var ten = document.createElement('sub');
      ten.textContent = '10';
      kept.append('log', ten, ' K ' + salt.log10K + (salt.amount && ', '));
    }
    kept.append(salt.amount, salt.log10K || salt.amount ? ' at 25 °C' : '');
    return kept;
  }

  function show() {
    var found = answer(field.value);
    var shown = found.hits.slice(0, MOST_SHOWN);
    var rest = found.hits.length - shown.length;
    said.textContent = found.text + (rest > 0 ? ' The first ' + MOST_SHOWN + ' are shown.' : '');
    list.replaceChildren.apply(list, shown.map(function (hit) { return item(hit.salt, found.t); }));
    list.hidden = shown.length === 0;
    return found;
  }

  // ---- keys

  function step(by) {
    var stops = [field].concat(Array.from(list.querySelectorAll('a')));
    var at = stops.indexOf(document.activeElement) + by;
    stops[Math.max(0, Math.min(at, stops.length - 1))].focus();
  }

  document.querySelector('.find').addEventListener('keydown', function (event) {
    if (event.key === 'ArrowDown' || event.key === 'ArrowUp') {
      event.preventDefault();
      step(event.key === 'ArrowDown' ? 1 : -1);
    } else if (event.key === 'Escape' && document.activeElement !== field) {
      field.focus();
    } else if (event.key === 'Enter' && document.activeElement === field && !event.isComposing) {
      var opens = show().opens;
      if (opens !== null) {
        location.href = opens;
      }
    }
  });
  field.addEventListener('input', show);
  show(); // a browser may bring back what was typed before
})(Sparingly);
