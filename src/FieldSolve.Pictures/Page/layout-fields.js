// A field for every value of the device file, beside the message that the command line would give for it.

const TABLE_NAMES = { sheet: 'Sheet', law: 'Law', drive: 'Drive', mesh: 'Accuracy', caution: 'Limits of the cautions', turn: 'Turn', tolerance: 'Tolerance', fit: 'Fit', '': 'File' };
const KEY_NAMES = { at: 'at', both_signs: 'both signs', field_limit: 'field limit', even_error: 'even error', max_unknowns: 'most unknowns', dead_edge: 'dead edge', mean_free_path: 'mean free path', gate_capacitance: 'gate capacitance' };

/** What a field is called, from the rest of its path. */
function fieldLabel(rest) {
  const corner = /^pad\[(\d+)\]\[(\d)\]$/.exec(rest), pair = /^(along|across)\[(\d)\]$/.exec(rest), point = /^(?:edge\.)?(at|from|to)\[(\d)\]$/.exec(rest), extra = /^pairs\.(.+)\[(\d)\]$/.exec(rest);
  if (corner) {
    return `corner ${Number(corner[1]) + 1}, ${'xy'[corner[2]]}`;
  }
  if (pair) {
    return `${pair[1]} ${pair[2] === '0' ? '+' : '−'}`;
  }
  if (extra) {
    return `${extra[1]} ${extra[2] === '0' ? '+' : '−'}`;
  }
  if (point) {
    return `${point[1]}, ${'xy'[point[2]]}`;
  }
  const last = rest.replace(/^(edge|current|disc|bar|hall_bar|ring|outline|pad)\./, '');
  return KEY_NAMES[last] ?? last.replaceAll('_', ' ');
}

class LayoutFields {
  /** @param act { set(path, value, gesture), ops(list) }. */
  constructor(host, act) {
    Object.assign(this, { host, act, rows: new Map(), shape: '' });
  }

  /** The table of the contact or tip of a name: [path, ring]. */
  static tableOf(state, name) {
    const value = path => state.byPath.get(path)?.value;
    for (const table of state.tables) {
      if (/^(contact|point)\[/.test(table) && value(`${table}.name`) === name) {
        return [table, false];
      }
      const prefix = value(`${table}.prefix`), count = Number(value(`${table}.ring`));
      if (/^contacts\[/.test(table) && name?.startsWith(prefix) && /^\d+$/.test(name.slice(prefix.length)) && Number(name.slice(prefix.length)) <= count) {
        return [table, true];
      }
    }
    return [null, false];
  }

  /** @param corner { loop, k } of the outline, or null. */
  show(state, selected, wiring, corner = null) {
    const [table, ring] = LayoutFields.tableOf(state, selected), wanted = [], loop = corner && state.outline?.loops[corner.loop];
    if (loop) {
      const count = loop.points.length / 2;
      wanted.push([`corner ${loop.paths[corner.k] ?? ''}`, `Corner ${corner.k + 1} of ${count}${corner.loop ? `, hole ${corner.loop}` : ''}`, false, corner]);
    }
    if (table) {
      wanted.push([table, ring ? `Ring of contacts with ${selected}` : selected, ring]);
    }
    const wiringTable = state.tables.find(t => t.startsWith('wiring[') && state.byPath.get(`${t}.name`)?.value === wiring);
    if (wiringTable) {
      wanted.push([wiringTable, `Wiring ${wiring}`, false]);
    }
    for (const t of ['drive', 'law', 'sheet', 'mesh']) {
      wanted.push([t, TABLE_NAMES[t], false]);
    }
    const lists = wanted.map(([t, title, isRing, at]) => {
      // The corners of an outline have fields of their own, one corner at a time.
      const own = at ? loop.paths[at.k] : null, inside = at ? v => own !== null && v.path.startsWith(own + '[') : v => v.path.startsWith(t + '.') && !/^sheet\.outline\.(corners|holes)/.test(v.path);
      return { table: t, title, isRing, corner: at, values: state.values.filter(v => ['text', 'number', 'flag'].includes(v.kind) && inside(v)) };
    });
    const shape = JSON.stringify([lists.map(l => [l.table, l.title, l.values.map(v => v.path), state.outline?.file]), state.contacts.map(c => c.name), state.values.find(v => v.path === 'law.kind')?.value]);
    this.state = state;
    if (shape !== this.shape) {
      this.shape = shape;
      const open = new Map([...this.host.querySelectorAll('details')].map(d => [d.dataset.table.replace(/\[\d+\]$/, ''), d.open])), focus = document.activeElement?.dataset?.path;
      this.rows.clear();
      this.host.replaceChildren(...lists.map(l => this.#section(l, open.get(l.corner ? 'corner' : l.table.replace(/\[\d+\]$/, '')))));
      if (focus) {
        this.rows.get(focus)?.input.focus();
      }
    }
    for (const l of lists) {
      for (const v of l.values) {
        const row = this.rows.get(v.path);
        if (row && row.input !== document.activeElement) {
          row.set(v.value);
          if (row.shown !== v.value) {
            this.#clear(row);
          }
        }
        if (row) {
          row.shown = v.value;
        }
      }
    }
  }

  /** Messages of a refused change; those without a field of their own are returned. */
  refuse(faults) {
    const rest = [];
    for (const f of faults) {
      const row = this.rows.get(f.path) ?? [...this.rows.values()].find(r => f.path && (r.path.startsWith(f.path) || f.path.startsWith(r.path)));
      if (row) {
        row.message.textContent = f.message;
        row.message.title = f.text;
        row.message.hidden = false;
        row.input.setAttribute('aria-invalid', 'true');
      } else {
        rest.push(f);
      }
    }
    return rest;
  }

  #clear(row) {
    row.message.hidden = true;
    row.input.removeAttribute('aria-invalid');
  }

  #section({ table, title, isRing, values, corner }, open) {
    const body = html('div', { class: 'fields' }), box = html('details', { 'data-table': corner ? 'corner' : table, open: open ?? /^(corner|contact|point|drive|law|wiring)/.test(table) }, html('summary', null, title), body);
    if (corner) {
      for (const v of values) {
        body.append(this.#row(v, /\[0\]$/.test(v.path) ? 'x' : 'y'));
      }
      if (!values.length) {
        body.append(html('p', { class: 'note-line' }, `The corners stand in ${this.state.outline.file}. When one is changed they are written into the device file, and that file stays as it is.`), html('button', { type: 'button', class: 'small', 'data-do': 'outline-own', onclick: () => this.act.ops([{ op: 'outline-own' }]) }, 'Write them into the device file'));
      }
      return box;
    }
    for (const v of values) {
      if (!(isRing && v.path.endsWith('.prefix')) && !v.path.endsWith('.file')) {
        body.append(this.#row(v, v.path.slice(table.length + 1)));
      }
    }
    if (isRing) {
      body.append(html('button', { type: 'button', class: 'small wide-button', onclick: () => this.act.own() }, 'Write as single contacts'));
    }
    const add = this.#adder(table, values.map(v => v.path.slice(table.length + 1)));
    if (add) {
      body.append(add);
    }
    return box;
  }

  #options(table, key) {
    const { state } = this, metal = state.contacts.filter(c => c.kind !== 'tip').map(c => c.name), all = state.contacts.map(c => c.name);
    if (table.startsWith('wiring[')) {
      return key === 'source' || key === 'drain' ? metal : /\[\d\]$/.test(key) ? all : null;
    }
    return table === 'law' && key === 'kind' ? state.laws.map(l => l.name) : null;
  }

  #row(v, rest) {
    const table = v.path.slice(0, Math.max(0, v.path.length - rest.length - 1)), options = this.#options(table, rest), label = html('span', { class: 'field-label' }, fieldLabel(rest)), message = html('span', { class: 'field-message', role: 'alert', hidden: true });
    const row = { path: v.path, message, shown: v.value };
    const send = (value, gesture) => {
      this.#clear(row);
      if (value !== row.shown) {
        v.path === 'law.kind' ? this.#changeLaw(value) : this.act.set(v.path, value, gesture);
      }
    };
    if (v.kind === 'flag') {
      row.input = html('input', { type: 'checkbox', 'data-path': v.path, onchange: () => send(String(row.input.checked)) });
      row.set = value => { row.input.checked = value === 'true'; };
    } else if (options) {
      row.input = html('select', { 'data-path': v.path, onchange: () => send(row.input.value) }, ...options.map(o => html('option', { value: o }, o)));
      row.set = value => { row.input.value = value; };
    } else {
      row.input = html('input', { type: 'text', 'data-path': v.path, spellcheck: 'false', autocomplete: 'off', onchange: () => send(row.input.value), onkeydown: e => this.#step(e, row, send) });
      row.set = value => { row.input.value = value; };
    }
    row.set(v.value);
    this.rows.set(v.path, row);
    return html('label', { class: 'field' }, label, row.input, message);
  }

  // Arrow up and down change a number in its second digit, with Shift in its third.
  #step(e, row, send) {
    if (e.key === 'Enter') {
      send(row.input.value);
      return;
    }
    const m = /^\s*([-+−]?\d*\.?\d+(?:e[-+]?\d+)?)(.*)$/i.exec(row.input.value);
    if ((e.key !== 'ArrowUp' && e.key !== 'ArrowDown') || !m) {
      return;
    }
    e.preventDefault();
    const value = Number(m[1].replace('−', '-')), whole = row.path.endsWith('.steps') || row.path.endsWith('.ring');
    const size = whole ? 1 : Math.pow(10, Math.floor(Math.log10(Math.abs(value) || 10)) - (e.shiftKey ? 2 : 1));
    const next = value + (e.key === 'ArrowUp' ? size : -size), text = Math.abs(next) >= 1e6 || (next !== 0 && Math.abs(next) < 1e-4) ? next.toExponential(4).replace(/\.?0+e/, 'e') : String(Number(next.toPrecision(8)));
    row.input.value = text + m[2];
    send(row.input.value, `step-${row.path}`);
    row.shown = row.input.value;
  }

  // Keys that the new law lacks go, those it needs come with an example.
  #changeLaw(kind) {
    const { state } = this, law = state.laws.find(l => l.name === kind), ops = [{ op: 'set', path: 'law.kind', value: kind }], known = new Set(['kind', 'axis', ...law.keys.map(k => k.key)]);
    for (const v of state.values.filter(x => x.path.startsWith('law.'))) {
      if (!known.has(v.path.slice(4))) {
        ops.push({ op: 'remove', path: v.path });
      }
    }
    for (const k of law.keys) {
      if (k.required && !state.byPath.has(`law.${k.key}`)) {
        ops.push({ op: 'set', path: `law.${k.key}`, value: k.example, plain: k.plain });
      }
    }
    this.act.ops(ops);
  }

  // Keys that may come in addition, and those that may go.
  #adder(table, present) {
    const { state } = this, law = state.laws.find(l => l.name === state.byPath.get('law.kind')?.value), isEdge = present.some(k => k.startsWith('edge'));
    const keys = table === 'law' ? [{ key: 'axis', example: '0 deg' }, ...(law?.keys ?? [])]
      : table.startsWith('contacts[') ? [{ key: 'first', example: '0 deg' }, { key: 'resistance', example: '100 ohm um' }, { key: 'shift', example: '0 nm' }]
      : table.startsWith('contact[') ? isEdge ? [{ key: 'resistance', example: '100 ohm um' }, { key: 'shift', example: '0 nm' }] : [{ key: 'resistivity', example: '1e-7 ohm cm^2' }]
      : table.startsWith('wiring[') ? [{ key: 'along', pair: true, meaning: 'the pair along the current' }, { key: 'across', pair: true, meaning: 'the pair across the current' }, { key: 'pairs', pair: true, meaning: 'one more pair' }]
      : table === 'drive' ? [{ key: 'both_signs', example: 'true', plain: true }]
      : table === 'mesh' ? [{ key: 'error', example: '1e-4', plain: true }, { key: 'even_error', example: '1e-3', plain: true }, { key: 'max_unknowns', example: '400000', plain: true }]
      : table === 'sheet' ? [{ key: 'dead_edge', example: '0 nm' }, { key: 'thickness', example: '10 nm' }, { key: 'mean_free_path', example: '100 nm' }] : [];
    const has = key => present.some(k => k === key || k.startsWith(`${key}[`)), extra = [...new Set(present.map(k => /^(pairs\..+)\[\d\]$/.exec(k)?.[1]).filter(k => k))];
    const open = keys.filter(k => !has(k.key)), gone = [...keys.filter(k => has(k.key) && !k.required).map(k => k.key), ...extra];
    if (!open.length && !gone.length) {
      return null;
    }
    const select = html('select', {
      'aria-label': `Add or remove values of ${table}`, onchange: () => {
        const [what, name] = [select.value.slice(0, 1), select.value.slice(1)], key = open.find(k => k.key === name);
        select.value = '';
        if (what === '-') {
          this.act.ops([{ op: 'remove', path: `${table}.${name}` }]);
        } else if (key) {
          this.act.ops([key.pair ? { op: 'pair', path: table, kind: key.key } : { op: 'set', path: `${table}.${key.key}`, value: key.example, plain: key.plain ?? false }]);
        }
      },
    }, html('option', { value: '' }, open.length ? gone.length ? 'Add or remove …' : 'Add …' : 'Remove …'));
    const group = (label, options) => options.length && select.append(html('optgroup', { label }, ...options));
    group('Add', open.map(k => html('option', { value: `+${k.key}` }, k.meaning ? `${k.key}: ${k.meaning}` : k.key)));
    group('Remove', gone.map(k => html('option', { value: `-${k}` }, k.replace(/^pairs\./, 'pair '))));
    return html('div', { class: 'adder' }, select);
  }
}
