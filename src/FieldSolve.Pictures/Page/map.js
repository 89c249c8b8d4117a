// The live map: colours, level lines and lines of current of one frame of one wiring, a cursor that reads values, and the crossing lines.

// Words for what the slider turns.
const SLIDERS = {
  current: { name: 'Drive value', all: 'the whole drive', others: 'the other values of the drive, darker for smaller ones' },
  phase: { name: 'Phase', all: 'the whole cycle', others: 'the other phases of the cycle' },
  direction: { name: 'Direction', all: 'all directions', others: 'the other directions' },
  axis: { name: 'Crystal axis', all: 'all axes', others: 'the other axes' },
};

class LiveMap extends Plane {
  /** @param host element; maps that share this view; meshes and laws of the page. */
  constructor(host, maps, meshes, laws, changed) {
    super(1, 4000);
    Object.assign(this, { host, maps, meshes, laws, changed, name: 'phi', wholeDrive: true, levels: true, flow: false, cursor: null });
    // A cycle passes most currents twice: such frames are one.
    this.sets = maps.map(m => {
      const all = [];
      m.frames.forEach(f => all.push(f.same === undefined ? new FrameFields(meshes[m.mesh], laws[m.law].turned(f.turn), f, all) : all[f.same]));
      return all;
    });
    this.mapIndex = 0;
    this.words = SLIDERS[maps[0].by];
    // The last drive value, the crest of a cycle, the first direction.
    this.frameIndex = { current: maps[0].frames.length - 1, phase: this.sets[0].reduce((best, f, k, all) => f.frame.high > all[best].frame.high ? k : best, 0) }[maps[0].by] ?? 0;
    this.mesh = meshes[maps[0].mesh];
    this.crossing = new Crossing(this.mesh, maps[0].direction);
    this.extent = extentOf(maps.flatMap(m => [...m.rim, ...m.contacts.map(c => c.points)]));
    this.#build();
    this.draw = perFrame(() => this.drawNow());
    this.drawProfiles = perFrame(() => this.drawProfilesNow());
    this.#select();
    this.#size();
    // The map itself first; the profiles need all frames unpacked.
    requestAnimationFrame(() => setTimeout(() => {
      this.shownOnce = true;
      this.drawProfilesNow();
    }, 0));
    new ResizeObserver(perFrame(() => this.#size())).observe(this.stage.parentElement);
    for (const when of ['beforeprint', 'afterprint']) {
      addEventListener(when, () => this.#size());
    }
  }

  // The frame with the largest potential has the largest field too.
  #strongest() {
    return this.sets[this.mapIndex].reduce((best, f) => f.frame.high - f.frame.low > best.frame.high - best.frame.low ? f : best);
  }

  /** Role of a contact or tip while the shown frame is on. */
  roleOf(k) {
    return this.map.frames[this.frameIndex].roles?.[k] ?? this.map.contacts[k].role;
  }

  get map() { return this.maps[this.mapIndex]; }

  get fields() { return this.sets[this.mapIndex][this.frameIndex]; }

  get caption() { return `${this.map.title}, ${this.map.by} ${this.map.frames[this.frameIndex].label}`; }

  /** Shows a frame of a map given by its name in the page. */
  show(id, frame) {
    this.mapIndex = Math.max(0, this.maps.findIndex(m => m.id === id));
    this.frameIndex = frame;
    this.#select();
  }

  #build() {
    const { maps } = this, bar = html('div', { class: 'bar' });
    this.wiring = choice('Wiring', maps.map((m, k) => [String(k), m.title]), '0', k => {
      this.mapIndex = Number(k);
      this.frameIndex = Math.min(this.frameIndex, this.map.frames.length - 1);
      this.#select();
    });
    this.quantity = choice('Quantity', Object.entries(QUANTITIES).map(([k, q]) => [k, q.label]), this.name, k => {
      this.name = k;
      this.draw();
      this.drawProfiles();
    });
    if (maps.length > 1 || maps[0].by === 'current') {
      bar.append(this.wiring);
    }
    bar.append(this.quantity,
      choice('Colours span', [['all', this.words.all], ['one', 'the shown value']], 'all', v => { this.wholeDrive = v === 'all'; this.draw(); }),
      tick('equipotentials', this.levels, on => { this.levels = on; this.draw(); }),
      tick('current lines', this.flow, on => { this.flow = on; this.draw(); }));
    this.slider = html('input', { type: 'range', min: 0, step: 1, class: 'slide', oninput: () => { this.frameIndex = Number(this.slider.value); this.#select(); } });
    this.playButton = html('button', { type: 'button', class: 'play', 'aria-label': 'Play', onclick: () => this.play(!this.timer) }, '▶');
    this.valueText = html('output', { class: 'value' });
    const drive = html('div', { class: 'bar drive' }, this.playButton, html('label', { class: 'grow' }, html('span', { class: 'spoken-only' }, this.words.name), this.slider), this.valueText);

    this.canvas = html('canvas', { 'aria-hidden': 'true' });
    this.top = new MapOverlay(this);
    this.stage = html('div', {
      class: 'stage', tabindex: 0, role: 'application', 'aria-roledescription': 'map', onkeydown: e => this.#key(e),
      onpointermove: e => this.#hover(e), onpointerdown: e => this.#down(e), onpointerup: e => this.#up(e), onpointercancel: e => this.#up(e),
      onpointerleave: e => { if (e.pointerType === 'mouse' && !this.dragging) { this.#read(null); } },
    }, this.canvas, this.top.overlay);
    this.stage.addEventListener('wheel', e => {
      if (e.ctrlKey || document.activeElement === this.stage) {
        this.wheel(e);
      }
    }, { passive: false });
    this.readout = html('output', { class: 'readout', 'aria-live': 'polite' });
    const tools = html('div', { class: 'bar tools' },
      html('span', { role: 'group', 'aria-label': 'Zoom' },
        html('button', { type: 'button', class: 'small', 'aria-label': 'Zoom in', onclick: () => this.zoomBy(1.5) }, '+'),
        html('button', { type: 'button', class: 'small', 'aria-label': 'Zoom out', onclick: () => this.zoomBy(1 / 1.5) }, '−'),
        html('button', { type: 'button', class: 'small', onclick: () => this.whole() }, 'whole sheet')),
      saveButtons({ label: () => 'map', name: () => fileName(document.title, this.map.title, this.map.frames[this.frameIndex].label, this.name) }, () => this.#paper(), () => this.#csv()));

    const numberBox = (label, step, read) => {
      const input = html('input', { type: 'number', step, inputmode: 'decimal', onchange: () => this.cross(read(Number(input.value))) });
      return { box: html('label', { class: 'choice' }, html('span', null, label), input), input };
    };
    this.unit = scaleFor(this.mesh.box.diagonal / 2, 'm');
    this.crossX = numberBox(`x (${this.unit.unit})`, 'any', v => ({ x: v / this.unit.factor }));
    this.crossY = numberBox(`y (${this.unit.unit})`, 'any', v => ({ y: v / this.unit.factor }));
    this.crossA = numberBox('angle (°)', 'any', v => ({ angle: v }));
    this.profiles = [new ProfilePlot('Line 1'), new ProfilePlot('Line 2')];
    this.profileBox = html('div', { class: 'profiles' }, html('div', null, this.profiles[0].plot), html('div', null, this.profiles[1].plot));
    const crossBar = html('div', { class: 'bar' }, this.crossX.box, this.crossY.box, this.crossA.box,
      saveButtons({ label: () => 'profiles', name: () => fileName(document.title, this.map.title, 'profiles', this.name) }, () => this.#profilePaper(), () => this.#profileCsv()));
    this.printLine = html('p', { class: 'print-only' });
    this.noteLine = html('p', { class: 'note-line' });
    this.metalBox = html('details', { class: 'metal-box' }, html('summary', null, 'Potential of each contact'), html('div', { class: 'wide' }));
    this.left = html('div', { class: 'left' }, html('div', { class: 'stage-frame' }, this.stage), this.top.legend, this.readout, tools);
    this.right = html('div', { class: 'right' },
      html('h3', null, 'Profiles along the two lines'),
      html('p', { class: 'note-line' }, `Drag the crossing to move the lines and the small circle to turn them. Strong: the value shown; pale: ${this.words.others}.`),
      crossBar, this.profileBox, this.metalBox);
    this.host.append(bar, drive, this.printLine, html('div', { class: this.extent.width > 1.7 * this.extent.height ? 'pair long' : 'pair' }, this.left, this.right), this.noteLine);
    this.view = new MeshCanvas(this.canvas, this.mesh, new URLSearchParams(location.hash.slice(1)).get('draw') ?? '');
    this.canvas = this.view.canvas;
    const handle = (label, move) => {
      const node = svg('circle', { r: 8, tabindex: 0, role: 'slider', class: 'handle screen', 'aria-label': label, onpointerdown: e => this.#grab(e, move), onkeydown: e => this.#handleKey(e, move) });
      return node;
    };
    this.moveHandle = handle('Crossing of the two lines; arrow keys move it', 'move');
    this.turnHandle = handle('Direction of line 1; left and right arrow turn it', 'turn');
    this.top.handles.append(this.moveHandle, this.turnHandle);
    Object.assign(this.top, { moveHandle: this.moveHandle, turnHandle: this.turnHandle });
  }

  #size() {
    const width = Math.max(220, this.stage.parentElement.clientWidth), box = this.extent, margin = { left: 52, right: 10, top: 12, bottom: 38 };
    const room = width - margin.left - margin.right, scale = Math.min((room - 24) / box.width, Math.max(260, Math.min(620, innerHeight * 0.72) - (this.extent.width > 1.7 * this.extent.height ? 140 : 0)) / box.height);
    const inner = { width: room, height: Math.max(150, Math.round(box.height * scale + 24)) };
    Object.assign(this, { margin, inner, fit: scale, width, height: inner.height + margin.top + margin.bottom });
    this.layOut(this.top.overlay, this.canvas);
    this.drawNow();
    this.drawProfilesNow();
  }

  #select() {
    const { map } = this;
    if (this.meshes[map.mesh] !== this.mesh) {
      this.mesh = this.meshes[map.mesh];
      this.crossing = new Crossing(this.mesh, map.direction);
      const fresh = html('canvas', { 'aria-hidden': 'true' });
      this.canvas.replaceWith(fresh);
      this.canvas = fresh;
      this.view = new MeshCanvas(fresh, this.mesh, this.view.kind === 'plain' ? 'plain' : '');
      this.canvas = this.view.canvas;
      this.profileKey = null;
      this.top.forget();
      if (this.fit) {
        this.#size();
      }
    }
    this.slider.max = map.frames.length - 1;
    this.slider.value = this.frameIndex;
    const { label } = map.frames[this.frameIndex];
    this.slider.setAttribute('aria-valuetext', label);
    this.wiring.select.value = String(this.mapIndex);
    this.valueText.textContent = `${map.by} ${label}`;
    this.noteLine.textContent = map.note;
    this.printLine.textContent = this.caption;
    this.#metal();
    if (this.fit) {
      this.draw();
      this.drawProfiles();
    }
    this.changed?.(map.id, this.frameIndex);
  }

  #metal() {
    const { map } = this, frame = map.frames[this.frameIndex], largest = Math.max(...frame.metal.map(Math.abs), 0), scale = scaleFor(largest, 'V');
    const body = html('tbody', null), table = html('table', null, html('thead', null, html('tr', null, html('th', null, 'contact'), html('th', null, `potential (${scale.unit})`))), body);
    frame.metal.forEach((v, k) => {
      const { name } = map.contacts[k], role = this.roleOf(k);
      body.append(html('tr', null, html('td', null, role ? `${name} (${role.replace('+', ' +').replace('-', ' −')})` : name), html('td', null, number(v * scale.factor, 6))));
    });
    this.metalBox.lastChild.replaceChildren(html('p', { class: 'note-line' }, 'As solved on the finest mesh; tables and curves also correct readings by what this mesh is known to lack.'), table);
  }

  /** Plays the frames once through, or stops. */
  play(on) {
    clearInterval(this.timer);
    this.timer = 0;
    this.playButton.textContent = on ? '❚❚' : '▶';
    this.playButton.setAttribute('aria-label', on ? 'Stop' : 'Play');
    if (on) {
      const last = this.map.frames.length - 1, round = this.map.by !== 'current';
      if (this.frameIndex >= last) {
        this.frameIndex = 0;
        this.#select();
      }
      this.timer = setInterval(() => {
        this.frameIndex = round ? (this.frameIndex + 1) % (last + 1) : Math.min(last, this.frameIndex + 1);
        this.#select();
        if (!round && this.frameIndex >= last) {
          this.play(false);
        }
      }, round ? 250 : 500);
    }
  }

  /** Moves or turns the crossing lines. */
  cross(change) {
    if (Object.values(change).every(Number.isFinite)) {
      this.crossing.set(change);
    }
    this.draw();
    this.drawProfiles();
  }

  #range() {
    const sets = this.sets[this.mapIndex], q = QUANTITIES[this.name];
    if (!this.wholeDrive) {
      return this.fields.range(this.name);
    }
    // The anisotropy wants its range over all.
    const strongest = this.#strongest();
    if (this.name === 'phi') {
      return [Math.min(...sets.map(f => f.frame.low)), Math.max(...sets.map(f => f.frame.high))];
    }
    const [low, high] = strongest.range(this.name);
    return q.log ? [0.01 * high, high] : [Math.min(low, this.fields.range(this.name)[0]), Math.max(high, this.fields.range(this.name)[1])];
  }

  drawNow() {
    const { fields, name, view, inner, margin } = this, q = QUANTITIES[name];
    let [low, high] = this.#range();
    let values = fields.values(name);
    const ends = [low, high];
    if (q.log && high > 0) {
      const shown = fields.logs ??= {};
      values = shown[name] ??= values.map(v => Math.log10(Math.max(v, 1e-30)));
      [low, high] = [Math.log10(low), Math.log10(high)];
    } else if (q.log) {
      [low, high] = [0, 1];
    }
    const all = this.sets[this.mapIndex], span = this.wholeDrive ? Math.max(...all.map(f => f.frame.high - f.frame.low)) : fields.frame.high - fields.frame.low;
    this.step = roundStep(span, 20);
    view.show({ values, low, high, table: RAMPS[q.table], potential: this.levels && fields.frame.high > fields.frame.low ? fields.potentialFloats : null, step: this.step });
    const [u, v] = this.toScreen(this.mesh.box.cx, this.mesh.box.cy);
    view.look(inner.width, inner.height, Math.min(2, devicePixelRatio || 1), this.fit * this.zoom, u - margin.left, v - margin.top);
    view.draw();
    this.top.draw();
    this.top.drawLegend(ends, q);
    this.stage.setAttribute('aria-label', `Map of ${q.label}, ${this.caption}. Arrow keys move the reading point, with Shift in small steps; plus and minus zoom.`);
    if (this.cursor) {
      this.#write();
    }
    if (this.flow) {
      // The lines of current follow when the slider rests.
      clearTimeout(this.flowTimer);
      if (!fields.flow) {
        this.flowTimer = setTimeout(() => {
          fields.lines(this.mesh.box.diagonal / 42);
          this.top.draw();
        }, 90);
      }
    }
  }

  #curveOf(fields) {
    const { name } = this;
    return line => this.crossing.profile(line, place => name === 'phi' ? this.mesh.value(fields.phi, place) : fields.at(place)[name]);
  }

  drawProfilesNow() {
    if (!this.shownOnce) {
      return;
    }
    const q = QUANTITIES[this.name], sets = this.sets[this.mapIndex], width = this.profileBox.firstChild.clientWidth - 2, { crossing } = this;
    const key = [crossing.version, this.name, this.mapIndex, width, isDark()].join();
    if (key !== this.profileKey) {
      this.profileKey = key;
      // Long lists of frames are thinned for the eye; the file keeps all.
      const stride = Math.ceil(sets.length / 24), shown = sets.filter((f, k) => (sets.length - 1 - k) % stride === 0);
      this.profiles.forEach((plot, line) => plot.draw({
        points: crossing.lines[line].points, curves: shown.map(f => this.#curveOf(f)(line)), unit: q.unit, name: q.label, log: q.log, width, angle: (crossing.angle + 90 * line) % 360,
      }));
    }
    this.profiles.forEach((plot, line) => plot.shown(this.#curveOf(this.fields)(line)));
  }

  #hover(e) {
    const [u, v] = this.where(e);
    if (this.dragging === 'pan') {
      this.shift(u, v);
    } else if (this.dragging) {
      this.#drag(u, v);
    } else {
      // Said aloud only when the keys move the point: a mouse would chatter.
      this.readout.setAttribute('aria-live', 'off');
      this.#read(this.toPlace(u, v));
    }
  }

  #down(e) {
    if (e.button !== 0 || this.dragging) {
      return;
    }
    const [u, v] = this.where(e);
    if (this.zoom > 1 && e.pointerType === 'mouse') {
      this.dragging = 'pan';
      this.hold(e);
    }
    this.#read(this.toPlace(u, v));
  }

  #up() {
    this.dragging = null;
  }

  #grab(e, what) {
    e.stopPropagation();
    e.target.focus();
    this.dragging = what;
    this.hold(e);
  }

  #drag(u, v) {
    const [x, y] = this.toPlace(u, v);
    this.cross(this.dragging === 'move' ? { x, y } : { angle: Math.atan2(y - this.crossing.y, x - this.crossing.x) * 180 / Math.PI });
  }

  #handleKey(e, what) {
    const { crossing } = this, step = this.mesh.box.diagonal / (e.shiftKey ? 1000 : 100), turn = e.shiftKey ? 0.1 : 1;
    const change = what === 'move'
      ? { ArrowLeft: { x: crossing.x - step }, ArrowRight: { x: crossing.x + step }, ArrowUp: { y: crossing.y + step }, ArrowDown: { y: crossing.y - step } }[e.key]
      : { ArrowLeft: { angle: crossing.angle + turn }, ArrowUp: { angle: crossing.angle + turn }, ArrowRight: { angle: crossing.angle - turn }, ArrowDown: { angle: crossing.angle - turn } }[e.key];
    if (change) {
      e.preventDefault();
      e.stopPropagation();
      this.cross(change);
    }
  }

  #key(e) {
    if (e.target !== this.stage) {
      return;
    }
    const { box } = this.mesh, step = box.diagonal / this.zoom / (e.shiftKey ? 500 : 50), { x, y } = this.cursor ?? { x: box.cx, y: box.cy };
    const to = { ArrowLeft: [x - step, y], ArrowRight: [x + step, y], ArrowUp: [x, y + step], ArrowDown: [x, y - step], Home: [box.cx, box.cy] }[e.key];
    this.readout.setAttribute('aria-live', 'polite');
    if (to) {
      this.#read(to);
    } else if (e.key === '+' || e.key === '=') {
      this.zoomBy(1.5, ...this.toScreen(x, y));
    } else if (e.key === '-') {
      this.zoomBy(1 / 1.5, ...this.toScreen(x, y));
    } else if (e.key === 'Escape') {
      this.#read(null);
    } else {
      return;
    }
    e.preventDefault();
  }

  /** Puts the reading point at [x, y] in metres; null takes it away. */
  read(place) {
    this.#read(place);
  }

  #read(place) {
    this.cursor = place ? { x: place[0], y: place[1] } : null;
    this.#write();
    (this.redraw ??= perFrame(() => this.top.draw()))();
  }

  #write() {
    if (!this.cursor) {
      this.readout.replaceChildren('Point at the map, touch it, or move over it with the arrow keys to read φ, E and K.');
      return;
    }
    const { x, y } = this.cursor, at = this.mesh.locate(x, y), f = this.unit.factor, fixed = v => v.toFixed(4).replace('-', '−');
    const item = (name, value) => html('span', { class: 'item' }, html('b', null, name), ' ', html('span', { class: 'num' }, value));
    const place = item('at', `(${fixed(x * f)}, ${fixed(y * f)}) ${this.unit.unit}`);
    if (!at) {
      this.readout.replaceChildren(place, html('span', { class: 'item' }, 'outside the sheet'));
      return;
    }
    const v = this.fields.at(at), range = this.fields.frame.high - this.fields.frame.low, degrees = (p, q) => `${(Math.atan2(q, p) * 180 / Math.PI).toFixed(1).replace(/^-0\.0$/, '0.0').replace('-', '−')}°`;
    const arrow = (size, unit, p, q, digits) => size > 0 ? `${reading(size, unit, digits)} at ${degrees(p, q)}` : `0 ${unit}`;
    // As many digits of K as the form of the law in this page is good for.
    const known = Math.max(2, Math.min(4, Math.floor(-Math.log10(2 * this.fields.law.error + 1e-9))));
    this.readout.replaceChildren(place, item('φ', reading(v.phi, 'V', 5, 1e-7 * range)), item('E', arrow(v.e, 'V/m', v.ex, v.ey, 4)), item('K', arrow(v.k, 'A/m', v.kx, v.ky, known)),
      item('E·K', reading(v.p, 'W/m²', known)), item('anisotropy', number(v.a, 4)));
  }

  #paper() {
    const { width, height, margin, inner } = this;
    this.drawNow();
    const raster = this.canvas.toDataURL('image/png'), image = `<image x="${margin.left}" y="${margin.top}" width="${inner.width}" height="${inner.height}" href="${raster}"/>`;
    const both = svg('svg', { width, height: height + 54, viewBox: `0 0 ${width} ${height + 54}` }), overlay = this.top.overlay.cloneNode(true), legend = this.top.legend.cloneNode(true);
    both.append(...overlay.childNodes);
    both.append(svg('g', { transform: `translate(0 ${height})` }, ...legend.childNodes));
    return paperSvg(both, `${QUANTITIES[this.name].label}, ${this.caption}`, image);
  }

  #csv() {
    const { mesh, fields } = this, { ex, ey } = fields.field, { kx, ky } = fields.current, rows = [['x_m', 'y_m', 'phi_V', 'ex_V_per_m', 'ey_V_per_m', 'kx_A_per_m', 'ky_A_per_m']];
    for (let i = 0; i < mesh.count; i++) {
      rows.push([mesh.x[i], mesh.y[i], fields.phi[i], ex[i], ey[i], kx[i], ky[i]]);
    }
    return rows;
  }

  #profilePaper() {
    const [a, b] = this.profiles.map(p => p.plot), width = Number(a.getAttribute('width')), h = Number(a.getAttribute('height'));
    const both = svg('svg', { width, height: 2 * h, viewBox: `0 0 ${width} ${2 * h}` }, svg('g', null, ...a.cloneNode(true).childNodes), svg('g', { transform: `translate(0 ${h})` }, ...b.cloneNode(true).childNodes));
    return paperSvg(both, this.caption);
  }

  /** Profiles of all frames: place, then one column per frame. */
  profileRows(line) {
    const curves = this.sets[this.mapIndex].map(f => this.#curveOf(f)(line));
    return this.crossing.lines[line].points.map((p, k) => [line + 1, p.at, p.x, p.y, ...curves.map(c => Number.isFinite(c[k]) ? c[k] : null)]);
  }

  #profileCsv() {
    const unit = QUANTITIES[this.name].unit;
    return [['line', 'distance_m', 'x_m', 'y_m', ...this.map.frames.map(f => `${QUANTITIES[this.name].label} (${unit}) at ${f.value} ${this.map.unit}`)], ...this.profileRows(0), ...this.profileRows(1)];
  }
}
