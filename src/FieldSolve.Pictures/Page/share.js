// The device with each contact coloured by the share of a reading's variance that its own causes carry.

class ShareMap {
  /** @param data { title, note, axis, rim, contacts, views: [{ wiring, quantity, roles, share, words, rest }] }. */
  constructor(host, data) {
    Object.assign(this, { data, view: data.views[0], cursor: null });
    const wirings = [...new Set(data.views.map(v => v.wiring))], bar = html('div', { class: 'bar' });
    this.quantity = choice('Reading', [], '', k => this.#choose(this.view.wiring, k));
    if (wirings.length > 1) {
      bar.append(choice('Wiring', wirings.map(w => [w, w]), wirings[0], w => this.#choose(w, this.view.quantity)));
    }
    this.plot = svg('svg', {
      class: 'plot share', tabindex: 0, role: 'application', 'aria-roledescription': 'device', onkeydown: e => this.#key(e), onblur: () => this.#read(null), onfocus: () => this.#read(this.cursor),
      onpointermove: e => this.#hover(e), onpointerdown: e => this.#hover(e), onpointerleave: e => { if (e.pointerType === 'mouse') { this.#read(null); } },
    });
    this.spoken = html('output', { class: 'spoken', 'aria-live': 'polite' });
    bar.append(this.quantity, saveButtons({ label: () => data.title, name: () => fileName(document.title, 'shares', this.view.wiring, this.view.quantity) },
      () => paperSvg(this.plot, `${data.title}: ${this.view.wiring}, ${this.view.quantity}`), () => this.rows()));
    host.append(html('h3', null, data.title), bar, html('div', null, this.plot), this.spoken, html('p', { class: 'note-line' }, data.note));
    this.#choose(wirings[0], this.view.quantity);
    new ResizeObserver(perFrame(() => this.draw())).observe(host);
    for (const when of ['beforeprint', 'afterprint']) {
      addEventListener(when, () => this.draw());
    }
  }

  #choose(wiring, name) {
    const own = this.data.views.filter(v => v.wiring === wiring);
    this.view = own.find(v => v.quantity === name) ?? own[0];
    this.quantity.select.replaceChildren(...own.map(v => html('option', { value: v.quantity, selected: v === this.view }, v.quantity)));
    this.draw();
  }

  #colour(t) {
    // More is stronger against the page: darker on light paper, brighter on a dark screen.
    return rgbText(RAMPS.ember, isDark() ? 0.16 + 0.8 * t : 0.94 - 0.86 * t);
  }

  draw() {
    const { data, view, plot } = this, width = Math.max(260, Math.round(plot.parentElement.clientWidth || 600)), box = extentOf([...data.rim, ...data.contacts.map(c => c.points)]);
    // Room for the longest name at each side; where there is little the share goes below it.
    const below = width < 560, most = Math.max(...view.share, 1e-9), roles = view.roles.map(r => ({ source: ' I+', drain: ' I−' })[r] ?? (r.startsWith('along') ? ' ∥' : r.startsWith('across') ? ' ⊥' : '') + (r.endsWith('+') ? '+' : r.endsWith('-') ? '−' : ''));
    const fits = below ? 12 : 24, room = Math.min(0.3 * width, 24 + 7.9 * (Math.max(...data.contacts.map((c, k) => Math.min(fits, c.name.length) + roles[k].length)) + (below ? 0 : 7)));
    const scale = Math.min((width - 2 * room) / box.width, 400 / box.height), high = box.height * scale + 72, height = high + 52, unit = scaleFor(Math.max(box.width, box.height) / 2, 'm');
    const at = (x, y) => [width / 2 + scale * (x - box.cx), high / 2 - scale * (y - box.cy)];
    const path = points => points.map((v, k) => k % 2 ? '' : `${k ? 'L' : 'M'}${at(v, points[k + 1]).map(c => c.toFixed(1)).join(' ')}`).join('');
    fill(plot, { width, height, viewBox: `0 0 ${width} ${height}`, 'aria-label': `${data.title}: ${view.wiring}, ${view.quantity}. Left and right arrow go from contact to contact.` }, []);
    plot.replaceChildren(...data.rim.map(loop => svg('path', { class: 'sheet', d: path(loop) + 'Z' })));
    const names = svg('g', null);
    this.places = data.contacts.map((c, k) => {
      const [u, v] = at(...c.middle), far = Math.hypot(u - width / 2, v - high / 2) || 1, du = (u - width / 2) / far, dv = (v - high / 2) / far, t = view.share[k] / most, d = c.kind === 'tip' ? '' : path(c.points);
      // A dark line under the colour keeps a contact without a share in sight.
      if (c.kind === 'pad') {
        plot.append(svg('path', { d: d + 'Z', fill: this.#colour(t), class: 'ink', 'stroke-width': 1.5 }));
      } else if (d) {
        plot.append(svg('path', { d, fill: 'none', class: 'ink', 'stroke-width': 14 }), svg('path', { d, fill: 'none', stroke: this.#colour(t), 'stroke-width': 11 }));
      }
      const out = c.kind === 'pad' && Math.abs(u - width / 2) < 0.3 * scale * box.width && Math.abs(v - high / 2) < 0.3 * scale * box.height ? 0 : 1;
      const anchor = du > 0.35 ? 'start' : du < -0.35 ? 'end' : 'middle', x = (u + 15 * du * out).toFixed(1), y = v + 20 * dv * out + 4;
      const text = svg('text', { class: `tag ${view.roles[k].replace(/[+-]$/, '')}`, x, y: y.toFixed(1), 'text-anchor': anchor }, shortened(c.name, fits) + roles[k]);
      if (view.share[k] >= 0.005) {
        text.append(svg('tspan', below ? { class: 'amount', x, dy: 14 } : { class: 'amount', dx: 5 }, `${number(100 * view.share[k], 2)} %`));
      }
      names.append(text);
      return { u, v };
    });
    // The crystal, from the left end of the axis upwards.
    const [u0, v0] = [34, high - 40];
    [[Math.cos(data.axis), Math.sin(data.axis), 'a'], [-Math.sin(data.axis), Math.cos(data.axis), 'b']].forEach(([c, s, name]) => names.append(
      svg('path', { class: 'ink', 'stroke-width': 1.5, 'stroke-dasharray': name === 'b' ? '3 3' : null, d: `M${u0 - 18 * c} ${v0 + 18 * s}L${u0 + 18 * c} ${v0 - 18 * s}` }),
      svg('text', { x: u0 + 27 * c, y: v0 - 27 * s + 4, 'text-anchor': 'middle' }, name)));
    const bar = roundStep(box.width, 4), length = bar * scale, right = width - 14;
    names.append(svg('path', { class: 'ink', 'stroke-width': 2, d: `M${right - length} ${high - 22}h${length}` }), svg('text', { x: right - length / 2, y: high - 28, 'text-anchor': 'middle' }, `${number(bar * unit.factor, 3)} ${unit.unit}`));
    const left = 30, span = width - 60;
    for (let k = 0; k < 48; k++) {
      names.append(svg('rect', { x: (left + span * k / 48).toFixed(1), y: high + 2, width: (span / 48 + 0.6).toFixed(1), height: 12, fill: this.#colour((k + 0.5) / 48) }));
    }
    names.append(svg('rect', { x: left, y: high + 2, width: span, height: 12, class: 'frame' }));
    for (let k = 0; k <= 4; k++) {
      names.append(svg('text', { x: left + span * k / 4, y: high + 28, 'text-anchor': k === 0 ? 'start' : k === 4 ? 'end' : 'middle' }, `${number(100 * most * k / 4, 2)} %`));
    }
    names.append(svg('text', { x: width / 2, y: high + 46, 'text-anchor': 'middle' }, width < 420 ? 'share of the variance' : `share of the variance of ${view.quantity}`));
    this.marks = svg('g', { class: 'screen' });
    plot.append(names, this.marks);
    this.#read(this.cursor);
  }

  #read(k) {
    const { data, view } = this;
    this.cursor = k;
    this.marks?.replaceChildren();
    if (k === null) {
      this.spoken.textContent = view.rest;
      return;
    }
    this.marks.append(svg('circle', { class: 'cursor', cx: this.places[k].u.toFixed(1), cy: this.places[k].v.toFixed(1), r: 16 }));
    const s = view.share[k];
    this.spoken.textContent = `${data.contacts[k].name}: ${s > 0 && s < 1e-5 ? 'less than 0.001' : number(100 * s, 3)} % of the variance. ${view.words[k]}`;
  }

  #hover(e) {
    const box = this.plot.getBoundingClientRect(), u = (e.clientX - box.left) * this.plot.getAttribute('width') / (box.width || 1), v = (e.clientY - box.top) * this.plot.getAttribute('height') / (box.height || 1);
    const away = this.places.map(p => Math.hypot(u - p.u, v - p.v)), near = away.indexOf(Math.min(...away));
    this.spoken.setAttribute('aria-live', 'off');
    this.#read(away[near] < 45 ? near : null);
  }

  #key(e) {
    const n = this.places.length, k = this.cursor, to = { ArrowRight: k === null ? 0 : (k + 1) % n, ArrowLeft: k === null ? n - 1 : (k + n - 1) % n, Home: 0, End: n - 1 }[e.key];
    if (to !== undefined) {
      e.preventDefault();
      this.spoken.setAttribute('aria-live', 'polite');
      this.#read(to);
    }
  }

  /** The numbers. */
  rows() {
    return [['wiring', 'reading', 'contact', 'share_of_variance'], ...this.data.views.flatMap(v => v.share.map((s, k) => [v.wiring, v.quantity, this.data.contacts[k].name, s]))];
  }
}
