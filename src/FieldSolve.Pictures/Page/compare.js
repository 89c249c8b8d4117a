// A measured map beside the computed one and their difference: three maps of one view with one cursor.

// Blue through pale to orange, equally dark at both ends; told apart by the colour-blind, the sign by hue and the size by lightness (OKLab, as in colours.js).
const DIVERGING = (() => {
  const table = new Uint8Array(256 * 3);
  for (let i = 0; i < 256; i++) {
    const t = (i - 127.5) / 127.5, size = Math.abs(t);
    table.set(fromOklch(0.96 - 0.54 * size, 0.145 * Math.min(1, 1.25 * size), t < 0 ? 252 : 52), 3 * i);
  }
  return table;
})();

/** The points of a map in boxes, for the nearest one to a place. */
class PointGrid {
  constructor(x, y, reach) {
    Object.assign(this, { x, y, reach });
    this.x0 = Math.min(...sampled(x, Math.min));
    this.y0 = Math.min(...sampled(y, Math.min));
    this.columns = Math.floor((Math.max(...sampled(x, Math.max)) - this.x0) / reach) + 1;
    this.rows = Math.floor((Math.max(...sampled(y, Math.max)) - this.y0) / reach) + 1;
    this.boxes = new Map();
    x.forEach((v, k) => {
      const box = this.#box(v, y[k]);
      this.boxes.has(box) ? this.boxes.get(box).push(k) : this.boxes.set(box, [k]);
    });
  }

  #box(x, y) {
    return Math.floor((y - this.y0) / this.reach) * (this.columns + 2) + Math.floor((x - this.x0) / this.reach);
  }

  /** Number of the nearest point within reach; -1 for none. */
  nearest(px, py) {
    const i = Math.floor((px - this.x0) / this.reach), j = Math.floor((py - this.y0) / this.reach);
    let best = -1, least = this.reach * this.reach;
    for (let b = j - 1; b <= j + 1; b++) {
      for (let a = i - 1; a <= i + 1; a++) {
        if (a < 0 || b < 0 || a >= this.columns || b >= this.rows) {
          continue;
        }
        for (const k of this.boxes.get(b * (this.columns + 2) + a) ?? []) {
          const dx = this.x[k] - px, dy = this.y[k] - py, d = dx * dx + dy * dy;
          if (d < least) {
            [best, least] = [k, d];
          }
        }
      }
    }
    return best;
  }
}

// Least or greatest of each thousand: a spread call takes no more arguments than that safely.
function sampled(values, pick) {
  const out = [];
  for (let i = 0; i < values.length; i += 1000) {
    out.push(pick(...values.subarray(i, i + 1000)));
  }
  return out;
}

class ComparePanel {
  /** @param view the comparison; key of the panel; its title. */
  constructor(view, key, title) {
    Object.assign(this, { view, key, title });
    this.canvas = html('canvas', { 'aria-hidden': 'true' });
    this.window = svg('rect', null);
    this.inside = svg('g', { 'clip-path': `url(#clip-${key})` });
    this.axes = svg('g', null);
    this.mark = svg('g', { class: 'screen' });
    this.overlay = svg('svg', { class: 'overlay' }, svg('defs', null, svg('clipPath', { id: `clip-${key}` }, this.window)), this.inside, this.axes, this.mark);
    this.stage = html('div', {
      class: 'stage', tabindex: 0, role: 'application', 'aria-roledescription': 'map', onkeydown: e => view.key(e),
      onpointermove: e => this.#point(e), onpointerdown: e => this.#point(e), onpointerleave: e => { if (e.pointerType === 'mouse') { view.read(null); } },
    }, this.canvas, this.overlay);
    this.value = html('output', { class: 'num', 'aria-live': 'off' });
    this.legend = svg('svg', { class: 'legend', role: 'img' });
    this.box = html('div', { class: 'panel' }, html('h3', null, title, ' ', this.value), html('div', { class: 'stage-frame' }, this.stage), this.legend);
  }

  #point(e) {
    const box = this.stage.getBoundingClientRect();
    this.view.read(this.view.toPlace(e.clientX - box.left, e.clientY - box.top));
  }
}

class Comparison {
  /** @param host element; spec of the data block; meshes of the page. */
  constructor(host, spec, meshes) {
    Object.assign(this, { host, spec, mesh: meshes[spec.mesh], cursor: null, residual: 'own', stacked: false });
    const all = doublesOf(spec.points), part = k => all.subarray(k * spec.count, (k + 1) * spec.count);
    [this.x, this.y, this.measured, this.computed, this.sigma, this.weight, this.patch] = [0, 1, 2, 3, 4, 5, 6].map(part);
    this.difference = this.measured.map((v, k) => v - this.computed[k]);
    this.grid = new PointGrid(this.x, this.y, spec.reach);
    // The computed map at its nodes, as the probe would show it.
    const raw = new Uint32Array(bytesOf(spec.values).buffer), step = (spec.high - spec.low) / 4294967295;
    this.nodes = Float64Array.from(raw, v => spec.low + v * step);
    this.floats = Float32Array.from(this.nodes);
    this.extent = extentOf([...spec.rim, ...spec.contacts.map(c => c.points)]);
    this.unit = scaleFor(this.mesh.box.diagonal / 2, 'm');
    this.#build();
    this.draw = perFrame(() => this.drawNow());
    this.#size();
    new ResizeObserver(perFrame(() => this.#size())).observe(this.frame);
    for (const when of ['beforeprint', 'afterprint']) {
      addEventListener(when, () => this.#size());
    }
    this.read(null);
  }

  #build() {
    const { spec } = this, words = [['own', 'own span'], ['maps', 'span of the maps'], ['sigma', 'standard deviations'], ...(spec.hasPatch ? [['patch', 'own span, patch taken out']] : [])];
    this.scaleChoice = choice('Residual in colours of', words, 'own', v => { this.residual = v; this.draw(); });
    this.panels = [new ComparePanel(this, 'measured', 'Measured'), new ComparePanel(this, 'computed', 'Computed'), new ComparePanel(this, 'residual', 'Residual')];
    this.frame = html('div', { class: 'three' }, ...this.panels.map(p => p.box));
    this.readout = html('output', { class: 'readout', 'aria-live': 'polite' });
    const bar = html('div', { class: 'bar' }, this.scaleChoice, tick('below one another', false, on => {
      this.stacked = on;
      this.frame.classList.toggle('stacked', on);
      this.#size();
    }), saveButtons({ label: () => 'maps', name: () => fileName(document.title, 'maps') }, () => this.#paper(), () => this.#csv()));
    this.host.append(bar, this.frame, this.readout, html('p', { class: 'note-line' }, spec.note));
    const view = new MeshCanvas(this.panels[1].canvas, this.mesh, new URLSearchParams(location.hash.slice(1)).get('draw') ?? '');
    this.view = view;
    this.panels[1].canvas = view.canvas;
  }

  #size() {
    const width = Math.max(200, this.panels[0].stage.parentElement.clientWidth), box = this.extent, margin = { left: 42, right: 6, top: 8, bottom: 34 };
    const room = width - margin.left - margin.right, scale = Math.min((room - 16) / box.width, Math.max(200, Math.min(520, innerHeight * 0.6)) / box.height);
    const inner = { width: room, height: Math.max(90, Math.round(box.height * scale + 16)) };
    Object.assign(this, { margin, inner, scale, width, height: inner.height + margin.top + margin.bottom });
    for (const p of this.panels) {
      fill(p.overlay, { width, height: this.height, viewBox: `0 0 ${width} ${this.height}` }, []);
      for (const [name, value] of [['width', inner.width], ['height', inner.height], ['left', margin.left], ['top', margin.top]]) {
        p.canvas.style[name] = value + 'px';
      }
      p.stage.style.height = this.height + 'px';
    }
    this.drawNow();
  }

  /** Pixels of a stage for a place, and back. */
  toScreen(x, y) {
    return [this.margin.left + this.inner.width / 2 + this.scale * (x - this.extent.cx), this.margin.top + this.inner.height / 2 - this.scale * (y - this.extent.cy)];
  }

  toPlace(u, v) {
    return [this.extent.cx + (u - this.margin.left - this.inner.width / 2) / this.scale, this.extent.cy - (v - this.margin.top - this.inner.height / 2) / this.scale];
  }

  #span() {
    const { spec } = this;
    switch (this.residual) {
      case 'maps': return { values: this.difference, most: (spec.to - spec.from) / 2, unit: spec.unit, label: 'measured − computed' };
      case 'sigma': return { values: this.difference.map((v, k) => v / this.sigma[k]), most: spec.mostSigma, unit: '', label: 'residual in standard deviations' };
      case 'patch': return { values: this.difference.map((v, k) => v - this.patch[k]), most: spec.mostRest, unit: spec.unit, label: 'residual beside the patch' };
      default: return { values: this.difference, most: spec.most, unit: spec.unit, label: 'measured − computed' };
    }
  }

  drawNow() {
    const { spec, inner, margin, mesh, view } = this, ratio = Math.min(2, devicePixelRatio || 1), ramp = RAMPS[spec.table], shown = this.#span();
    this.#findCells(ratio);
    this.#cells(this.panels[0], this.measured, spec.from, spec.to, ramp);
    this.#cells(this.panels[2], shown.values, -shown.most, shown.most, DIVERGING);
    view.show({ values: this.floats, low: spec.from, high: spec.to, table: ramp, potential: null, step: 1 });
    const [u, v] = this.toScreen(mesh.box.cx, mesh.box.cy);
    view.look(inner.width, inner.height, ratio, this.scale, u - margin.left, v - margin.top);
    view.draw();
    this.panels.forEach((p, k) => {
      this.#outline(p, k === 2);
      k < 2 ? this.#legend(p, spec.from, spec.to, spec.unit, spec.quantity, ramp) : this.#legend(p, -shown.most, shown.most, shown.unit, shown.label, DIVERGING);
      p.stage.setAttribute('aria-label', `${p.title} map of ${spec.quantity}. Arrow keys move the reading point in all three maps, with Shift in small steps; Escape takes it away.`);
    });
    this.#marks();
  }

  // Every pixel takes the nearest point within reach: squares for a raster, also a turned one.
  #findCells(ratio) {
    const w = Math.max(1, Math.round(this.inner.width * ratio)), h = Math.max(1, Math.round(this.inner.height * ratio)), key = [w, h, this.scale].join();
    if (key !== this.cellKey) {
      this.cellKey = key;
      this.owner = new Int32Array(w * h);
      for (let j = 0, n = 0; j < h; j++) {
        for (let i = 0; i < w; i++, n++) {
          const [x, y] = this.toPlace(this.margin.left + (i + 0.5) * this.inner.width / w, this.margin.top + (j + 0.5) * this.inner.height / h);
          this.owner[n] = this.grid.nearest(x, y);
        }
      }
      this.cells = { w, h };
    }
  }

  #cells(panel, values, low, high, table) {
    const { w, h } = this.cells, pen = panel.canvas.getContext('2d');
    panel.canvas.width = w;
    panel.canvas.height = h;
    const image = pen.createImageData(w, h), pixels = image.data, span = 255 / (high - low || 1);
    for (let n = 0; n < this.owner.length; n++) {
      const k = this.owner[n];
      if (k >= 0) {
        const c = 3 * Math.max(0, Math.min(255, Math.round((values[k] - low) * span)));
        pixels[4 * n] = table[c];
        pixels[4 * n + 1] = table[c + 1];
        pixels[4 * n + 2] = table[c + 2];
        pixels[4 * n + 3] = 255;
      }
    }
    // Cells end at the rim: painted through it from a canvas of their own, since pixels that are put ignore it.
    const own = html('canvas', { width: w, height: h }), rim = new Path2D(), { margin, inner } = this;
    own.getContext('2d').putImageData(image, 0, 0);
    for (const loop of this.spec.rim) {
      for (let i = 0; i < loop.length; i += 2) {
        const [u, v] = this.toScreen(loop[i], loop[i + 1]), at = [(u - margin.left) * w / inner.width, (v - margin.top) * h / inner.height];
        i ? rim.lineTo(...at) : rim.moveTo(...at);
      }
      rim.closePath();
    }
    pen.save();
    pen.clip(rim, 'evenodd');
    pen.drawImage(own, 0, 0);
    pen.restore();
  }

  #path(points) {
    let d = '';
    for (let i = 0; i < points.length; i += 2) {
      const [u, v] = this.toScreen(points[i], points[i + 1]);
      d += `${i ? 'L' : 'M'}${u.toFixed(1)} ${v.toFixed(1)}`;
    }
    return d;
  }

  #outline(panel, places) {
    const { spec, margin, inner } = this, { inside, axes } = panel, right = margin.left + inner.width, bottom = margin.top + inner.height, f = this.unit.factor;
    fill(panel.window, { x: margin.left, y: margin.top, width: inner.width, height: inner.height }, []);
    inside.replaceChildren(...spec.rim.map(loop => svg('path', { class: 'rim', d: this.#path(loop) })));
    for (const c of spec.contacts) {
      const role = c.role.replace(/[+-]$/, ''), [u, v] = this.toScreen(...c.middle);
      if (c.kind === 'tip') {
        inside.append(svg('circle', { class: `tip ${role}`, cx: u.toFixed(1), cy: v.toFixed(1), r: 3 }));
      } else {
        const d = this.#path(c.points);
        inside.append(svg('path', { class: 'halo', 'stroke-width': 6, d }), svg('path', { class: `${c.kind === 'pad' ? 'pad ' : ''}metal ${role}`, 'stroke-width': c.kind === 'pad' ? 1.5 : 3.5, d }));
      }
      if (role === 'source' || role === 'drain') {
        const [mu, mv] = this.toScreen(this.extent.cx, this.extent.cy), far = Math.hypot(mu - u, mv - v) || 1, du = (mu - u) / far, dv = (mv - v) / far;
        inside.append(svg('text', { class: `tag ${role}`, x: (u + 9 * du).toFixed(1), y: (v + 14 * dv + 4).toFixed(1), 'text-anchor': du > 0.4 ? 'start' : du < -0.4 ? 'end' : 'middle' }, role === 'source' ? 'I+' : 'I−'));
      }
    }
    if (places) {
      for (const p of spec.places) {
        const [u, v] = this.toScreen(p.x, p.y), r = Math.max(6, 1.6 * p.radius * this.scale);
        inside.append(svg('circle', { class: 'halo', 'stroke-width': 3.5, cx: u.toFixed(1), cy: v.toFixed(1), r: r.toFixed(1) }), svg('circle', { class: 'ring', cx: u.toFixed(1), cy: v.toFixed(1), r: r.toFixed(1) }));
      }
    }
    axes.replaceChildren();
    const [x0, y1] = this.toPlace(margin.left, margin.top), [x1, y0] = this.toPlace(right, bottom), step = roundStep((x1 - x0) * f, inner.width / 60);
    for (const x of multiples(x0 * f, x1 * f, step)) {
      const [u] = this.toScreen(x / f, 0);
      axes.append(svg('path', { class: 'frame', d: `M${u.toFixed(1)} ${bottom}v4` }), svg('text', { x: u.toFixed(1), y: bottom + 16, 'text-anchor': 'middle' }, number(Math.abs(x) < 1e-9 * step ? 0 : x, 6)));
    }
    for (const y of multiples(y0 * f, y1 * f, step)) {
      const [, v] = this.toScreen(0, y / f);
      axes.append(svg('path', { class: 'frame', d: `M${margin.left} ${v.toFixed(1)}h-4` }), svg('text', { x: margin.left - 7, y: (v + 4).toFixed(1), 'text-anchor': 'end' }, number(Math.abs(y) < 1e-9 * step ? 0 : y, 6)));
    }
    axes.append(svg('path', { class: 'frame', d: `M${margin.left} ${margin.top}V${bottom}H${right}V${margin.top}Z` }), svg('text', { x: right, y: bottom + 31, 'text-anchor': 'end' }, `x, y (${this.unit.unit})`));
  }

  #legend(panel, low, high, unit, label, table) {
    const { legend, key } = panel, left = this.margin.left, right = this.width - 14, scale = scaleFor(Math.max(Math.abs(low), Math.abs(high)), unit), defs = svg('linearGradient', { id: `ramp-${key}` });
    for (let k = 0; k <= 32; k++) {
      defs.append(svg('stop', { offset: k / 32, 'stop-color': rgbText(table, k / 32) }));
    }
    const axis = makeAxis(low * scale.factor, (high > low ? high : low + 1) * scale.factor, left, right, false);
    fill(legend, { width: this.width, height: 50, viewBox: `0 0 ${this.width} 50`, 'aria-label': `Colours: ${label} from ${quantity(low, unit)} to ${quantity(high, unit)}` }, []);
    legend.replaceChildren(svg('defs', null, defs), svg('rect', { x: left, y: 3, width: right - left, height: 11, fill: `url(#ramp-${key})`, class: 'frame-line' }));
    for (const v of axis.ticks.filter(t => axis.at(t) >= left - 1 && axis.at(t) <= right + 1)) {
      legend.append(svg('path', { class: 'frame', d: `M${axis.at(v).toFixed(1)} 14v4` }), svg('text', { x: axis.at(v).toFixed(1), y: 30, 'text-anchor': 'middle' }, number(v, 5)));
    }
    legend.append(svg('text', { x: left, y: 46 }, `${label}${scale.unit ? ` (${scale.unit})` : ''}`));
  }

  /** Puts the reading point of all three maps at [x, y] in metres; null takes it away. */
  read(place, aloud = false) {
    this.cursor = place ? { x: place[0], y: place[1], point: this.grid.nearest(place[0], place[1]) } : null;
    // Said aloud only when the keys move the point: a mouse would chatter.
    this.readout.setAttribute('aria-live', aloud ? 'polite' : 'off');
    this.#write();
    this.#marks();
  }

  /** Keys on any of the three. */
  key(e) {
    const { box } = this.mesh, step = e.shiftKey ? box.diagonal / 500 : box.diagonal / 50, { x, y } = this.cursor ?? { x: box.cx, y: box.cy };
    const to = { ArrowLeft: [x - step, y], ArrowRight: [x + step, y], ArrowUp: [x, y + step], ArrowDown: [x, y - step], Home: [box.cx, box.cy], Escape: null }[e.key];
    if (to === undefined) {
      return;
    }
    e.preventDefault();
    this.read(to, true);
  }

  #marks() {
    for (const p of this.panels) {
      p.mark.replaceChildren();
      if (!this.cursor) {
        continue;
      }
      const { x, y, point } = this.cursor, [u, v] = this.toScreen(x, y), { margin, inner } = this, right = margin.left + inner.width, bottom = margin.top + inner.height;
      if (u < margin.left || u > right || v < margin.top || v > bottom) {
        continue;
      }
      p.mark.append(svg('path', { class: 'hair', d: `M${margin.left} ${v.toFixed(1)}H${right}M${u.toFixed(1)} ${margin.top}V${bottom}` }));
      if (point >= 0) {
        const [pu, pv] = this.toScreen(this.x[point], this.y[point]);
        p.mark.append(svg('circle', { class: 'halo', 'stroke-width': 4, cx: pu.toFixed(1), cy: pv.toFixed(1), r: 5 }), svg('circle', { class: 'cursor', cx: pu.toFixed(1), cy: pv.toFixed(1), r: 5 }));
      }
    }
  }

  #write() {
    const { spec, unit, readout } = this, [m, c, r] = this.panels.map(p => p.value), f = unit.factor, fixed = v => v.toFixed(4).replace('-', '−');
    const item = (name, value) => html('span', { class: 'item' }, html('b', null, name), ' ', html('span', { class: 'num' }, value));
    for (const out of [m, c, r]) {
      out.textContent = '';
    }
    if (!this.cursor) {
      readout.replaceChildren('Point at a map, touch it, or move over it with the arrow keys: the same place is read in all three.');
      return;
    }
    const { x, y, point } = this.cursor, at = this.mesh.locate(x, y);
    if (point < 0) {
      const place = item('at', `(${fixed(x * f)}, ${fixed(y * f)}) ${unit.unit}`);
      c.textContent = at ? reading(this.mesh.value(this.nodes, at), spec.unit, 5) : '';
      readout.replaceChildren(place, html('span', { class: 'item' }, at ? 'nothing was measured here' : 'outside the sheet'));
      return;
    }
    m.textContent = reading(this.measured[point], spec.unit, 5);
    c.textContent = reading(this.computed[point], spec.unit, 5);
    r.textContent = reading(this.difference[point], spec.unit, 4);
    readout.replaceChildren(
      item('point at', `(${fixed(this.x[point] * f)}, ${fixed(this.y[point] * f)}) ${unit.unit}`), item('measured', m.textContent), item('computed', c.textContent), item('residual', r.textContent),
      ...(spec.hasPatch ? [item('beside the patch', reading(this.difference[point] - this.patch[point], spec.unit, 4))] : []),
      item('in standard deviations', number(this.difference[point] / this.sigma[point], 3)), item('weight', number(this.weight[point], 3)), item('line', String(this.spec.lines[point])));
  }

  #paper() {
    this.drawNow();
    const { width, height, margin, inner } = this, all = svg('svg', { width: 3 * width, height: height + 76, viewBox: `0 0 ${3 * width} ${height + 76}` });
    let images = '';
    this.panels.forEach((p, k) => {
      images += `<image x="${k * width + margin.left}" y="${margin.top + 22}" width="${inner.width}" height="${inner.height}" href="${p.canvas.toDataURL('image/png')}"/>`;
      const map = p.overlay.cloneNode(true), legend = p.legend.cloneNode(true);
      map.lastChild.remove();
      all.append(svg('text', { class: 'title', x: k * width + margin.left, y: 16 }, p.title), svg('g', { transform: `translate(${k * width} 22)` }, ...map.childNodes), svg('g', { transform: `translate(${k * width} ${height + 24})` }, ...legend.childNodes));
    });
    return paperSvg(all, this.spec.title, images);
  }

  #csv() {
    const { spec } = this, rows = [['sheet_x_m', 'sheet_y_m', `value_${spec.column}`, `sigma_${spec.column}`, `model_${spec.column}`, `residual_${spec.column}`, 'residual_sigma', 'weight', 'line']];
    for (let k = 0; k < spec.count; k++) {
      rows.push([this.x[k], this.y[k], this.measured[k], this.sigma[k], this.computed[k], this.difference[k], this.difference[k] / this.sigma[k], this.weight[k], spec.lines[k]]);
    }
    return rows;
  }
}
