// What lies over and beside the colours of a map: lines of current, rim, contacts, crossing lines, axes, legend. Drawn anew only when it changes.

/** Smaller side of the box around points. */
function spanOf(points) {
  const xs = points.filter((v, k) => k % 2 === 0), ys = points.filter((v, k) => k % 2 === 1);
  return Math.min(Math.max(...xs) - Math.min(...xs), Math.max(...ys) - Math.min(...ys));
}

class MapOverlay {
  /** @param view the map this belongs to. */
  constructor(view) {
    this.view = view;
    this.window = svg('rect', null);
    this.inside = svg('g', { 'clip-path': 'url(#map-clip)' });
    this.axes = svg('g', null);
    this.handles = svg('g', { class: 'screen' });
    this.overlay = svg('svg', { class: 'overlay' }, svg('defs', null, svg('clipPath', { id: 'map-clip' }, this.window)), this.inside, this.axes, this.handles);
    this.legend = svg('svg', { class: 'legend', role: 'img' });
  }

  /** Draws everything anew at the next call. */
  forget() {
    this.overlayKey = this.legendKey = null;
  }

  draw() {
    const key = [this.view.zoom, this.view.panX, this.view.panY, this.view.width, this.view.height, this.view.mapIndex, this.view.crossing.version, this.view.flow && this.view.fields.flow ? this.view.frameIndex : '', this.view.map.frames[0].roles || this.view.map.by === 'axis' ? this.view.frameIndex : '', this.view.cursor?.x, this.view.cursor?.y].join();
    if (key === this.overlayKey) {
      return;
    }
    this.overlayKey = key;
    const { map, margin, inner, fields } = this.view, { inside, axes } = this;
    fill(this.window, { x: margin.left, y: margin.top, width: inner.width, height: inner.height }, []);
    inside.replaceChildren();
    axes.replaceChildren();
    if (this.view.flow && fields.flow) {
      const d = fields.flow.map(line => this.view.pathOf(line)).join(''), arrows = fields.flow.map(line => this.#arrow(line)).join('');
      inside.append(
        svg('path', { d, fill: 'none', stroke: '#000', 'stroke-opacity': 0.45, 'stroke-width': 3 }), svg('path', { d, fill: 'none', stroke: '#fff', 'stroke-width': 1.3 }),
        svg('path', { d: arrows, fill: '#fff', stroke: '#000', 'stroke-opacity': 0.5, 'stroke-width': 0.7 }));
    }
    for (const loop of map.rim) {
      inside.append(svg('path', { class: 'rim', d: this.view.pathOf(loop) }));
    }
    const names = svg('g', { class: 'names' });
    map.contacts.forEach((c, number) => {
      const whole = this.view.roleOf(number), role = whole.replace(/[+-]$/, ''), sign = whole.endsWith('+') ? '+' : whole.endsWith('-') ? '−' : '';
      const d = c.kind === 'tip' ? null : this.view.pathOf(c.points), [u, v] = this.view.toScreen(...c.middle);
      if (d) {
        inside.append(svg('path', { class: 'halo', 'stroke-width': c.kind === 'pad' ? 4 : role ? 9 : 7, d }), svg('path', { class: `${c.kind === 'pad' ? 'pad ' : ''}metal ${role}`, 'stroke-width': c.kind === 'pad' ? 2 : role ? 6.5 : 4, d }));
      } else {
        inside.append(svg('circle', { class: `tip ${role}`, cx: u.toFixed(1), cy: v.toFixed(1), r: 4 }));
      }
      // Names of edges and outer tips go inwards, where there is room, those of large pads to their middle.
      const { extent } = this.view, [mu, mv] = this.view.toScreen(extent.cx, extent.cy), far = Math.hypot(mu - u, mv - v) || 1, word = { source: ' I+', drain: ' I−', along: ' ∥', across: ' ⊥' }[role] ?? '';
      const outer = Math.max(Math.abs(c.middle[0] - extent.cx) / extent.width, Math.abs(c.middle[1] - extent.cy) / extent.height) > 0.3;
      const size = c.kind === 'pad' ? this.view.fit * this.view.zoom * spanOf(c.points) : 0, turn = size > 30 ? 0 : c.kind === 'edge' || outer ? 1 : -1, du = turn * (mu - u) / far, dv = turn * (mv - v) / far;
      // A lying contact has its name at its end, beside the arm it may close; names on the crossing lines, as they lie at first, step aside.
      const [wide, tall] = c.kind === 'edge' ? this.#sizeOf(c.points) : [0, 0], beside = wide > 2 * tall && Math.abs(du) > 0.2;
      const aside = c.kind !== 'pad' && turn > 0 && Math.abs(dv) < 0.15 ? -10 : 0, x = beside ? u + Math.sign(du) * (wide / 2 + 7) : u + 10 * du + (turn > 0 && Math.abs(du) < 0.15 ? 8 : 0);
      names.append(svg('text', {
        class: `tag ${role}`, x: x.toFixed(1), y: (v + 16 * dv + 4 + aside).toFixed(1), 'text-anchor': beside ? du > 0 ? 'start' : 'end' : du > 0.4 || (turn > 0 && Math.abs(du) < 0.15) ? 'start' : du < -0.4 ? 'end' : 'middle',
      }, c.name + word + sign));
    });
    if (map.by !== 'current' && map.by !== 'phase') {
      this.#drawCrystal(names);
    }
    this.#drawCrossing(inside);
    inside.append(names);
    axes.append(...this.view.axisNodes());
    if (this.view.cursor) {
      const [u, v] = this.view.toScreen(this.view.cursor.x, this.view.cursor.y);
      inside.append(svg('path', { class: 'cross screen', d: `M${u - 12} ${v}H${u - 4}M${u + 4} ${v}H${u + 12}M${u} ${v - 12}V${v - 4}M${u} ${v + 4}V${v + 12}` }));
    }
  }

  /** Width and height of points in pixels. */
  #sizeOf(points) {
    const { width, height } = extentOf([points]), s = this.view.fit * this.view.zoom;
    return [width * s, height * s];
  }

  #arrow(line) {
    const k = 2 * Math.floor(line.length / 4);
    if (k < 2 || k + 2 >= line.length) {
      return '';
    }
    const [u, v] = this.view.toScreen(line[k], line[k + 1]), [u0, v0] = this.view.toScreen(line[k - 2], line[k - 1]), size = Math.hypot(u - u0, v - v0) || 1;
    const c = (u - u0) / size, s = (v - v0) / size, at = (p, q) => `${(u + p * c - q * s).toFixed(1)} ${(v + p * s + q * c).toFixed(1)}`;
    return `M${at(6, 0)}L${at(-5, 4.5)}L${at(-2.5, 0)}L${at(-5, -4.5)}Z`;
  }

  // The crystal axes, in the upper left corner.
  #drawCrystal(names) {
    const { margin } = this.view, { cos, sin } = this.view.fields.law, u = margin.left + 34, v = margin.top + 40;
    [[cos, sin, 'a'], [-sin, cos, 'b']].forEach(([c, s, name]) => {
      const d = `M${(u - 20 * c).toFixed(1)} ${(v + 20 * s).toFixed(1)}L${(u + 20 * c).toFixed(1)} ${(v - 20 * s).toFixed(1)}`;
      names.append(svg('path', { class: 'halo', 'stroke-width': 4, d }), svg('path', { class: 'ink', 'stroke-width': 1.5, 'stroke-dasharray': name === 'b' ? '3 3' : null, d }), svg('text', { class: 'tag', x: (u + 28 * c).toFixed(1), y: (v - 28 * s + 4).toFixed(1), 'text-anchor': 'middle' }, name));
    });
  }

  #drawCrossing(inside) {
    const { crossing } = this.view;
    [0, 1].forEach(line => {
      const { points } = crossing.lines[line], a = points[0], b = points[points.length - 1], [u0, v0] = this.view.toScreen(a.x, a.y), [u1, v1] = this.view.toScreen(b.x, b.y);
      const d = `M${u0.toFixed(1)} ${v0.toFixed(1)}L${u1.toFixed(1)} ${v1.toFixed(1)}`, dash = line ? '3 4' : '10 4';
      inside.append(svg('path', { d, stroke: '#000', 'stroke-opacity': 0.5, 'stroke-width': 3 }), svg('path', { d, stroke: '#fff', 'stroke-width': 1.8, 'stroke-dasharray': dash }));
      const [c, s] = crossing.along(line), [u, v] = this.view.toScreen(crossing.x + 0.74 * crossing.lines[line].high * c, crossing.y + 0.74 * crossing.lines[line].high * s);
      inside.append(svg('text', { class: 'tag', x: (u + 11 * s).toFixed(1), y: (v + 4 + 11 * c).toFixed(1), 'text-anchor': 'middle' }, String(line + 1)));
    });
    const [c, s] = crossing.along(0), reach = 0.55 * crossing.lines[0].high;
    const place = (node, x, y, text) => {
      const [u, v] = this.view.toScreen(x, y);
      node.setAttribute('cx', u.toFixed(1));
      node.setAttribute('cy', v.toFixed(1));
      node.setAttribute('aria-valuetext', text);
    };
    const mm = v => number(v * this.view.unit.factor, 4);
    place(this.moveHandle, crossing.x, crossing.y, `x ${mm(crossing.x)}, y ${mm(crossing.y)} ${this.view.unit.unit}`);
    place(this.turnHandle, crossing.x + reach * c, crossing.y + reach * s, `${number(crossing.angle, 5)} degrees`);
    this.turnHandle.setAttribute('aria-valuenow', crossing.angle.toFixed(2));
    this.turnHandle.setAttribute('aria-valuemin', 0);
    this.turnHandle.setAttribute('aria-valuemax', 360);
    this.moveHandle.setAttribute('aria-valuenow', mm(crossing.x).replace('−', '-'));
    for (const [box, value] of [[this.view.crossX, crossing.x * this.view.unit.factor], [this.view.crossY, crossing.y * this.view.unit.factor], [this.view.crossA, crossing.angle]]) {
      if (document.activeElement !== box.input) {
        box.input.value = Number(value.toFixed(4));
      }
    }
  }

  drawLegend([low, high], q) {
    const key = [low, high, this.view.name, this.view.step, this.view.levels && this.view.fields.frame.high > this.view.fields.frame.low, this.view.width].join();
    if (key === this.legendKey) {
      return;
    }
    this.legendKey = key;
    rampLegend(this.legend, 'map-ramp', {
      low, high, unit: q.unit, log: q.log && high > 0, table: RAMPS[q.table], label: q.label, width: this.view.width, left: this.view.margin.left,
      words: this.view.levels && this.view.fields.frame.high > this.view.fields.frame.low ? `; lines every ${quantity(this.view.step, 'V')}` : '',
    });
  }
}
