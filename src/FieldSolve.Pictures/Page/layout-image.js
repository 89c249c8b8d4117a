// A micrograph under the sheet. It is read by this page alone and never leaves the machine; its size is known from its header before anything is decoded.

const MOST_PIXELS = 50e6, LENGTHS = { fm: 1e-15, pm: 1e-12, nm: 1e-9, um: 1e-6, 'µm': 1e-6, 'μm': 1e-6, mm: 1e-3, cm: 1e-2, m: 1 };

/** Metres of a text such as "12.5 um"; throws what is wrong with it. */
function lengthOf(text) {
  const m = /^\s*([-+−]?\d*\.?\d+(?:e[-+]?\d+)?)\s*(\S*)\s*$/i.exec(text), unit = m && LENGTHS[m[2]];
  if (!unit) {
    throw new Error(`"${text.slice(0, 40)}" is no length; write a number with its unit, for example "10 um"`);
  }
  return Number(m[1].replace('−', '-')) * unit;
}

/** A length as text with a unit that suits it. */
function lengthText(metres, digits = 5) {
  const scale = scaleFor(metres || 1e-6, 'm');
  return `${String(Number((metres * scale.factor).toPrecision(digits)))} ${scale.unit}`;
}

/** Width and height of a PNG (ISO/IEC 15948, chunk IHDR) or a JPEG (ITU-T T.81, marker SOF) from its first bytes; null when they do not tell, a text when it is neither. */
function pictureSize(bytes) {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  if (bytes.length >= 24 && [0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a].every((b, k) => bytes[k] === b)) {
    return { kind: 'PNG', width: view.getUint32(16), height: view.getUint32(20) };
  }
  if (bytes.length < 4 || bytes[0] !== 0xff || bytes[1] !== 0xd8) {
    return 'it is neither PNG nor JPEG';
  }
  for (let at = 2; at + 9 <= bytes.length;) {
    const mark = bytes[at + 1];
    if (bytes[at] !== 0xff) {
      return 'its header is broken';
    }
    if (mark === 0xff) {
      at++;
    } else if (mark >= 0xc0 && mark <= 0xcf && ![0xc4, 0xc8, 0xcc].includes(mark)) {
      return { kind: 'JPEG', width: view.getUint16(at + 7), height: view.getUint16(at + 5) };
    } else {
      at += mark === 0x01 || (mark >= 0xd0 && mark <= 0xd8) ? 2 : 2 + view.getUint16(at + 2);
    }
  }
  return null;
}

/** Why a file is not taken as a micrograph, or its size. Reads the header alone. */
async function examinePicture(file) {
  const size = pictureSize(new Uint8Array(await file.slice(0, 1 << 20).arrayBuffer()));
  if (size === null || typeof size === 'string') {
    throw new Error(`${file.name}: ${size ?? 'no size was found in its first megabyte'}; a PNG or JPEG is wanted`);
  }
  if (!(size.width > 0 && size.height > 0)) {
    throw new Error(`${file.name}: its header gives no size`);
  }
  if (size.width * size.height > MOST_PIXELS) {
    throw new Error(`${file.name} has ${number(size.width * size.height / 1e6, 3)} megapixels (${size.width} × ${size.height}); up to 50 are taken, so make it smaller first`);
  }
  return size;
}

/**
 * The picture at full size, half, a quarter, …: each pixel of the screen is then made of few pixels of the one that suits the zoom, whatever the size of the file. Canvases
 * stay off the graphics card, which need not take pictures of this size.
 */
async function pictureLevels(file) {
  const levels = [await createImageBitmap(file)];
  for (let last = levels[0]; Math.max(last.width, last.height) > 2048; last = levels[levels.length - 1]) {
    // One step after the other, so that the page answers in between.
    await new Promise(go => setTimeout(go));
    const half = html('canvas', { width: Math.ceil(last.width / 2), height: Math.ceil(last.height / 2) });
    half.getContext('2d', { willReadFrequently: true }).drawImage(last, 0, 0, half.width, half.height);
    levels.push(half);
  }
  return levels;
}

/** Where the picture lies: its middle (metres), metres per pixel, and degrees counter-clockwise. */
class Micrograph {
  constructor(plane) {
    Object.assign(this, { plane, levels: [], loads: 0, width: 0, height: 0, cx: 0, cy: 0, pixel: 0, angle: 0, strength: 1, marks: [] });
    this.frame = html('canvas', { class: 'micrograph', hidden: true, 'aria-hidden': 'true' });
  }

  get there() { return this.width > 0; }

  /** Takes a file; false when another was asked for meanwhile. Throws what is wrong with it, and the picture that was there stays. */
  async load(file) {
    const turn = ++this.loads;
    await examinePicture(file);
    let levels;
    try {
      levels = await pictureLevels(file);
    } catch {
      throw new Error(`${file.name} cannot be decoded; is it whole?`);
    }
    if (turn !== this.loads) {
      levels[0].close();
      return false;
    }
    this.clear();
    // A JPEG that says so has been turned by the browser, so sizes are those of what it made.
    const { extent } = this.plane, { width, height } = levels[0];
    Object.assign(this, { levels, name: file.name, width, height, cx: extent.cx, cy: extent.cy, angle: 0 });
    this.pixel = Math.max(extent.width / width, extent.height / height) * 1.15;
    this.frame.hidden = false;
    this.draw();
    return true;
  }

  clear() {
    this.levels[0]?.close();
    this.loads++;
    Object.assign(this, { levels: [], drawn: null, width: 0, height: 0, marks: [] });
    this.frame.hidden = true;
  }

  /** Place of a pixel counted from the upper left corner, and back. */
  toPlace(i, j) {
    const c = Math.cos(this.angle * Math.PI / 180), s = Math.sin(this.angle * Math.PI / 180), p = this.pixel * (i - this.width / 2), q = -this.pixel * (j - this.height / 2);
    return [this.cx + c * p - s * q, this.cy + s * p + c * q];
  }

  toPixel(x, y) {
    const c = Math.cos(this.angle * Math.PI / 180), s = Math.sin(this.angle * Math.PI / 180), dx = (x - this.cx) / this.pixel, dy = (y - this.cy) / this.pixel;
    return [c * dx + s * dy + this.width / 2, s * dx - c * dy + this.height / 2];
  }

  /** Gives the picture another size so that the two marks are so many metres apart; the first mark stays where it is. */
  scaleTo(metres) {
    const [a, b] = this.marks.map(m => this.toPlace(...m)), now = Math.hypot(a[0] - b[0], a[1] - b[1]);
    if (!(metres > 0) || !(now > 0)) {
      throw new Error('the distance must be above zero, and the two points apart');
    }
    const factor = metres / now;
    this.pixel *= factor;
    this.cx = a[0] + factor * (this.cx - a[0]);
    this.cy = a[1] + factor * (this.cy - a[1]);
  }

  draw() {
    if (!this.there || !this.plane.fit) {
      return;
    }
    const { plane, frame } = this, k = plane.fit * plane.zoom * this.pixel, c = k * Math.cos(this.angle * Math.PI / 180), s = k * Math.sin(this.angle * Math.PI / 180), [u, v] = plane.toScreen(this.cx, this.cy);
    const e = u - plane.margin.left - (c * this.width + s * this.height) / 2, f = v - plane.margin.top - (-s * this.width + c * this.height) / 2;
    frame.style.opacity = String(this.strength);
    const ratio = Math.min(2, devicePixelRatio || 1), size = [plane.inner.width, plane.inner.height].map(l => Math.round(l * ratio)), view = JSON.stringify([size, c, s, e, f]);
    if (view === this.drawn) {
      return;
    }
    this.drawn = view;
    [frame.width, frame.height] = size;
    const from = this.levels.findLast(l => l.width >= k * ratio * this.width) ?? this.levels[0], p = ratio * this.width / from.width, q = ratio * this.height / from.height, pen = frame.getContext('2d', { willReadFrequently: true });
    pen.setTransform(p * c, -p * s, q * s, q * c, ratio * e, ratio * f);
    pen.drawImage(from, 0, 0);
  }

  /** The two points whose distance is known. */
  nodes() {
    const at = this.marks.map(m => this.plane.toScreen(...this.toPlace(...m))), nodes = [];
    if (at.length === 2) {
      nodes.push(svg('path', { class: 'trace-halo', d: `M${at[0].join(' ')}L${at[1].join(' ')}` }), svg('path', { class: 'measure', d: `M${at[0].join(' ')}L${at[1].join(' ')}` }));
    }
    for (const [u, v] of at) {
      nodes.push(svg('path', { class: 'trace-halo', d: `M${u - 8} ${v}h16M${u} ${v - 8}v16` }), svg('path', { class: 'measure', d: `M${u - 8} ${v}h16M${u} ${v - 8}v16` }));
    }
    return nodes;
  }
}
