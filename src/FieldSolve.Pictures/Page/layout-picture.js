// The part of the page beside the micrograph and what is traced on it.

class PicturePanel {
  /** @param act { tool(key), save(body), use(name) }. */
  constructor(host, stage, act) {
    Object.assign(this, { host, stage, act, saved: null });
    const { picture, trace } = stage, button = (text, name, run, title) => html('button', { type: 'button', class: 'small', 'data-do': name, title, onclick: run }, text);
    this.message = html('p', { class: 'fault-line', role: 'alert', hidden: true });
    this.file = html('input', { type: 'file', accept: 'image/png,image/jpeg', class: 'spoken-only', 'data-do': 'picture-file', onchange: () => this.#load() });
    this.name = html('span', { class: 'soft' }, 'PNG or JPEG, up to 50 megapixels. It stays in this page and is sent nowhere.');
    const choose = html('label', { class: 'button' }, 'Choose a picture …', this.file);
    const slide = (label, name, value, change) => html('label', { class: 'choice' }, html('span', null, label), html('input', { type: 'range', min: 0, max: 1, step: 0.05, value, 'data-do': name, oninput: e => { change(Number(e.target.value)); stage.draw(); } }));
    this.distance = this.#field('distance', 'Distance of the two points', text => this.#change(() => picture.scaleTo(lengthOf(text))));
    this.pixel = this.#field('pixel', 'One pixel', text => this.#change(() => {
      const size = lengthOf(text);
      if (!(size > 0)) {
        throw new Error('a pixel must have a size above zero');
      }
      picture.pixel = size;
    }));
    this.turn = this.#field('turn', 'Turned by', text => this.#change(() => {
      const m = /^\s*([-+−]?\d*\.?\d+)\s*(deg|°)\s*$/.exec(text);
      if (!m) {
        throw new Error(`"${text.slice(0, 40)}" is no angle; write for example "12 deg"`);
      }
      picture.angle = Number(m[1].replace('−', '-'));
    }));
    this.x = this.#field('picture-x', 'Middle, x', text => this.#change(() => { picture.cx = lengthOf(text); }));
    this.y = this.#field('picture-y', 'Middle, y', text => this.#change(() => { picture.cy = lengthOf(text); }));
    this.tools = html('div', { class: 'segments', role: 'group', 'aria-label': 'What a click on the picture does' }, ...[['picture', 'Drag picture'], ['measure', 'Two points']].map(([key, text]) => html('button', { type: 'button', class: 'small', 'data-tool': key, onclick: () => act.tool(stage.tool === key ? 'move' : key) }, text)));
    this.scaling = html('div', { hidden: true }, html('div', { class: 'bar' }, slide('picture', 'picture-strength', 1, v => { picture.strength = v; }), slide('map', 'map-strength', 0.45, v => { stage.mapStrength = v; }), this.tools, button('Remove picture', 'picture-drop', () => { picture.clear(); this.show(); stage.draw(); })),
      html('div', { class: 'fields' }, this.distance.box, this.pixel.box, this.turn.box, this.x.box, this.y.box));
    stage.mapStrength = 0.45;
    this.kinds = html('div', { class: 'segments', role: 'group', 'aria-label': 'What is traced' }, ...[['outline', 'Trace outline'], ['hole', 'Trace hole'], ['pad', 'Trace pad']].map(([key, text]) => html('button', { type: 'button', class: 'small', 'data-trace': key, onclick: () => { trace.kind = key; act.tool('trace'); } }, text)));
    this.close = button('Close polygon', 'trace-close', () => trace.close());
    this.back = button('Take corner back', 'trace-back', () => trace.back(), 'Backspace');
    this.list = html('ul', { class: 'trace-list' });
    this.fileName = html('input', { type: 'text', value: 'trace.geojson', spellcheck: 'false', 'aria-label': 'Name of the file of the trace', 'data-do': 'trace-name' });
    this.saveButton = button('Save trace', 'trace-save', () => this.#save(), 'Write the trace as GeoJSON beside the device file');
    this.useButton = button('Use in this device', 'trace-use', () => act.use(this.saved, this.alone.input.checked), 'The traced outline becomes the sheet, traced pads become contacts; a pad named like a contact takes its place. Undo brings back what was');
    this.alone = tick('with the traced pads as its only contacts', false, () => {});
    this.alone.title = 'All other contacts, tips and wirings go; the first two pads become the wiring. Undo brings them back';
    this.note = html('p', { class: 'note-line', 'aria-live': 'polite' });
    this.box = html('details', { class: 'picture-box' }, html('summary', null, 'Micrograph and tracing'),
      html('div', { class: 'bar' }, choose, this.name), this.scaling,
      html('div', { class: 'bar' }, this.kinds, this.close, this.back), this.list,
      html('div', { class: 'bar' }, html('label', { class: 'choice' }, html('span', null, 'File'), this.fileName), this.saveButton, this.useButton, this.alone), this.message, this.note);
    host.append(this.box);
    addEventListener('pagehide', () => this.#keep());
    this.show();
  }

  // A value with its unit and the message about it.
  #field(name, label, take) {
    const message = html('span', { class: 'field-message', role: 'alert', hidden: true });
    const input = html('input', { type: 'text', 'data-do': name, spellcheck: 'false', autocomplete: 'off', onchange: () => {
      try {
        take(input.value);
        message.hidden = true;
        input.removeAttribute('aria-invalid');
      } catch (e) {
        message.textContent = e.message;
        message.hidden = false;
        input.setAttribute('aria-invalid', 'true');
      }
    } });
    return { input, box: html('label', { class: 'field' }, html('span', { class: 'field-label' }, label), input, message) };
  }

  async #load() {
    const [file] = this.file.files;
    // So that the same file can be chosen again.
    this.file.value = '';
    if (!file) {
      return;
    }
    try {
      const { picture } = this.stage;
      this.#say('');
      const coming = picture.load(file);
      this.name.textContent = `reading ${file.name} …`;
      if (!await coming) {
        return;
      }
      // The picture that the kept trace belongs to goes where it was.
      if (this.placed && ['name', 'width', 'height'].every(k => this.placed[k] === picture[k])) {
        Object.assign(picture, this.placed);
      }
      this.placed = null;
    } catch (e) {
      this.#say(e.message);
    }
    this.show();
    this.stage.draw();
  }

  /** What was traced here before the page was loaded anew. It is kept in this tab alone, for each device file; of the picture only its place is. */
  restore(device) {
    const first = !this.device, { trace } = this.stage;
    this.device = device;
    if (!first || trace.shapes.length || trace.open) {
      return;
    }
    let kept = null;
    try {
      kept = JSON.parse(sessionStorage.getItem(`trace of ${device}`));
    } catch {
      // Storage is switched off, or holds something else: nothing is kept then.
    }
    if (kept) {
      Object.assign(trace, { shapes: kept.shapes, open: kept.open, kind: kept.kind });
      Object.assign(this, { saved: kept.saved, savedText: kept.savedText, placed: kept.placed });
      this.fileName.value = kept.file;
      this.box.open = true;
      this.note.textContent = `Traced before this page was loaded anew.${kept.placed ? ` Choose ${kept.placed.name} again to see it where it was.` : ''}`;
      trace.changed();
    }
  }

  #keep() {
    const { picture, trace } = this.stage;
    if (!this.device) {
      return;
    }
    const place = ({ name, width, height, cx, cy, pixel, angle, marks }) => ({ name, width, height, cx, cy, pixel, angle, marks });
    try {
      if (trace.shapes.length || trace.open) {
        sessionStorage.setItem(`trace of ${this.device}`, JSON.stringify({
          shapes: trace.shapes, open: trace.open, kind: trace.kind, saved: this.saved, savedText: this.savedText, file: this.fileName.value, placed: picture.there ? place(picture) : this.placed ?? null,
        }));
      } else {
        sessionStorage.removeItem(`trace of ${this.device}`);
      }
    } catch {
      // As above.
    }
  }

  #say(text) {
    this.message.textContent = text;
    this.message.hidden = text === '';
  }

  // What is traced goes along with the picture under it.
  #change(run) {
    const { picture, trace } = this.stage, from = [picture.cx, picture.cy, picture.pixel, picture.angle];
    run();
    const to = [picture.cx, picture.cy, picture.pixel, picture.angle];
    const place = ([cx, cy, pixel, angle]) => Object.assign(picture, { cx, cy, pixel, angle });
    trace.carry(p => {
      place(from);
      const at = picture.toPixel(...p);
      place(to);
      return picture.toPlace(...at);
    });
    this.show();
    this.stage.draw();
  }

  /** Moves the picture. */
  shift(dx, dy) {
    const { picture } = this.stage;
    this.#change(() => {
      picture.cx += dx;
      picture.cy += dy;
    });
  }

  /** One of the two points whose distance is known. */
  measure(x, y) {
    const { picture } = this.stage;
    picture.marks = [...picture.marks.length === 2 ? [] : picture.marks, picture.toPixel(x, y)];
    this.show();
    this.stage.draw();
    if (picture.marks.length === 2) {
      this.distance.input.focus();
      this.distance.input.select();
    }
  }

  show() {
    const { picture, trace, tool } = this.stage;
    this.scaling.hidden = !picture.there;
    if (picture.there) {
      this.name.textContent = `${picture.name}, ${picture.width} × ${picture.height} pixels`;
      const [a, b] = picture.marks.map(m => picture.toPlace(...m));
      const write = (field, text) => { if (document.activeElement !== field.input || field.input.getAttribute('aria-invalid') !== 'true') { field.input.value = text; } };
      write(this.distance, b ? lengthText(Math.hypot(a[0] - b[0], a[1] - b[1])) : '');
      this.distance.input.disabled = !b;
      this.distance.input.placeholder = b ? '' : 'first "Two points"';
      write(this.pixel, lengthText(picture.pixel));
      write(this.turn, `${Number(picture.angle.toFixed(3))} deg`);
      write(this.x, lengthText(picture.cx));
      write(this.y, lengthText(picture.cy));
    } else {
      this.name.textContent = 'PNG or JPEG, up to 50 megapixels. It stays in this page and is sent nowhere.';
    }
    for (const b of this.tools.children) {
      b.setAttribute('aria-pressed', String(b.dataset.tool === tool));
    }
    for (const b of this.kinds.children) {
      b.setAttribute('aria-pressed', String(tool === 'trace' && b.dataset.trace === trace.kind));
    }
    this.close.disabled = !(trace.open?.length >= 3);
    this.back.disabled = !trace.open;
    this.list.replaceChildren(...trace.shapes.map(s => {
      const remove = html('button', { type: 'button', class: 'small', 'aria-label': `Remove the traced ${s.name || s.kind}`, onclick: () => trace.remove(s) }, 'Remove');
      const name = s.kind === 'pad' ? html('input', { type: 'text', value: s.name, 'aria-label': 'Name of the pad', onchange: e => { s.name = e.target.value; this.stage.draw(); this.#fresh(); } }) : html('b', null, s.kind);
      return html('li', null, name, ` ${s.points.length} corners`, remove);
    }));
    this.saveButton.disabled = !trace.shapes.length;
    this.#fresh();
    this.#keep();
  }

  // A saved trace can be used while it is what is on the page.
  #fresh() {
    this.useButton.disabled = !this.saved || this.savedText !== JSON.stringify(this.stage.trace.request);
  }

  async #save() {
    const name = this.fileName.value.trim(), shapes = this.stage.trace.request, text = JSON.stringify(shapes);
    let answer = await this.act.save({ name, shapes, overwrite: false });
    if (answer.status === 409 && confirm(`${name} exists. Replace it?`)) {
      answer = await this.act.save({ name, shapes, overwrite: true });
    }
    this.#say(answer.status === 422 ? (answer.body.faults ?? []).map(f => f.message).join('; ') : '');
    if (answer.status === 200) {
      [this.saved, this.savedText] = [name, text];
      this.note.textContent = `Saved ${name} beside the device file: ${shapes.map(s => s.name || s.kind).join(', ')}, in micrometres.`;
      this.#fresh();
    }
  }
}
