// The page on which a layout is tried: what comes from the server, what goes to it, and the parts around the map.

const HERE = new URL('.', location.href);

/** Changes on their way to the server, one at a time; those of one drag that wait are replaced by the newest. */
class Link {
  constructor(refused) {
    Object.assign(this, { refused, queue: [], busy: false, sent: 0, version: 0 });
  }

  /** @param keep true: a later change of the gesture comes in addition, not instead. */
  edit(ops, gesture = null, keep = false) {
    const last = this.queue[this.queue.length - 1];
    const entry = { what: 'edit', body: { gesture, ops }, gesture, keep };
    if (last && !last.keep && gesture !== null && last.gesture === gesture) {
      this.queue[this.queue.length - 1] = entry;
    } else {
      this.queue.push(entry);
    }
    this.#next();
  }

  ask(what, body = {}) {
    return new Promise(resolve => {
      this.queue.push({ what, body, gesture: null, resolve });
      this.#next();
    });
  }

  async #next() {
    if (this.busy || !this.queue.length) {
      return;
    }
    this.busy = true;
    const { what, body, resolve } = this.queue.shift();
    let answer = { status: 0, body: null };
    try {
      const response = await fetch(new URL(what, HERE), { method: 'POST', headers: { 'Content-Type': 'application/json' }, body: JSON.stringify(body) });
      this.sent++;
      const text = await response.text();
      answer = { status: response.status, body: text.startsWith('{') ? JSON.parse(text) : { faults: [{ text, message: text, path: null }] } };
    } catch {
      answer = { status: 0, body: { faults: [{ text: '', message: 'the program does not answer; the change was not made', path: null }] } };
    }
    this.busy = false;
    this.version = Math.max(this.version, answer.body?.version ?? 0);
    this.refused(answer.status === 200 ? [] : answer.body?.faults ?? []);
    resolve?.(answer);
    this.#next();
  }
}

class LayoutApp {
  constructor() {
    this.id = `${Math.random().toString(36).slice(2)}${Date.now().toString(36)}`;
    this.link = new Link(faults => this.#refused(faults));
    this.#build();
    this.#listen();
    this.painted = { coarse: [], accurate: [] };
    addEventListener('keydown', e => this.#key(e));
    addEventListener('beforeunload', e => {
      if (this.state && !this.state.saved && this.alone) {
        e.preventDefault();
      }
    });
  }

  #build() {
    const button = (text, title, run, name) => html('button', { type: 'button', title, onclick: run, 'data-do': name }, text);
    this.title = html('h1', null, '…');
    this.file = html('p', null, '');
    this.undoButton = button('↶ Undo', 'Undo (Ctrl+Z)', () => this.link.ask('undo'), 'undo');
    this.redoButton = button('↷ Redo', 'Redo (Ctrl+Shift+Z)', () => this.link.ask('redo'), 'redo');
    this.saveButton = button('Save', 'Write the device file (Ctrl+S)', () => this.save(), 'save');
    this.pinButton = button('Pin as reference', 'Readings then show their difference from now', () => this.#pin(), 'pin');
    const report = html('a', { class: 'button', href: 'report.html', download: '', 'data-do': 'report', title: 'The report that drive would write for this layout' }, 'Report');
    this.badge = html('output', { class: 'badge', 'aria-live': 'polite', 'data-accuracy': 'none' }, 'connecting …');
    const tools = html('div', { class: 'tools', role: 'group', 'aria-label': 'File' }, this.undoButton, this.redoButton, this.saveButton, button('Save as …', 'Write another file beside this one', () => this.#saveAs(), 'save-as'), report, this.pinButton);
    this.notice = html('section', { class: 'note caution', role: 'alert', hidden: true });
    const header = html('header', null, html('div', null, this.title, this.file), tools);
    // The map.
    this.wiringBox = html('label', { class: 'choice' }, html('span', null, 'Wiring'), html('select', { onchange: e => this.#look(e.target.value) }));
    this.wiringSelect = this.wiringBox.lastChild;
    this.toolBox = html('div', { class: 'segments', role: 'group', 'aria-label': 'What a click on the map does' });
    for (const [key, text, title] of [['move', 'Move', 'Drag contacts, pads and tips'], ['corner', 'Corners', 'Drag, add and remove the corners of the outline'], ['edge', '+ Contact', 'Click where an edge contact belongs'], ['pad', '+ Pad', 'Click where a pad belongs'], ['point', '+ Tip', 'Click where a tip belongs']]) {
      this.toolBox.append(html('button', { type: 'button', class: 'small', title, 'data-tool': key, 'aria-pressed': String(key === 'move'), onclick: () => this.#tool(key) }, text));
    }
    const mapHost = html('div', { class: 'map-host' }), bar = html('div', { class: 'bar' }, this.wiringBox,
      choice('Show', [['phi', 'potential φ'], ['e', 'field |E|']], 'phi', v => { this.stage.quantity = v; this.stage.draw(); }),
      this.senseBox = tick('sensitivity to misplaced contacts', false, on => this.#sense(on))), toolBar = html('div', { class: 'bar tool-bar' }, this.toolBox, html('span', { class: 'zooms', role: 'group', 'aria-label': 'Zoom' }, button('−', 'Zoom out', () => this.stage.zoomBy(1 / 1.5), 'zoom-out'), button('+', 'Zoom in', () => this.stage.zoomBy(1.5), 'zoom-in'), button('whole', 'Show the whole sheet', () => this.stage.whole(), 'zoom-whole')));
    this.hint = html('p', { class: 'note-line hint-line' }, '');
    this.senseLine = html('div', { class: 'sense-line', hidden: true });
    const pictureHost = html('div', null);
    this.fault = html('p', { class: 'fault-line', role: 'alert', hidden: true });
    const readings = html('div', null), readingsBox = html('section', { class: 'live' }, html('div', { class: 'readings-head' }, html('h3', null, 'Readings'), this.badge), readings), charts = html('section', { class: 'live' });
    this.fieldsHost = html('section', { class: 'live fields-host', 'aria-label': 'Values of the device file' });
    const partTools = html('div', { class: 'part-tools' }, this.dropButton = button('Remove contact', 'Remove the chosen contact or tip (Delete)', () => this.#drop(this.selected), 'drop'),
      button('Add wiring', 'A wiring like the last one with the current turned round', () => this.link.edit([{ op: 'add', kind: 'wiring', x: 0, y: 0 }]), 'add-wiring'), this.dropWiring = button('Remove wiring', 'Remove the wiring on show', () => this.#drop(this.wiring), 'drop-wiring'));
    const left = html('div', { class: 'layout-left' }, html('section', { class: 'live' }, bar, toolBar, mapHost, this.senseLine, this.fault, this.hint, pictureHost), charts), right = html('div', { class: 'layout-right' }, readingsBox, html('div', null, partTools, this.fieldsHost));
    document.body.append(header, this.notice, html('main', { class: 'layout-grid' }, left, right), html('footer', null, this.foot = html('p', null, 'Served on this machine alone. Nothing is written unless you save; closing the last page ends the program.')));
    this.stage = new LayoutStage(mapHost, {
      move: (name, x, y, gesture) => this.link.edit([{ op: 'move', name, x, y }], gesture),
      turn: (degrees, gesture) => this.link.edit([{ op: 'set', path: 'law.axis', value: `${Number(degrees.toFixed(2))} deg` }], gesture),
      select: name => this.#select(name), drop: name => this.#drop(name),
      corner: (loop, corner, x, y, gesture) => this.link.edit([{ op: 'corner-move', loop, corner, x, y }], gesture),
      cornerAdd: (loop, corner, x, y, gesture) => this.link.edit([{ op: 'corner-add', loop, corner, x, y }], gesture, true),
      cornerDrop: (loop, corner) => this.link.edit([{ op: 'corner-drop', loop, corner }]),
      pickCorner: (loop, k) => this.#pickCorner(loop, k),
      measure: (x, y) => this.pictures.measure(x, y), shiftPicture: (dx, dy) => this.pictures.shift(dx, dy), traced: () => this.pictures?.show(),
      // A change is on its way, or made and not yet told.
      busy: () => this.link.busy || this.link.queue.length > 0 || this.link.version > this.state.version,
      place: (kind, x, y) => { this.link.edit([{ op: 'add', kind, x, y }]); this.#tool('move'); },
    });
    this.stage.painted = answer => this.#painted(answer);
    this.fields = new LayoutFields(this.fieldsHost, {
      set: (path, value, gesture = null) => this.link.edit([{ op: 'set', path, value }], gesture), ops: ops => this.link.edit(ops), own: () => this.link.edit([{ op: 'own', name: this.selected }]),
    });
    this.readings = new LayoutReadings(readings, charts);
    this.pictures = new PicturePanel(pictureHost, this.stage, {
      tool: key => this.#tool(key), save: body => this.link.ask('trace', body), use: (name, alone) => this.link.edit([{ op: 'trace-use', name, kind: alone ? 'alone' : null }]),
    });
    this.#tool('move');
  }

  #listen() {
    const at = new URL('events', HERE);
    at.searchParams.set('page', this.id);
    at.searchParams.set('wiring', this.wiring ?? '');
    const events = new EventSource(at);
    events.addEventListener('open', () => { this.lost = false; this.#badge(); });
    events.addEventListener('state', e => this.#hear(JSON.parse(e.data)));
    events.addEventListener('triangles', e => this.stage.describe(JSON.parse(e.data)));
    events.addEventListener('answer', e => this.#answer(JSON.parse(e.data)));
    events.addEventListener('error', () => {
      this.lost = true;
      this.#badge();
      if (events.readyState === EventSource.CLOSED) {
        setTimeout(() => this.#listen(), 1500);
      }
    });
  }

  // While something is dragged the coarse answer follows at once: layout and map are then painted together, which takes half the time of painting twice.
  #hear(state) {
    if (!this.stage.drag || !this.answer) {
      this.#state(state);
      return;
    }
    this.heard = state;
    this.patience ??= setTimeout(() => this.#catchUp(), 60);
  }

  #catchUp() {
    clearTimeout(this.patience);
    const { heard } = this;
    this.patience = this.heard = null;
    if (heard) {
      this.#state(heard);
    }
  }

  #state(state) {
    state.byPath = new Map(state.values.map(v => [v.path, v]));
    if (this.state && state.version !== this.state.version) {
      this.changed = performance.now();
    }
    if (this.state?.byPath.has('turn.around') && !state.byPath.has('turn.around') && this.state.contacts.every(c => state.contacts.some(o => o.name === c.name))) {
      this.hint.textContent = 'The ring is now written as single contacts, so [turn] takes each wiring as one direction. Undo brings the ring back.';
    }
    if (this.state?.outline?.file && state.outline && !state.outline.file) {
      this.hint.textContent = `The corners now stand in the device file; ${this.state.outline.file} stays as it is. Undo brings it back.`;
    }
    this.state = state;
    document.title = `${state.title} – layout`;
    this.title.textContent = state.title;
    this.file.textContent = `${state.file}, FieldSolve ${state.program} – ${state.saved ? 'saved' : 'changed, not saved'}`;
    this.undoButton.disabled = !state.canUndo;
    this.redoButton.disabled = !state.canRedo;
    this.saveButton.disabled = state.saved && !state.changedOnDisk;
    const names = state.wirings.map(w => w.name);
    if (!names.includes(this.wiring)) {
      this.#look(names[0]);
    }
    if (JSON.stringify(names) !== this.names) {
      this.names = JSON.stringify(names);
      this.wiringSelect.replaceChildren(...names.map(n => html('option', { value: n }, n)));
    }
    this.wiringSelect.value = this.wiring;
    this.dropWiring.disabled = names.length < 2;
    if (this.selected && !state.contacts.some(c => c.name === this.selected)) {
      this.selected = this.stage.selected = null;
    }
    this.dropButton.disabled = !this.selected;
    this.toolBox.querySelector('[data-tool="corner"]').hidden = !state.outline;
    if (!state.outline && this.stage.tool === 'corner') {
      this.#tool('move');
    }
    const { picked } = this.stage;
    if (picked && !(state.outline?.loops[picked.loop]?.points.length > 2 * picked.k)) {
      this.stage.picked = null;
    }
    this.#diskNotice();
    this.stage.setWiring(names.indexOf(this.wiring));
    this.stage.show(state);
    this.#showFields();
    this.#badge();
  }

  #answer(answer) {
    this.#catchUp();
    this.answer = answer;
    this.readings.show(answer, this.wiring);
    this.readings.curves(answer, this.state?.wirings.map(w => w.name) ?? []);
    this.stage.answerWith(answer, this.wiring);
    if (answer.accurate && this.senseBox.input.checked) {
      this.#sense();
    }
    this.#badge();
  }

  #badge() {
    const { answer, state } = this, newest = answer && state && answer.version === state.version;
    const took = answer && (answer.milliseconds < 1000 ? `${number(answer.milliseconds, 3)} ms` : `${number(answer.milliseconds / 1000, 3)} s`);
    const kind = this.lost ? 'lost' : !answer ? 'none' : answer.failure ? 'failed' : !newest ? 'stale' : answer.accurate ? 'accurate' : 'coarse';
    const text = { lost: 'connection lost, trying again …', none: 'solving …', failed: 'no answer', stale: 'solving …', accurate: `accurate · ${took}${answer?.complete ? '' : ', other wirings follow …'}`, coarse: `coarse · ${took}, refining …` }[kind];
    if (this.badge.dataset.accuracy !== kind || kind !== 'stale') {
      this.badge.textContent = text;
      this.badge.dataset.accuracy = kind;
    }
  }

  #painted(answer) {
    // For the benchmark: from the change to the picture.
    if (answer && this.changed && answer.version === this.state?.version && this.lastPainted !== answer) {
      this.lastPainted = answer;
      const list = answer.accurate ? this.painted.accurate : this.painted.coarse;
      list.push(performance.now() - this.changed);
      list.splice(0, Math.max(0, list.length - 1000));
    }
  }

  #refused(faults) {
    const rest = this.state ? this.fields.refuse(faults) : faults, text = rest.map(f => f.message).join('; ');
    this.fault.textContent = text;
    this.fault.title = rest.map(f => f.text).join('\n');
    this.fault.hidden = text === '';
  }

  #look(name) {
    this.wiring = name;
    this.link.ask('look', { page: this.id, wiring: name });
    if (this.state) {
      this.stage.setWiring(this.state.wirings.findIndex(w => w.name === name));
      this.#showFields();
      if (this.senseBox.input.checked) {
        this.#sense();
      }
      if (this.answer) {
        this.readings.show(this.answer, name);
        this.stage.answerWith(this.answer, name);
      }
    }
  }

  #select(name) {
    if (this.selected === name) {
      return;
    }
    this.selected = this.stage.selected = name;
    this.dropButton.disabled = !name;
    this.#showFields();
    this.stage.draw();
  }

  #showFields() {
    this.fields.show(this.state, this.selected, this.wiring, this.stage.tool === 'corner' ? this.stage.picked : null);
  }

  #pickCorner(loop, k) {
    this.stage.picked = { loop, k };
    this.#showFields();
    this.stage.draw();
  }

  #tool(key) {
    for (const b of this.toolBox.children) {
      b.setAttribute('aria-pressed', String(b.dataset.tool === key));
    }
    this.stage.use(key);
    this.hint.textContent = {
      move: 'Drag contacts, pads and tips, or turn the dial; Tab and the arrow keys do the same. Shift makes small steps, Delete removes.',
      corner: 'Drag a corner, or a round mark to add one. Tab and the arrow keys do the same; Insert adds a corner, Delete removes the one in focus. Contacts keep their share of an edge.',
      edge: 'Click at the edge, or move the cross by the arrow keys and press Enter.', pad: 'Click where the pad belongs, or move the cross by the arrow keys and press Enter.',
      point: 'Click where the tip belongs, or move the cross by the arrow keys and press Enter.',
      picture: 'Drag the picture to where it belongs.', measure: 'Click two points whose distance you know, such as the ends of a scale bar.',
      trace: 'Click corner by corner; the first corner ends it. Backspace takes one back, Alt leaves snapping out.',
    }[key];
    this.pictures?.show();
    if (this.state) {
      this.#showFields();
    }
    if (['edge', 'pad', 'point', 'trace', 'measure'].includes(key)) {
      this.stage.stage.focus({ preventScroll: true });
    }
  }

  // Colours of the contacts: what a misplacement of each does to the across voltage. Worked out anew when the layout rests.
  async #sense(on = this.senseBox.input.checked) {
    this.senseLine.hidden = !on;
    if (!on) {
      this.stage.marks = null;
      this.stage.draw();
      return;
    }
    const key = `${this.state.version} ${this.wiring}`;
    if (this.senseKey === key) {
      return;
    }
    this.senseKey = key;
    this.senseLine.replaceChildren(html('p', { class: 'note-line' }, 'Working out what misplaced contacts do …'));
    const at = new URL('sensitivity', HERE);
    at.searchParams.set('wiring', this.wiring);
    let body;
    try {
      const response = await fetch(at);
      body = await response.json();
    } catch {
      body = { faults: [{ message: 'the program does not answer' }] };
    }
    if (this.senseKey !== key || !this.senseBox.input.checked) {
      return;
    }
    const list = body.contacts ?? [], most = Math.max(0, ...list.map(c => c.odd));
    this.stage.marks = list.length ? new Map(list.map(c => [c.contact, { share: most > 0 ? c.odd / most : 0, text: plusMinus(c.odd, c.oddError, 'V') }])) : null;
    if (body.faults) {
      this.senseLine.replaceChildren(html('p', { class: 'note-line' }, `No sensitivity: ${body.faults.map(f => f.message).join('; ')}.`));
    } else {
      const legend = svg('svg', { class: 'legend', role: 'img' }), even = list.some(c => c.even);
      rampLegend(legend, 'sense-ramp', { low: 0, high: most, unit: 'V', log: false, table: RAMPS.ember, label: 'V_across, odd, by a misplaced contact', words: new Set(list.map(c => c.causes)).size === 1 ? `; each by ${list[0].causes} (σ)` : ', one σ each', width: this.stage.width, left: this.stage.margin.left });
      this.senseLine.replaceChildren(legend, html('details', null, html('summary', null, 'Contact by contact'), html('div', { class: 'wide' }, html('table', null,
        html('thead', null, html('tr', null, ...['contact', 'misplaced by (σ)', 'changes V_across, odd', ...even ? ['even'] : []].map(t => html('th', { scope: 'col' }, t)))),
        html('tbody', null, ...list.map(c => html('tr', null, html('td', null, c.contact), html('td', null, c.causes), html('td', null, plusMinus(c.odd, c.oddError, 'V')), ...even ? [html('td', null, plusMinus(c.even, c.evenError, 'V'))] : [])))))));
    }
    this.stage.draw();
  }

  #drop(name) {
    if (name) {
      this.link.edit([{ op: 'drop', name }]);
    }
  }

  #pin() {
    this.readings.pin(this.readings.pinned ? null : this.answer);
    this.pinButton.textContent = this.readings.pinned ? 'Unpin' : 'Pin as reference';
    this.readings.show(this.answer, this.wiring);
  }

  async save(overwrite = false) {
    const answer = await this.link.ask('save', { overwrite });
    this.#said(answer, answer.status === 200 ? `Saved ${this.state.file}.` : null);
  }

  async #saveAs() {
    const name = prompt('Name of the new device file, beside the present one:', this.state.file.replace(/\.toml$/, '-2.toml'));
    if (!name) {
      return;
    }
    let answer = await this.link.ask('save', { name, overwrite: false });
    if (answer.status === 409 && confirm(`${name} exists. Replace it?`)) {
      answer = await this.link.ask('save', { name, overwrite: true });
    }
    this.#said(answer, answer.status === 200 ? `Saved as ${name}.` : null);
  }

  #said(answer, text) {
    if (text) {
      this.hint.textContent = text;
    }
    if (answer.status === 409) {
      this.#diskNotice(true);
    }
  }

  // Somebody else wrote the file: the reader decides.
  #diskNotice(asked = false) {
    const show = this.state?.changedOnDisk || asked;
    if (show === !this.notice.hidden) {
      return;
    }
    this.notice.hidden = !show;
    this.notice.replaceChildren();
    if (show) {
      this.notice.append(html('p', null, `${this.state.file} was changed by another program. Saving here would replace that.`),
        html('button', { type: 'button', 'data-do': 'take', onclick: () => this.link.ask('reload') }, 'Take the file as it is now'), ' ', html('button', { type: 'button', 'data-do': 'overwrite', onclick: () => this.save(true) }, 'Replace it by this layout'));
    }
  }

  #key(e) {
    const typing = e.target.matches?.('input[type="text"]');
    if (!(e.ctrlKey || e.metaKey)) {
      if (e.key === 'Escape') {
        if (this.stage.trace.open) {
          this.stage.trace.cancel();
        } else {
          this.#tool('move');
        }
      }
      return;
    }
    const key = e.key.toLowerCase(), what = key === 's' ? 'save' : key === 'z' && !typing ? e.shiftKey ? 'redo' : 'undo' : key === 'y' && !typing ? 'redo' : null;
    if (what) {
      e.preventDefault();
      what === 'save' ? this.save() : this.link.ask(what);
    }
  }
}

const root = document.documentElement, darkness = matchMedia('(prefers-color-scheme: dark)');
const applyTheme = () => { root.dataset.theme = darkness.matches ? 'dark' : 'light'; };
darkness.addEventListener('change', applyTheme);
applyTheme();
// For tests, and on the console.
window.fieldsolve = { app: new LayoutApp(), plusMinus, fieldLabel };
root.dataset.ready = 'yes';
