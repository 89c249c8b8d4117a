// The sheet to scale on its potential map, with contacts, pads and tips that can be dragged or moved by the keys, and a dial for the crystal axis.

const AXIS_DIAL = 40;

class LayoutStage {
  /**
   * @param host element to fill.
   * @param act { move(name, x, y, gesture), turn(degrees, gesture), select(name), place(kind, x, y) }.
   */
  constructor(host, act) {
    Object.assign(this, { host, act, zoom: 1, panX: 0, panY: 0, selected: null, tool: 'move', quantity: 'phi', state: null, answer: null, frame: null, mesh: null, gestures: 0 });
    this.canvas = html('canvas', { 'aria-hidden': 'true' });
    this.window = svg('rect', null);
    this.under = svg('g', { 'clip-path': 'url(#stage-clip)' });
    this.inside = svg('g', { 'clip-path': 'url(#stage-clip)' });
    this.axes = svg('g', null);
    this.dial = svg('g', { class: 'dial' });
    this.overlay = svg('svg', { class: 'overlay' }, svg('defs', null, svg('clipPath', { id: 'stage-clip' }, this.window)), this.inside, this.axes, this.dial);
    this.stage = html('div', { class: 'stage layout-stage', role: 'application', 'aria-label': 'Layout. Tab goes from contact to contact, arrow keys move the one in focus, with Shift in small steps.' }, this.canvas, this.overlay);
    this.legend = svg('svg', { class: 'legend', role: 'img' });
    host.append(this.stage, this.legend);
    this.draw = perFrame(() => this.drawNow());
    this.stage.addEventListener('pointerdown', e => this.#down(e));
    this.stage.addEventListener('pointermove', e => this.#hover(e));
    for (const end of ['pointerup', 'pointercancel']) {
      this.stage.addEventListener(end, e => this.#up(e));
    }
    this.stage.addEventListener('wheel', e => {
      if (e.ctrlKey || e.metaKey || e.shiftKey) {
        e.preventDefault();
        this.zoomBy(Math.exp(-(e.deltaY || e.deltaX) / 300), ...this.#where(e));
      }
    }, { passive: false });
    new ResizeObserver(perFrame(() => this.#size())).observe(host);
  }

  /** Shows another layout. */
  show(state) {
    const first = !this.state;
    this.state = state;
    const xs = [], ys = [];
    for (const points of [...state.rim, ...state.contacts.map(c => c.points)]) {
      points.forEach((v, k) => (k % 2 ? ys : xs).push(v));
    }
    const x0 = Math.min(...xs), x1 = Math.max(...xs), y0 = Math.min(...ys), y1 = Math.max(...ys), box = { cx: (x0 + x1) / 2, cy: (y0 + y1) / 2, width: x1 - x0, height: y1 - y0 };
    // The view stays while something is dragged, so that the pointer keeps what it holds.
    if (first || (!this.drag && ['cx', 'cy', 'width', 'height'].some(k => Math.abs(box[k] - this.extent[k]) > 0.02 * Math.max(box.width, box.height)))) {
      this.extent = box;
      this.unit = scaleFor(Math.max(box.width, box.height) / 2, 'm');
      this.#size();
    }
    this.draw();
  }

  /** Shows another answer, for one wiring. */
  answerWith(answer, wiring) {
    const frame = answer?.frames?.find(f => f.wiring === wiring);
    if (frame) {
      if (answer !== this.answer) {
        answer.built ??= new Mesh(answer.mesh);
        this.mesh = answer.built;
        this.view = new MeshCanvas(this.canvas, this.mesh, 'plain');
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
    const room = width - margin.left - margin.right, most = Math.max(280, Math.min(700, innerHeight - 250)), pad = 56;
    const scale = Math.min((room - 2 * pad) / box.width, (most - 2 * pad) / box.height), inner = { width: room, height: Math.round(Math.max(260, box.height * scale + 2 * pad)) };
    Object.assign(this, { margin, inner, fit: scale, width, height: inner.height + margin.top + margin.bottom });
    fill(this.overlay, { width, height: this.height, viewBox: `0 0 ${width} ${this.height}` }, []);
    for (const [name, value] of [['width', inner.width], ['height', inner.height], ['left', margin.left], ['top', margin.top]]) {
      this.canvas.style[name] = value + 'px';
    }
    this.stage.style.height = this.height + 'px';
    this.draw();
  }

  toScreen(x, y) {
    const s = this.fit * this.zoom, box = this.extent;
    return [this.margin.left + this.inner.width / 2 + this.panX + s * (x - box.cx), this.margin.top + this.inner.height / 2 + this.panY - s * (y - box.cy)];
  }

  toPlace(u, v) {
    const s = this.fit * this.zoom, box = this.extent;
    return [box.cx + (u - this.margin.left - this.inner.width / 2 - this.panX) / s, box.cy - (v - this.margin.top - this.inner.height / 2 - this.panY) / s];
  }

  /** Zooms about a point of the stage; the middle by default. */
  zoomBy(factor, u = this.margin.left + this.inner.width / 2, v = this.margin.top + this.inner.height / 2) {
    const [x, y] = this.toPlace(u, v);
    this.zoom = Math.max(1, Math.min(500, this.zoom * factor));
    if (this.zoom === 1) {
      this.panX = this.panY = 0;
    } else {
      const [u1, v1] = this.toScreen(x, y);
      this.panX += u - u1;
      this.panY += v - v1;
    }
    this.draw();
  }

  #path(points, close = false) {
    let d = '';
    for (let i = 0; i < points.length; i += 2) {
      const [u, v] = this.toScreen(points[i], points[i + 1]);
      d += `${i ? 'L' : 'M'}${u.toFixed(1)} ${v.toFixed(1)}`;
    }
    return close ? d + 'Z' : d;
  }

  drawNow() {
    if (!this.state || !this.fit) {
      return;
    }
    const { margin, inner, fields } = this, q = QUANTITIES[this.quantity];
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
      this.#drawLegend(ends, q);
    } else {
      this.canvas.width = this.canvas.width;
      this.legend.replaceChildren();
    }
    this.#drawOver();
    this.painted?.(this.answer);
  }

  #drawOver() {
    const { margin, inner, inside, state } = this, right = margin.left + inner.width, bottom = margin.top + inner.height;
    fill(this.window, { x: margin.left, y: margin.top, width: inner.width, height: inner.height }, []);
    const held = document.activeElement?.closest?.('[data-contact]')?.dataset.contact, nodes = [], names = svg('g', { class: 'names' });
    for (const loop of state.rim) {
      nodes.push(svg('path', { class: 'rim', d: this.#path(loop, true) }));
    }
    const roles = state.wirings[this.wiring]?.roles ?? [];
    state.contacts.forEach((c, k) => {
      const raw = roles[k] ?? '', role = raw.replace(/[+-]$/, ''), sign = raw.endsWith('+') ? '+' : raw.endsWith('-') ? '−' : '', chosen = c.name === this.selected;
      const [u, v] = this.toScreen(...c.middle), word = { source: ' I+', drain: ' I−', along: ' ∥', across: ' ⊥' }[role] ?? '';
      const group = svg('g', {
        class: `part ${chosen ? 'chosen' : ''}`, 'data-contact': c.name, tabindex: 0, role: 'button', 'aria-pressed': String(chosen),
        'aria-label': `${{ edge: 'Contact', pad: 'Pad', tip: 'Tip' }[c.kind]} ${c.name}${role ? `, ${role} ${sign}` : ''}; x ${number(c.middle[0] * this.unit.factor, 4)}, y ${number(c.middle[1] * this.unit.factor, 4)} ${this.unit.unit}. Arrow keys move it.`,
        onkeydown: e => this.#key(e, c), onfocus: () => this.act.select(c.name),
      });
      if (c.kind === 'tip') {
        group.append(svg('circle', { class: 'grip', cx: u.toFixed(1), cy: v.toFixed(1), r: 13 }), svg('circle', { class: `tip ${role}`, cx: u.toFixed(1), cy: v.toFixed(1), r: chosen ? 6 : 4.5 }));
      } else {
        const d = this.#path(c.points, c.kind === 'pad'), wide = c.kind === 'pad' ? 2 : role ? 7 : 5;
        group.append(svg('path', { class: 'grip', d, 'stroke-width': 22 }));
        if (chosen) {
          group.append(svg('path', { class: 'chosen-line', d, 'stroke-width': wide + 9 }));
        }
        group.append(svg('path', { class: 'halo', 'stroke-width': wide + 2.5, d }), svg('path', { class: `${c.kind === 'pad' ? 'pad ' : ''}metal ${role}`, 'stroke-width': wide, d }));
      }
      if (this.marks?.[c.name] > 0) {
        group.append(svg('circle', { class: 'sense', cx: u.toFixed(1), cy: v.toFixed(1), r: (26 * Math.sqrt(this.marks[c.name])).toFixed(1) }));
      }
      nodes.push(group);
      // Names of edges stand outside the sheet, those of pads and tips beside them.
      const [mu, mv] = this.toScreen(this.extent.cx, this.extent.cy), far = Math.hypot(u - mu, v - mv) || 1, out = c.kind === 'edge' ? 1 : 0, du = out * (u - mu) / far, dv = out * (v - mv) / far;
      names.append(svg('text', {
        class: `tag ${role}`, x: (u + 15 * du).toFixed(1), y: (v + (out ? 18 * dv + 4 : c.kind === 'tip' ? -10 : 4)).toFixed(1), 'text-anchor': du > 0.4 ? 'start' : du < -0.4 ? 'end' : 'middle',
      }, c.name + word + sign));
    });
    inside.replaceChildren(...nodes, names);
    if (held) {
      [...inside.querySelectorAll('[data-contact]')].find(n => n.dataset.contact === held)?.focus({ preventScroll: true });
    }
    this.#drawAxes(right, bottom);
    this.#drawDial(right);
  }

  #drawAxes(right, bottom) {
    const { margin, axes } = this, f = this.unit.factor, [x0, y1] = this.toPlace(margin.left, margin.top), [x1, y0] = this.toPlace(right, bottom), step = roundStep((x1 - x0) * f, 7), nodes = [];
    nodes.push(svg('path', { class: 'frame', d: `M${margin.left} ${margin.top}H${right}V${bottom}H${margin.left}Z` }));
    const text = v => number(Math.abs(v) < 1e-9 * step ? 0 : v, 6);
    for (const v of multiples(x0 * f, x1 * f, step)) {
      const [u] = this.toScreen(v / f, 0);
      nodes.push(svg('path', { class: 'frame', d: `M${u.toFixed(1)} ${bottom}v5` }), svg('text', { x: u.toFixed(1), y: bottom + 18, 'text-anchor': 'middle' }, text(v)));
    }
    for (const v of multiples(y0 * f, y1 * f, step)) {
      const [, w] = this.toScreen(0, v / f);
      nodes.push(svg('path', { class: 'frame', d: `M${margin.left} ${w.toFixed(1)}h-5` }), svg('text', { x: margin.left - 8, y: (w + 4).toFixed(1), 'text-anchor': 'end' }, text(v)));
    }
    nodes.push(svg('text', { x: (margin.left + right) / 2, y: bottom + 34, 'text-anchor': 'middle' }, `x (${this.unit.unit})`), svg('text', { transform: `translate(14 ${(margin.top + bottom) / 2}) rotate(-90)`, 'text-anchor': 'middle' }, `y (${this.unit.unit})`));
    axes.replaceChildren(...nodes);
  }

  // The crystal axes beside the sheet: the longer line is a, the handle turns it.
  #drawDial(right) {
    const cx = right - AXIS_DIAL - 14, cy = this.margin.top + AXIS_DIAL + 14, angle = this.state.axis * Math.PI / 180, c = Math.cos(angle), s = Math.sin(angle), r = AXIS_DIAL;
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
      svg('text', { x: cx, y: cy + r + 26, 'text-anchor': 'middle' }, `axis ${number(this.state.axis, 5)}°`), handle);
    if (held) {
      handle.focus({ preventScroll: true });
    }
  }

  #drawLegend([low, high], q) {
    const { legend, width } = this, left = this.margin.left, right = width - 16, table = RAMPS[q.table], defs = svg('linearGradient', { id: 'stage-ramp' });
    for (let k = 0; k <= 32; k++) {
      defs.append(svg('stop', { offset: k / 32, 'stop-color': rgbText(table, k / 32) }));
    }
    const scale = scaleFor(Math.max(Math.abs(low), Math.abs(high)), q.unit), log = q.log && high > 0, axis = makeAxis(low * scale.factor, (high > low ? high : low + 1) * scale.factor, left, right, log);
    fill(legend, { width, height: 54, viewBox: `0 0 ${width} 54`, 'aria-label': `Colours: ${q.label} from ${quantity(low, q.unit)} to ${quantity(high, q.unit)}` }, []);
    legend.replaceChildren(svg('defs', null, defs), svg('rect', { x: left, y: 4, width: right - left, height: 13, fill: 'url(#stage-ramp)', class: 'frame-line' }));
    for (const v of axis.ticks) {
      const u = axis.at(v);
      if (u >= left - 1 && u <= right + 1) {
        legend.append(svg('path', { class: 'frame', d: `M${u.toFixed(1)} 17v4` }), svg('text', { x: u.toFixed(1), y: 33, 'text-anchor': 'middle' }, number(v, 5)));
      }
    }
    legend.append(svg('text', { x: left, y: 50 }, `${q.label} (${scale.unit})${log ? ', logarithmic' : ''}; lines every ${quantity(this.step, 'V')}`));
  }

  #where(e) {
    const box = this.stage.getBoundingClientRect();
    return [e.clientX - box.left, e.clientY - box.top];
  }

  #down(e) {
    if (e.button !== 0 || this.drag || !this.state) {
      return;
    }
    const [u, v] = this.#where(e), part = e.target.closest?.('[data-contact]'), place = this.toPlace(u, v);
    if (e.target.classList?.contains('axis-handle')) {
      e.target.focus({ preventScroll: true });
      this.drag = { what: 'axis', gesture: this.#gesture() };
    } else if (this.tool !== 'move') {
      this.act.place(this.tool, ...place);
      return;
    } else if (part) {
      part.focus({ preventScroll: true });
      const contact = this.state.contacts.find(c => c.name === part.dataset.contact);
      this.act.select(contact.name);
      this.drag = { what: 'contact', name: contact.name, offset: [contact.middle[0] - place[0], contact.middle[1] - place[1]], start: [u, v], gesture: this.#gesture() };
    } else if (this.zoom > 1) {
      this.drag = { what: 'pan', last: [u, v] };
    } else {
      this.act.select(null);
      return;
    }
    e.preventDefault();
    this.stage.setPointerCapture(e.pointerId);
  }

  #hover(e) {
    const { drag } = this;
    if (!drag) {
      return;
    }
    const [u, v] = this.#where(e);
    if (drag.what === 'pan') {
      this.panX += u - drag.last[0];
      this.panY += v - drag.last[1];
      drag.last = [u, v];
      this.draw();
    } else if (drag.what === 'axis') {
      const degrees = Math.atan2(this.centre[1] - v, u - this.centre[0]) * 180 / Math.PI;
      // Stays near the angle it had, so that 359 goes on to 360 and not back to 0.
      this.act.turn(Math.round(10 * (degrees + 360 * Math.round((this.state.axis - degrees) / 360))) / 10, drag.gesture);
    } else if (drag.moved || Math.hypot(u - drag.start[0], v - drag.start[1]) > 2) {
      drag.moved = true;
      const [x, y] = this.toPlace(u, v);
      this.act.move(drag.name, x + drag.offset[0], y + drag.offset[1], drag.gesture);
    }
  }

  #up(e) {
    if (this.drag) {
      this.drag = null;
      this.stage.releasePointerCapture?.(e.pointerId);
      this.show(this.state);
    }
  }

  #key(e, contact) {
    const step = this.state.size / this.zoom / (e.shiftKey ? 4000 : 400), to = { ArrowLeft: [-step, 0], ArrowRight: [step, 0], ArrowUp: [0, step], ArrowDown: [0, -step] }[e.key];
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
