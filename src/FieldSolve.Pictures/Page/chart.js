// Curves as SVG: error bars, fit lines, log axes, points that can be clicked or reached by the arrow keys.

// Okabe-Ito without the yellow that vanishes on paper (M. Okabe and K. Ito, Color Universal Design, 2008). The style sheet has the same
// colours, lighter ones for the dark page.
const SERIES = ['#0072B2', '#D55E00', '#009E73', '#CC79A7', '#E69F00', '#56B4E9', '#222222'];
const DASHES = ['', '8 4', '2 3', '10 3 2 3', '15 5'];
const MARKERS = [
  s => `M${-s} 0a${s} ${s} 0 1 0 ${2 * s} 0a${s} ${s} 0 1 0 ${-2 * s} 0z`,
  s => `M${-s} ${-s}h${2 * s}v${2 * s}h${-2 * s}z`,
  s => `M0 ${-1.2 * s}L${1.15 * s} ${0.9 * s}H${-1.15 * s}z`,
  s => `M0 ${-1.35 * s}L${1.35 * s} 0L0 ${1.35 * s}L${-1.35 * s} 0z`,
  s => `M0 ${1.2 * s}L${1.15 * s} ${-0.9 * s}H${-1.15 * s}z`,
];
const PAPER = `text{font:12px "DejaVu Sans",Verdana,Geneva,sans-serif;fill:#222}.grid{stroke:#ddd}.frame{stroke:#666;fill:none}.ink{stroke:#222}.inkfill{fill:#222}
.ring{fill:none;stroke:#222;stroke-width:1.3}.now{fill:none;stroke:#222;stroke-width:2}.title{font-weight:600}.tag{paint-order:stroke;stroke:#fff;stroke-width:3px}.rim{fill:none;stroke:#222;stroke-width:1.4}
.metal{fill:none;stroke:#222;stroke-width:4}.pad{fill:none;stroke-width:2}.halo{fill:none;stroke:#fff}.source{stroke:#D55E00;fill:#D55E00}.drain{stroke:#0072B2;fill:#0072B2}
.along{stroke:#00795A;fill:#00795A}.across{stroke:#A0517E;fill:#A0517E}.tag.source,.tag.drain,.tag.along,.tag.across{stroke:#fff}path.source,path.drain,path.along,path.across{fill:none}` + SERIES.map((c, k) => `.s${k}{stroke:${c}}.f${k}{fill:${c}}`).join('') + 'text.on{fill:#fff}.self{fill:#ddd}.sheet{fill:#f1f3f2;stroke:#222;stroke-width:1.4}.amount{fill:#222}';

const strokeOf = look => ({ class: `s${look % SERIES.length}` });
const fillOf = look => ({ class: `f${look % SERIES.length}` });
const markerPath = (look, size) => MARKERS[look % MARKERS.length](size);
const dashOf = look => DASHES[look % DASHES.length] || null;

/** An SVG element as a file of its own: light colours, a title, white paper. */
function paperSvg(picture, title, extra = '') {
  const copy = picture.cloneNode(true), width = Number(picture.getAttribute('width')), height = Number(picture.getAttribute('height')), top = title ? 26 : 0;
  for (const node of copy.querySelectorAll('.screen')) {
    node.remove();
  }
  const inner = new XMLSerializer().serializeToString(copy).replace(/^<svg[^>]*>/, '').replace(/<\/svg>$/, '');
  const head = title ? new XMLSerializer().serializeToString(svg('text', { x: 12, y: 18, class: 'title' }, title)) : '';
  const text = `<svg xmlns="${SVG}" width="${width}" height="${height + top}" viewBox="0 ${-top} ${width} ${height + top}"><style>${PAPER}</style>`
    + `<rect x="0" y="${-top}" width="${width}" height="${height + top}" fill="#fff"/><g transform="translate(0 ${-top})">${head}</g>${extra}${inner}</svg>`;
  return { text, width, height: height + top };
}

/** A linear or logarithmic axis over a range of the screen; linear ticks at multiples of a step, round ones by default. */
function makeAxis(low, high, from, to, log, wanted) {
  if (log) {
    const a = Math.log10(low), b = Math.log10(high) > a ? Math.log10(high) : a + 1, at = v => from + (to - from) * (Math.log10(v) - a) / (b - a), ticks = [];
    for (let p = Math.floor(a); p <= Math.ceil(b); p++) {
      for (const lead of b - a < 1.2 ? [1, 2, 3, 5, 7] : b - a < 2.6 ? [1, 2, 5] : [1]) {
        const v = lead * Math.pow(10, p);
        if (v >= low * 0.9999 && v <= high * 1.0001) {
          ticks.push(v);
        }
      }
    }
    // Too few of them fall into a short range: even steps of the value itself, which crowd at its upper end, so some are left out there.
    const even = () => multiples(low, high, roundStep(high - low, Math.max(2, Math.abs(to - from) / 80))).map(v => Number(v.toPrecision(12)));
    const apart = list => list.reduce((kept, v) => kept.length && Math.abs(at(v) - at(kept[kept.length - 1])) < (from < to ? 54 : 16) ? kept : [...kept, v], []);
    return { at, ticks: ticks.length > 2 || !(high > low) ? ticks : apart(even()) };
  }
  const span = high > low ? high - low : Math.abs(low) || 1, a = high > low ? low : low - span / 2;
  const step = wanted ?? roundStep(span, Math.max(2, Math.abs(to - from) / (from < to ? 80 : 46)));
  return { at: v => from + (to - from) * (v - a) / span, ticks: multiples(a, a + span, step).map(v => Math.abs(v) < 1e-9 * step ? 0 : Number(v.toPrecision(12))) };
}

class Chart {
  /**
   * @param host element to fill.
   * @param spec { id, title, note, views: [{ label, x, xUnit, y, yUnit, series }] }.
   * @param pick called with (map, frame) when a point is chosen.
   */
  constructor(host, spec, pick) {
    const log = spec.views[0].logarithmic;
    Object.assign(this, { spec, pick, view: spec.views[0], logX: log, logY: log, hidden: new Set(), cursor: null, now: {} });
    const what = { label: () => spec.title, name: () => fileName(document.title, spec.id, this.view.label) };
    this.plot = svg('svg', {
      class: 'plot', tabindex: 0, role: 'application', 'aria-roledescription': 'chart', onkeydown: e => this.#key(e), onblur: () => this.#point(null), onfocus: () => this.#speak(),
      onpointermove: e => this.#hover(e), onpointerdown: e => this.#hover(e), onpointerleave: e => { if (e.pointerType === 'mouse') { this.#point(null); } },
    });
    this.spoken = html('output', { class: 'spoken', 'aria-live': 'polite' });
    this.key = html('div', { class: 'key', role: 'group', 'aria-label': 'Curves shown' });
    const bar = html('div', { class: 'bar' });
    if (spec.views.length > 1) {
      bar.append(choice('Show', spec.views.map((v, k) => [String(k), v.label]), '0', k => {
        this.view = spec.views[Number(k)];
        this.cursor = null;
        this.#makeKey();
        this.draw();
      }));
    }
    if (spec.views.every(v => v.kind === 'curve')) {
      bar.append(tick('log x', log, on => { this.logX = on; this.draw(); }),
      tick('log y', log, on => { this.logY = on; this.draw(); }));
    }
    bar.append(saveButtons(what, () => paperSvg(this.plot, `${spec.title}: ${this.view.label}`), () => this.#csv()));
    host.append(html('h3', null, spec.title), bar, html('div', null, this.plot), this.spoken, this.key);
    if (spec.note) {
      host.append(html('p', { class: 'note-line' }, spec.note, !spec.views.some(v => v.series.some(s => s.map)) ? '' : html('span', { class: 'hint' }, ' Click a point, or go to it with the arrow keys and press Enter, to see its map.')));
    }
    this.#makeKey();
    new ResizeObserver(perFrame(() => this.draw())).observe(host);
    for (const when of ['beforeprint', 'afterprint']) {
      addEventListener(when, () => this.draw());
    }
    this.draw();
  }

  #makeKey() {
    this.key.replaceChildren();
    if (this.view.kind === 'matrix') {
      this.key.append(...matrixKey());
      return;
    }
    for (const s of this.view.series) {
      const { name } = s;
      const sample = svg('svg', { width: 34, height: 14, 'aria-hidden': 'true' },
        this.view.kind !== 'curve' && s.x.length ? svg('rect', { x: 8, y: 1, width: 18, height: 12, ...fillOf(s.look) })
          : s.curve && !s.curve[0].length ? '' : svg('path', { d: 'M1 7H33', fill: 'none', 'stroke-width': 2, 'stroke-dasharray': dashOf(s.look), ...strokeOf(s.look) }),
        this.view.kind === 'curve' && s.x.length ? svg('path', { d: markerPath(s.look, 4), transform: 'translate(17 7)', ...fillOf(s.look) }) : '');
      const button = html('button', {
        type: 'button', 'aria-pressed': String(!this.hidden.has(name)), onclick: () => {
          const on = !this.hidden.delete(name);
          if (on) {
            this.hidden.add(name);
          }
          button.setAttribute('aria-pressed', String(!on));
          this.draw();
        },
      }, sample, html('span', null, name));
      if (s.lineText) {
        button.append(html('span', { class: 'fit' }, s.lineText));
      }
      this.key.append(button);
    }
  }

  #shown() {
    return this.view.series.filter(s => !this.hidden.has(s.name));
  }

  draw() {
    const width = Math.max(260, Math.round(this.plot.parentElement.clientWidth || 600)), height = Math.round(Math.max(230, Math.min(380, width * 0.56)));
    const { view, logX, logY, plot } = this, series = this.#shown(), points = [];
    this.traces = [];
    if (view.kind !== 'curve') {
      this.placed = view.kind === 'matrix' ? drawMatrix(plot, view, width) : drawBars(plot, view, series, width, height);
      const what = view.kind === 'matrix' ? `${view.categories.length} by ${view.categories.length} numbers` : view.kind === 'bars' ? `${view.categories.length} bars` : `${series.length} distributions`;
      plot.setAttribute('aria-label', `${this.spec.title}: ${view.label}. ${what}. Left and right arrow go from one to the next${view.kind === 'matrix' ? ', up and down from row to row' : ''}.`);
      this.marks = svg('g', { class: 'screen' });
      plot.append(this.marks);
      this.#mark();
      return;
    }
    for (const s of series) {
      s.x.forEach((x, k) => {
        const px = logX ? Math.abs(x) : x, py = logY ? Math.abs(s.y[k]) : s.y[k];
        if (px !== null && py !== null && (!logX || px > 0) && (!logY || py > 0)) {
          points.push({ s, k, x: px, y: py, e: s.error[k] ?? 0 });
        }
      });
    }
    plot.replaceChildren();
    plot.setAttribute('width', width);
    plot.setAttribute('height', height);
    plot.setAttribute('viewBox', `0 0 ${width} ${height}`);
    plot.setAttribute('aria-label', `${this.spec.title}: ${view.label}. ${points.length} points. Left and right arrow go from point to point, up and down from curve to curve, Enter shows the map.`);
    const left = 80, right = width - 14, top = view.marks.length ? 24 : 10, bottom = height - 46;
    const curves = series.filter(s => s.curve).map(s => [s, s.curve[0].map((x, k) => [logX ? Math.abs(x) : x, logY ? Math.abs(s.curve[1][k]) : s.curve[1][k]]).filter(([x, y]) => (!logX || x > 0) && (!logY || y > 0))]);
    const along = curves.flatMap(([, c]) => c);
    const xs = [...points.map(p => p.x), ...along.map(c => c[0])], ys = [...points.flatMap(p => logY ? [p.y] : [p.y - p.e, p.y + p.e]), ...logY ? [] : along.map(c => c[1])];
    const sx = scaleFor(Math.max(0, ...xs.map(Math.abs)), view.xUnit), sy = scaleFor(Math.max(0, ...points.map(p => Math.abs(p.y))), view.yUnit);
    const range = (values, log) => {
      let a = Math.min(...values), b = Math.max(...values);
      if (!values.length) {
        return log ? [1, 10] : [0, 1];
      }
      const room = log ? 1 : (b - a || Math.abs(a) || 1) * 0.05;
      return log ? [a / 1.25, b * 1.25] : [a - room, b + room];
    };
    const [x0, x1] = range(xs.map(v => v * sx.factor), logX), [y0, y1] = range(ys.map(v => v * sy.factor), logY);
    const ax = makeAxis(x0, x1, left, right, logX, view.xUnit === '°' && x1 - x0 > 200 ? width < 420 ? 90 : 45 : undefined), ay = makeAxis(y0, y1, bottom, top, logY);
    const grid = svg('g', { class: 'grid', 'stroke-width': 1 }), labels = svg('g', { 'aria-hidden': 'true' });
    for (const v of ax.ticks) {
      grid.append(svg('path', { d: `M${ax.at(v).toFixed(1)} ${top}V${bottom}` }));
      labels.append(svg('text', { x: ax.at(v).toFixed(1), y: bottom + 18, 'text-anchor': 'middle' }, number(v, 6)));
    }
    for (const v of ay.ticks) {
      grid.append(svg('path', { d: `M${left} ${ay.at(v).toFixed(1)}H${right}` }));
      labels.append(svg('text', { x: left - 7, y: (ay.at(v) + 4).toFixed(1), 'text-anchor': 'end' }, number(v, 6)));
    }
    const named = (name, unit, log) => (log ? `|${name}|` : name) + (unit ? ` (${unit})` : '');
    labels.append(
      svg('text', { x: (left + right) / 2, y: height - 8, 'text-anchor': 'middle' }, named(view.x, sx.unit, logX && xs.length && view.series.some(s => s.x.some(v => v < 0)))),
      svg('text', { transform: `translate(15 ${(top + bottom) / 2}) rotate(-90)`, 'text-anchor': 'middle' }, named(view.y, sy.unit, logY && view.series.some(s => s.y.some(v => v < 0)))));
    const clip = `${this.spec.id}-clip`;
    plot.append(
      svg('defs', null, svg('clipPath', { id: clip }, svg('rect', { x: left - 8, y: top - 8, width: right - left + 16, height: bottom - top + 16 })),
        svg('clipPath', { id: `${clip}-lines` }, svg('rect', { x: left, y: top, width: right - left, height: bottom - top }))),
      grid, svg('path', { class: 'frame', d: `M${left} ${top}V${bottom}H${right}V${top}Z` }), labels);
    const lines = svg('g', { 'clip-path': `url(#${clip}-lines)` }), body = svg('g', { 'clip-path': `url(#${clip})` }), hits = svg('g', { class: 'screen' });
    for (const m of view.marks) {
      const u = ax.at(m.x * sx.factor).toFixed(1);
      labels.append(svg('path', { class: 'frame', 'stroke-dasharray': '2 4', d: `M${u} ${top}V${bottom}` }), svg('text', { x: u, y: top - 6, 'text-anchor': 'middle' }, m.name));
    }
    plot.append(lines, body);
    this.placed = [];
    for (const s of series) {
      const own = points.filter(p => p.s === s).map(p => ({ ...p, u: ax.at(p.x * sx.factor), v: ay.at(p.y * sy.factor) })).filter(p => Number.isFinite(p.u) && Number.isFinite(p.v));
      this.placed.push(own);
      const curve = curves.find(([c]) => c === s)?.[1];
      if (curve) {
        const d = curve.map(([x, y], k) => `${k ? 'L' : 'M'}${ax.at(x * sx.factor).toFixed(1)} ${ay.at(y * sy.factor).toFixed(1)}`).join('');
        this.traces.push(...curve.length < 30 ? [] : curve.map(([x, y]) => ({ words: `${s.name}: ${view.x} ${quantity(x, view.xUnit, 5)}, ${view.y} ${quantity(y, view.yUnit, 4)}`, u: ax.at(x * sx.factor), v: ay.at(y * sy.factor) })));
        lines.append(svg('path', { d, fill: 'none', 'stroke-width': 1.6, 'stroke-dasharray': dashOf(s.look), ...strokeOf(s.look) }));
      } else if (s.line) {
        const d = [], end = own.length ? 1.08 * Math.max(...own.map(p => p.x)) * sx.factor : x1, start = logX ? x0 : 0;
        for (let k = 0; k <= 80; k++) {
          const shown = logX ? Math.pow(10, Math.log10(start) + (Math.log10(end) - Math.log10(start)) * k / 80) : start + (end - start) * k / 80;
          const y = (s.line[0] * shown / sx.factor + s.line[1]) * sy.factor, v = ay.at(logY ? Math.abs(y) : y);
          if (Number.isFinite(v)) {
            d.push(`${d.length ? 'L' : 'M'}${ax.at(shown).toFixed(1)} ${Math.max(-1e4, Math.min(1e4, v)).toFixed(1)}`);
          }
        }
        lines.append(svg('path', { d: d.join(''), fill: 'none', 'stroke-width': 1.6, 'stroke-dasharray': dashOf(s.look), ...strokeOf(s.look) }));
      } else {
        lines.append(svg('path', { d: own.map((p, k) => `${k ? 'L' : 'M'}${p.u.toFixed(1)} ${p.v.toFixed(1)}`).join(''), fill: 'none', 'stroke-width': 1.6, 'stroke-dasharray': dashOf(s.look), ...strokeOf(s.look) }));
      }
      for (const p of own) {
        const high = ay.at((p.y + p.e) * sy.factor), low = ay.at((logY ? Math.max(p.y - p.e, y0 / sy.factor) : p.y - p.e) * sy.factor);
        if (low - high > 2.5) {
          body.append(svg('path', { d: `M${p.u.toFixed(1)} ${high.toFixed(1)}V${low.toFixed(1)}m-4 0h8M${(p.u - 4).toFixed(1)} ${high.toFixed(1)}h8`, fill: 'none', 'stroke-width': 1.2, ...strokeOf(s.look) }));
        }
        const mark = svg('path', { d: markerPath(s.look, 4), transform: `translate(${p.u.toFixed(1)} ${p.v.toFixed(1)})`, ...fillOf(s.look) }, svg('title', null, this.#words(p)));
        body.append(mark);
        if (s.doubtful[p.k]) {
          body.append(svg('circle', { class: 'ring', cx: p.u.toFixed(1), cy: p.v.toFixed(1), r: 8 }));
        }
        const frame = s.map ? s.frame[p.k] : -1;
        if (frame >= 0) {
          // A generous target for fingers, above all lines.
          hits.append(svg('circle', { class: 'hit', cx: p.u.toFixed(1), cy: p.v.toFixed(1), r: 11, 'data-map': s.map, 'data-frame': frame, onclick: () => this.pick(s.map, frame) }, svg('title', null, this.#words(p))));
        }
      }
    }
    this.marks = svg('g', { class: 'screen' });
    body.append(hits);
    plot.append(this.marks);
    this.#mark();
  }

  #words(p) {
    if (p.words) {
      return p.words;
    }
    const { view } = this, error = p.e > 0 ? ` ± ${quantity(p.e, view.yUnit, 2)}` : '';
    return `${p.s.name}: ${view.x} ${quantity(p.s.x[p.k], view.xUnit, 5)}, ${view.y} ${quantity(p.s.y[p.k], view.yUnit, 6)}${error}${p.s.doubtful[p.k] ? ', not ok' : ''}`;
  }

  /** Marks the points of the map that is shown. */
  shows(map, frame) {
    this.now = { map, frame };
    this.#mark();
  }

  #mark() {
    this.marks?.replaceChildren();
    for (const p of (this.placed ?? []).flat()) {
      if (p.s.map && p.s.map === this.now.map && p.s.frame[p.k] === this.now.frame) {
        this.marks.append(svg('circle', { class: 'now', cx: p.u.toFixed(1), cy: p.v.toFixed(1), r: 7.5 }));
      }
    }
    const p = this.cursor && this.placed[this.cursor[0]]?.[this.cursor[1]] || this.trace;
    if (p) {
      this.marks?.append(svg('circle', { class: 'cursor', cx: p.u.toFixed(1), cy: p.v.toFixed(1), r: p === this.trace ? 4 : 11 }));
    }
  }

  // What lies under the pointer or, on curves, next to it.
  #hover(e) {
    const box = this.plot.getBoundingClientRect(), u = (e.clientX - box.left) * this.plot.getAttribute('width') / (box.width || 1), v = (e.clientY - box.top) * this.plot.getAttribute('height') / (box.height || 1);
    let best = null, least = 26;
    this.placed.forEach((list, s) => list.forEach((p, k) => {
      const inside = p.box && u >= p.box[0] && u < p.box[2] && v >= p.box[1] && v < p.box[3], away = inside ? Math.hypot(u - p.u, v - p.v) / 1e6 : p.box ? Infinity : Math.hypot(u - p.u, v - p.v);
      if (away < least) {
        [best, least] = [[s, k], away];
      }
    }));
    let trace = null;
    if (!best) {
      for (const p of this.traces) {
        const away = Math.hypot(u - p.u, v - p.v);
        [trace, least] = away < least ? [p, away] : [trace, least];
      }
    }
    // Said aloud only when keys move the point: a mouse would chatter.
    this.spoken.setAttribute('aria-live', 'off');
    this.#point(best, trace);
  }

  #point(cursor, trace = null) {
    Object.assign(this, { cursor, trace });
    this.#mark();
    this.#speak();
  }

  #speak() {
    const p = this.cursor && this.placed[this.cursor[0]]?.[this.cursor[1]] || this.trace;
    this.spoken.textContent = p ? this.#words(p) : '';
  }

  #key(e) {
    const lists = this.placed.map((l, k) => [l, k]).filter(([l]) => l.length);
    if (!lists.length) {
      return;
    }
    const [s, k] = this.cursor ?? [lists[0][1], -1], length = this.placed[s].length, order = lists.map(([, n]) => n), at = order.indexOf(s);
    const to = {
      ArrowRight: () => [s, Math.min(length - 1, k + 1)], ArrowLeft: () => [s, Math.max(0, k - 1)],
      ArrowUp: () => [order[(at + order.length - 1) % order.length], Math.max(0, k)], ArrowDown: () => [order[(at + 1) % order.length], Math.max(0, k)],
      Home: () => [s, 0], End: () => [s, length - 1],
    }[e.key];
    if (to) {
      e.preventDefault();
      this.spoken.setAttribute('aria-live', 'polite');
      const [ns, nk] = to();
      this.#point([ns, Math.min(nk, this.placed[ns].length - 1)]);
    } else if ((e.key === 'Enter' || e.key === ' ') && this.cursor) {
      e.preventDefault();
      const p = this.placed[s][k];
      if (p?.s.map && p.s.frame[p.k] >= 0) {
        this.pick(p.s.map, p.s.frame[p.k]);
      }
    }
  }

  #csv() {
    const { view } = this;
    if (view.kind !== 'curve') {
      return view.kind === 'matrix' ? matrixRows(view) : barRows(view, this.#shown());
    }
    return [['curve', `${view.x} (${view.xUnit})`, `${view.y} (${view.yUnit})`, `${view.errorName} (${view.yUnit})`, 'ok'],
      ...this.#shown().flatMap(s => s.x.map((x, k) => [s.name, x, s.y[k], s.error[k], s.doubtful[k] ? 'no' : 'yes']))];
  }
}
