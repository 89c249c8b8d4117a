// The sheet to scale on its potential map, with contacts, pads and tips that can be dragged or moved by the keys, and a dial for the crystal axis.

const AXIS_DIAL = 40;

// What a click does with each tool besides moving, and where the keys first put their cross.
const PLACING = ['edge', 'pad', 'point', 'trace', 'measure'];

class LayoutStage extends Plane {
  /**
   * @param host element to fill.
   * @param act { move(name, x, y, gesture), turn(degrees, gesture), select(name), drop(name), place(kind, x, y), measure(x, y), corner(loop, k, x, y, gesture), cornerAdd(…),
   * cornerDrop(loop, k), pickCorner(loop, k), busy() }.
   */
  constructor(host, act) {
    super(0.1, 500);
    Object.assign(this, { host, act, selected: null, tool: 'move', quantity: 'phi', mapStrength: 1, state: null, answer: null, frame: null, mesh: null, gestures: 0, picked: null, described: new Map(), kept: new Kept() });
    this.canvas = html('canvas', { 'aria-hidden': 'true' });
    this.window = svg('rect', null);
    this.inside = svg('g', { 'clip-path': 'url(#stage-clip)' });
    this.names = svg('g', { class: 'names' });
    this.axes = svg('g', null);
    this.dial = svg('g', { class: 'dial' });
    this.overlay = svg('svg', { class: 'overlay' }, svg('defs', null, svg('clipPath', { id: 'stage-clip' }, this.window)), this.inside, this.axes, this.dial);
    this.picture = new Micrograph(this);
    this.trace = new Trace(this, { changed: () => { this.draw(); this.act.traced(); }, rims: () => (this.state?.outline?.loops ?? []).map((l, k) => sheetLeft(l.points, k > 0)), others: () => [...(this.state?.contacts ?? []).filter(c => c.kind === 'pad').map(c => c.points)] });
    this.stage = html('div', { class: 'stage layout-stage', role: 'application', 'aria-label': 'Layout. Tab goes from contact to contact, arrow keys move the one in focus, with Shift in small steps.' }, this.picture.frame, this.canvas, this.overlay);
    this.legend = svg('svg', { class: 'legend', role: 'img' });
    host.append(this.stage, this.legend);
    this.draw = perFrame(() => this.drawNow());
    this.stage.addEventListener('pointerdown', e => this.#down(e));
    this.stage.addEventListener('pointermove', e => this.#hover(e));
    this.stage.addEventListener('keydown', e => this.#placeKey(e));
    for (const end of ['pointerup', 'pointercancel']) {
      this.stage.addEventListener(end, e => this.#up(e));
    }
    this.stage.addEventListener('wheel', e => {
      if (e.ctrlKey || e.metaKey || e.shiftKey) {
        this.wheel(e);
      }
    }, { passive: false });
    new ResizeObserver(perFrame(() => this.#size())).observe(host);
  }

  /** Chooses what a click does. */
  use(tool) {
    this.tool = tool;
    this.trace.near = null;
    this.stage.dataset.tool = tool;
    if (PLACING.includes(tool)) {
      this.stage.setAttribute('tabindex', '0');
    } else {
      this.stage.removeAttribute('tabindex');
    }
    this.draw();
  }

  /** Shows another layout. */
  show(state) {
    const first = !this.state;
    this.state = state;
    const box = extentOf([...state.rim, ...state.contacts.map(c => c.points)]);
    // The view stays while something is dragged, so that the pointer keeps what it holds.
    if (first || (!this.drag && ['cx', 'cy', 'width', 'height'].some(k => Math.abs(box[k] - this.extent[k]) > 0.02 * Math.max(box.width, box.height)))) {
      this.extent = box;
      this.unit = scaleFor(Math.max(box.width, box.height) / 2, 'm');
      this.#size();
    }
    this.draw();
  }

  /** Takes the triangles that answers of a kind lie on from now on. */
  describe(triangles) {
    this.described.set(triangles.kind, { triangles, mesh: null });
  }

  // Triangles stay while something is dragged; only their corners move.
  #meshOf(places) {
    const known = this.described.get(places.kind);
    return known.mesh = new Mesh(known.mesh ? places : { ...known.triangles, ...places }, known.mesh);
  }

  /** Shows another answer, for one wiring. */
  answerWith(answer, wiring) {
    const frame = answer?.frames?.find(f => f.wiring === wiring);
    if (frame) {
      if (answer !== this.answer) {
        this.mesh = answer.built ??= this.#meshOf(answer.mesh);
        this.view ??= new MeshCanvas(this.canvas, this.mesh, 'plain');
        this.view.use(this.mesh);
      }
      frame.fields ??= new FrameFields(this.mesh, null, frame);
      this.fields = frame.fields;
      this.answer = answer;
    } else if (!answer || answer.frames || answer.failure) {
      this.fields = null;
    }
    this.draw();
  }

  setWiring(index) {
    this.wiring = index;
    this.draw();
  }

  #size() {
    if (!this.extent) {
      return;
    }
    const width = Math.max(260, this.host.clientWidth), box = this.extent, margin = { left: 52, right: 12, top: 14, bottom: 38 };
    const room = width - margin.left - margin.right, most = Math.max(280, Math.min(700, innerHeight - 250)), pad = room < 460 ? 36 : 56;
    // Names at the left and the right end stand outside, as far as there is room.
    const longest = Math.max(0, ...this.state.contacts.filter(c => c.kind === 'edge' && Math.abs(c.middle[0] - box.cx) > 0.48 * box.width).map(c => c.name.length)), aside = Math.max(pad, longest ? Math.min(0.18 * room, 8 * longest + 44) : 0);
    const scale = Math.min((room - 2 * aside) / box.width, (most - 2 * pad) / box.height), inner = { width: room, height: Math.round(Math.max(room < 460 ? 250 : 260, box.height * scale + 2 * pad)) };
    Object.assign(this, { margin, inner, fit: scale, width, height: inner.height + margin.top + margin.bottom });
    this.layOut(this.overlay, this.canvas, this.picture.frame);
    this.draw();
  }

  drawNow() {
    if (!this.state || !this.fit) {
      return;
    }
    const { margin, inner, fields } = this, q = QUANTITIES[this.quantity];
    this.picture.draw();
    this.canvas.style.opacity = String(this.picture.there ? this.mapStrength : 1);
    if (fields && this.view) {
      let [low, high] = fields.range(this.quantity), values = fields.values(this.quantity);
      const ends = [low, high];
      if (q.log && high > 0) {
        values = (fields.logs ??= {})[this.quantity] ??= values.map(v => Math.log10(Math.max(v, 1e-30)));
        [low, high] = [Math.log10(low), Math.log10(high)];
      }
      const span = fields.frame.high - fields.frame.low;
      this.step = roundStep(span, 20);
      this.view.show({ values, low, high, table: RAMPS[q.table], potential: span > 0 ? fields.potentialFloats : null, step: this.step });
      const [u, v] = this.toScreen(this.mesh.box.cx, this.mesh.box.cy);
      // While answers are coarse they come fast: one pixel of the page each is enough then.
      this.view.look(inner.width, inner.height, this.answer.accurate ? Math.min(2, devicePixelRatio || 1) : 1, this.fit * this.zoom, u - margin.left, v - margin.top);
      this.view.draw();
      this.#showLegend({ low: ends[0], high: ends[1], unit: q.unit, log: q.log && ends[1] > 0, table: RAMPS[q.table], label: q.label, width: this.width, left: margin.left, words: `; lines every ${quantity(this.step, 'V')}` });
    } else {
      this.view?.clear();
      this.#showLegend(null);
    }
    this.#drawOver();
    this.painted?.(this.answer);
  }

  #showLegend(what) {
    const key = JSON.stringify({ ...what, table: null, quantity: what && this.quantity });
    if (key === this.legendKey) {
      return;
    }
    this.legendKey = key;
    if (what) {
      rampLegend(this.legend, 'stage-ramp', what);
    } else {
      this.legend.replaceChildren();
    }
  }

  #drawOver() {
    const { margin, inner, inside, state } = this, right = margin.left + inner.width;
    const view = JSON.stringify([margin, inner, this.fit, this.zoom, this.panX, this.panY, this.extent]);
    this.kept.of('window', view, () => fill(this.window, { x: margin.left, y: margin.top, width: inner.width, height: inner.height }, []));
    const focus = document.activeElement?.closest?.('[data-corner], [data-traced]')?.dataset, nodes = [], { kept } = this;
    state.rim.forEach((loop, k) => {
      const d = this.pathOf(loop, true);
      // Over a picture the rim needs a bright line beside the dark one.
      nodes.push(...this.picture.there ? [kept.of(`halo ${k}`, d, () => svg('path', { class: 'trace-halo', d }))] : [], kept.of(`rim ${k}`, d, () => svg('path', { class: 'rim', d })));
    });
    const roles = state.wirings[this.wiring]?.roles ?? [];
    state.contacts.forEach((c, k) => {
      const { role, words } = roleOf(roles[k]);
      nodes.push(partNode(this, c, role, words, (e, contact) => this.#key(e, contact)));
    });
    adopt(this.names, nameNodes(this, roles, this.#dialBoxes(right)));
    if (this.tool === 'corner' && state.outline) {
      state.outline.loops.forEach((l, loop) => nodes.push(...cornerNodes(this, l.points, loop, (e, at, k) => this.#cornerKey(e, at, k))));
    }
    adopt(inside, [...nodes, this.names, ...this.trace.nodes(this.tool === 'trace', { key: (e, index, k) => this.#tracedKey(e, index, k), taken: name => state.contacts.some(c => c.name === name) }), ...this.picture.there ? this.picture.nodes() : [], ...this.#cross()]);
    if (focus) {
      const key = ['corner', 'traced'].find(k => focus[k] !== undefined);
      [...inside.querySelectorAll(`[data-${key}]`)].find(n => n.dataset[key] === focus[key])?.focus({ preventScroll: true });
    }
    kept.only(new Set(['window', 'axes', 'dial', ...state.rim.flatMap((_, k) => [`halo ${k}`, `rim ${k}`]), ...state.contacts.flatMap(c => [`part ${c.name}`, `name ${c.name}`])]));
    kept.of('axes', view, () => this.axes.replaceChildren(...this.axisNodes()));
    kept.of('dial', JSON.stringify([view, state.axis]), () => this.#drawDial(right));
  }

  // Where the keys would place something.
  #cross() {
    if (!this.cross || !PLACING.includes(this.tool) || document.activeElement !== this.stage || (this.tool === 'trace' && this.trace.near)) {
      return [];
    }
    const [u, v] = this.toScreen(...this.cross), d = `M${u - 12} ${v}h24M${u} ${v - 12}v24`;
    return [svg('path', { class: 'trace-halo', d }), svg('path', { class: 'measure', d })];
  }

  // Middle and size of the dial, and where its angle stands. Where there is little room it is smaller, with the angle beside it, clear of the sheet.
  #dialPlace(right) {
    const small = this.inner.width < 460 || this.inner.height < 330, r = small ? 0.55 * AXIS_DIAL : AXIS_DIAL, cx = right - r - 14, cy = this.margin.top + r + 14, text = `axis ${number(this.state.axis, 5)}°`;
    return { cx, cy, r, text, ...small ? { x: cx - r - 12, y: this.margin.top + 14, anchor: 'end' } : { x: cx, y: cy + r + 26, anchor: 'middle' } };
  }

  // What names keep clear of.
  #dialBoxes(right) {
    const { cx, cy, r, text, x, y, anchor } = this.#dialPlace(right), wide = nameWidth(text), left = x - (anchor === 'end' ? wide : wide / 2);
    return [[cx - r - 10, cy - r - 10, cx + r + 10, cy + r + 10], [left - 3, y - 11, left + wide + 3, y + 3]];
  }

  // The crystal axes beside the sheet: the longer line is a, the handle turns it.
  #drawDial(right) {
    const { cx, cy, r, text, ...place } = this.#dialPlace(right), angle = this.state.axis * Math.PI / 180, c = Math.cos(angle), s = Math.sin(angle);
    const held = document.activeElement?.classList?.contains('axis-handle');
    this.centre = [cx, cy];
    const at = (p, q) => `${(cx + p * c - q * s).toFixed(1)} ${(cy - p * s - q * c).toFixed(1)}`, [hu, hv] = at(r, 0).split(' ');
    const handle = svg('circle', {
      class: 'handle axis-handle', cx: hu, cy: hv, r: 9, tabindex: 0, role: 'slider', 'aria-label': 'Crystal axis a, degrees from x', 'aria-valuenow': number(this.state.axis, 6).replace('−', '-'), 'aria-valuemin': -360, 'aria-valuemax': 360,
      onkeydown: e => {
        const step = e.shiftKey ? 0.1 : 1, by = { ArrowLeft: step, ArrowUp: step, ArrowRight: -step, ArrowDown: -step }[e.key];
        if (by) {
          e.preventDefault();
          this.act.turn(this.#from('axis', this.state.axis, v => v + by), this.#keyGesture('axis'));
        }
      },
    });
    this.dial.replaceChildren(
      svg('circle', { class: 'dial-face', cx, cy, r: r + 10 }),
      svg('path', { class: 'ink', fill: 'none', 'stroke-width': 2.2, d: `M${at(-r, 0)}L${at(r, 0)}` }), svg('path', { class: 'ink', fill: 'none', 'stroke-width': 1.4, 'stroke-dasharray': '4 3', d: `M${at(0, -r * 0.7)}L${at(0, r * 0.7)}` }),
      svg('text', { x: (cx + 0.55 * r * c - 11 * s).toFixed(1), y: (cy - 0.55 * r * s - 11 * c + 4).toFixed(1), 'text-anchor': 'middle' }, 'a'), svg('text', { x: (cx - 0.5 * r * s - 11 * c).toFixed(1), y: (cy - 0.5 * r * c + 11 * s + 4).toFixed(1), 'text-anchor': 'middle' }, 'b'),
      svg('text', { class: 'tag', x: place.x, y: place.y, 'text-anchor': place.anchor }, text), handle);
    if (held) {
      handle.focus({ preventScroll: true });
    }
  }

  #down(e) {
    if (e.button !== 0 || this.drag || !this.state) {
      return;
    }
    const [u, v] = this.where(e), part = e.target.closest?.('[data-contact]'), place = this.toPlace(u, v), { corner, mid, traced } = e.target.dataset ?? {};
    if (e.target.classList?.contains('axis-handle')) {
      e.target.focus({ preventScroll: true });
      this.drag = { what: 'axis', gesture: this.#gesture() };
    } else if (corner !== undefined || mid !== undefined) {
      const [loop, k] = (corner ?? mid).split(':').map(Number), gesture = this.#gesture();
      if (mid !== undefined) {
        this.act.cornerAdd(loop, k, ...place, gesture);
      }
      this.picked = { loop, k: mid !== undefined ? k + 1 : k };
      this.act.pickCorner(this.picked.loop, this.picked.k);
      e.target.focus({ preventScroll: true });
      this.drag = { what: 'corner', ...this.picked, start: [u, v], gesture };
    } else if (traced !== undefined) {
      e.target.focus({ preventScroll: true });
      const [index, k] = traced.split(':').map(Number);
      this.drag = { what: 'traced', shape: this.trace.shapes[index], index: k };
    } else if (PLACING.includes(this.tool)) {
      this.stage.focus({ preventScroll: true });
      this.#click(place, e.altKey);
      e.preventDefault();
      return;
    } else if (this.tool === 'picture' && this.picture.there) {
      this.drag = { what: 'picture', last: place };
    } else if (part && this.tool === 'move') {
      part.focus({ preventScroll: true });
      const contact = this.state.contacts.find(c => c.name === part.dataset.contact);
      this.act.select(contact.name);
      this.drag = { what: 'contact', name: contact.name, offset: [contact.middle[0] - place[0], contact.middle[1] - place[1]], start: [u, v], gesture: this.#gesture() };
    } else {
      this.act.select(null);
      this.drag = { what: 'pan' };
    }
    this.hold(e);
  }

  // What a click at a place does with the tool in hand.
  #click(place, free) {
    if (this.tool === 'trace') {
      this.trace.add(place, free);
    } else if (this.tool === 'measure') {
      this.act.measure(...place);
    } else {
      this.act.place(this.tool, ...place);
    }
  }

  #hover(e) {
    const { drag } = this, [u, v] = this.where(e), [x, y] = this.toPlace(u, v);
    if (!drag) {
      if (this.tool === 'trace') {
        this.trace.near = e.target.dataset?.traced === undefined ? this.trace.snap([x, y], e.altKey) : null;
        this.draw();
      }
      return;
    }
    if (drag.what === 'pan') {
      this.shift(u, v);
    } else if (drag.what === 'axis') {
      const degrees = Math.atan2(this.centre[1] - v, u - this.centre[0]) * 180 / Math.PI;
      // Stays near the angle it had, so that 359 goes on to 360 and not back to 0.
      this.act.turn(Math.round(10 * (degrees + 360 * Math.round((this.state.axis - degrees) / 360))) / 10, drag.gesture);
    } else if (drag.what === 'picture') {
      this.act.shiftPicture(x - drag.last[0], y - drag.last[1]);
      drag.last = [x, y];
    } else if (drag.what === 'traced') {
      const at = this.trace.snap([x, y], e.altKey, drag);
      drag.shape.points[drag.index] = [at.x, at.y];
      this.trace.near = at;
      this.draw();
    } else if (drag.moved || Math.hypot(u - drag.start[0], v - drag.start[1]) > 2) {
      drag.moved = true;
      if (drag.what === 'corner') {
        this.act.corner(drag.loop, drag.k, x, y, drag.gesture);
      } else {
        this.act.move(drag.name, x + drag.offset[0], y + drag.offset[1], drag.gesture);
      }
    }
  }

  #up(e) {
    if (this.drag) {
      this.drag = this.trace.near = null;
      this.stage.releasePointerCapture?.(e.pointerId);
      this.show(this.state);
    }
  }

  // Tools that place something take the arrow keys for their cross, and Enter for the click.
  #placeKey(e) {
    if (e.target !== this.stage || !PLACING.includes(this.tool) || !this.state) {
      return;
    }
    const step = this.extent.width / this.zoom / (e.shiftKey ? 1000 : 100), [x, y] = this.cross ?? [this.extent.cx, this.extent.cy], to = { ArrowLeft: [-step, 0], ArrowRight: [step, 0], ArrowUp: [0, step], ArrowDown: [0, -step] }[e.key];
    if (to) {
      this.cross = [x + to[0], y + to[1]];
      this.trace.near = { x: this.cross[0], y: this.cross[1], by: '' };
    } else if (e.key === 'Enter' || e.key === ' ') {
      // The keys snap to the first corner alone, since it ends a polygon.
      const first = this.trace.open?.[0], near = this.tool === 'trace' && first && Math.hypot(first[0] - x, first[1] - y) < 1.5 * step;
      this.#click(near ? first : [x, y], !near);
    } else if (e.key === 'Backspace' && this.tool === 'trace') {
      this.trace.back();
    } else {
      return;
    }
    e.preventDefault();
    this.draw();
  }

  #arrow(e) {
    const step = this.state.size / this.zoom / (e.shiftKey ? 4000 : 400);
    return { ArrowLeft: [-step, 0], ArrowRight: [step, 0], ArrowUp: [0, step], ArrowDown: [0, -step] }[e.key];
  }

  #cornerKey(e, loop, k) {
    const to = this.#arrow(e), points = this.state.outline.loops[loop].points, n = points.length / 2, what = `corner ${loop}:${k}`;
    if (to) {
      this.act.corner(loop, k, ...this.#from(what, [points[2 * k], points[2 * k + 1]], ([x, y]) => [x + to[0], y + to[1]]), this.#keyGesture(what));
    } else if (e.key === 'Delete') {
      this.act.cornerDrop(loop, k);
    } else if (e.key === 'Insert' || e.key === 'Enter') {
      const j = (k + 1) % n;
      this.act.cornerAdd(loop, k, (points[2 * k] + points[2 * j]) / 2, (points[2 * k + 1] + points[2 * j + 1]) / 2, null);
    } else {
      return;
    }
    e.preventDefault();
  }

  #tracedKey(e, index, k) {
    const to = this.#arrow(e), shape = this.trace.shapes[index];
    if (to) {
      shape.points[k] = [shape.points[k][0] + to[0], shape.points[k][1] + to[1]];
    } else if (e.key === 'Delete' && shape.points.length > 3) {
      shape.points.splice(k, 1);
    } else {
      return;
    }
    e.preventDefault();
    this.trace.changed();
  }

  #key(e, contact) {
    const to = this.#arrow(e);
    if (to) {
      e.preventDefault();
      const { middle } = this.state.contacts.find(c => c.name === contact.name), along = contact.kind === 'edge' ? this.#tangent(contact, to) : to;
      this.act.move(contact.name, ...this.#from(contact.name, middle, ([x, y]) => [x + along[0], y + along[1]]), this.#keyGesture(contact.name));
    } else if (e.key === 'Delete') {
      e.preventDefault();
      this.act.drop(contact.name);
    } else if (e.key === '+' || e.key === '=' || e.key === '-') {
      this.zoomBy(e.key === '-' ? 1 / 1.5 : 1.5, ...this.toScreen(...contact.middle));
    }
  }

  // A whole step along the edge in the direction that lies nearest to the arrow.
  #tangent(contact, [dx, dy]) {
    const p = contact.points, n = p.length, tx = p[n - 2] - p[0], ty = p[n - 1] - p[1], size = Math.hypot(tx, ty) || 1, step = Math.hypot(dx, dy), along = (dx * tx + dy * ty) / size;
    const sign = Math.abs(along) > 0.05 * step ? Math.sign(along) : 0;
    return [sign * step * tx / size, sign * step * ty / size];
  }

  #gesture() {
    return `g${++this.gestures}-${Math.round(performance.now())}`;
  }

  // The next place of what the keys move: from where it is, or from where it was sent while that is on its way, so that no press is lost.
  #from(what, now, step) {
    const sent = this.act.busy() && this.sent?.what === what ? this.sent.value : now;
    this.sent = { what, value: step(sent) };
    return this.sent.value;
  }

  // Keys that follow one another soon are one change to undo.
  #keyGesture(what) {
    const now = performance.now();
    if (this.keyWhat !== what || now - this.keyTime > 1200) {
      this.keyName = this.#gesture();
    }
    Object.assign(this, { keyWhat: what, keyTime: now });
    return this.keyName;
  }
}
