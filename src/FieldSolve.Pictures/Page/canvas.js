// The coloured triangles. WebGL 2 where the machine has it in hardware, else our own filling of the same triangles, pixel by pixel.

const VERTEX = `#version 300 es
in vec2 place; in float value; in float potential;
uniform vec4 view; uniform vec2 range; uniform float step;
out float shade; out float level;
void main() {
  gl_Position = vec4(place * view.xy + view.zw, 0.0, 1.0);
  shade = (value - range.x) / (range.y - range.x);
  level = potential / step;
}`;

const FRAGMENT = `#version 300 es
precision highp float;
in float shade; in float level;
uniform sampler2D ramp; uniform float lines;
out vec4 colour;
void main() {
  vec3 base = texture(ramp, vec2(clamp(shade, 0.0, 1.0) * 255.0 / 256.0 + 0.5 / 256.0, 0.5)).rgb;
  if (lines > 0.0) {
    float width = fwidth(level), away = abs(fract(level + 0.5) - 0.5) / max(width, 1e-12);
    float dark = smoothstep(lines * 1.3, lines * 0.9, away) * 0.3, white = smoothstep(lines * 0.75, lines * 0.35, away) * 0.95;
    float fade = 1.0 - smoothstep(0.25, 0.5, width);
    base = mix(mix(base, vec3(0.0), dark * fade), vec3(1.0), white * fade);
  }
  colour = vec4(base, 1.0);
}`;

// A driver that only imitates a graphics card is slower than our own filling.
let hardware = null;
function hasHardware() {
  if (hardware === null) {
    const gl = html('canvas', { width: 1, height: 1 }).getContext('webgl2', { failIfMajorPerformanceCaveat: true }), info = gl?.getExtension('WEBGL_debug_renderer_info');
    const name = info ? String(gl.getParameter(info.UNMASKED_RENDERER_WEBGL)) : '';
    hardware = gl !== null && !/swiftshader|llvmpipe|software|basic render/i.test(name);
    gl?.getExtension('WEBGL_lose_context')?.loseContext();
  }
  return hardware;
}

class MeshCanvas {
  /** @param kind 'webgl', 'plain' or '' to choose by the machine. */
  constructor(canvas, mesh, kind = '') {
    this.canvas = canvas;
    this.mesh = mesh;
    const gl = kind === 'plain' || (kind !== 'webgl' && !hasHardware()) ? null : canvas.getContext('webgl2', { antialias: true, preserveDrawingBuffer: true });
    this.kind = 'plain';
    if (gl) {
      try {
        this.#prepare(gl);
        this.kind = 'webgl';
        canvas.addEventListener('webglcontextlost', e => e.preventDefault());
        canvas.addEventListener('webglcontextrestored', () => {
          this.#prepare(gl);
          this.#upload();
          this.draw();
        });
      } catch {
        // A canvas keeps the kind of its first context: go on with a fresh one.
        this.canvas = canvas.cloneNode();
        canvas.replaceWith(this.canvas);
      }
    }
    if (this.kind === 'plain') {
      this.pen = this.canvas.getContext('2d');
    }
  }

  #prepare(gl) {
    this.gl = gl;
    const { mesh } = this, { box } = mesh;
    const shader = (type, source) => {
      const made = gl.createShader(type);
      gl.shaderSource(made, source);
      gl.compileShader(made);
      if (!gl.getShaderParameter(made, gl.COMPILE_STATUS)) {
        throw new Error(gl.getShaderInfoLog(made) ?? 'shader');
      }
      return made;
    };
    const program = gl.createProgram();
    gl.attachShader(program, shader(gl.VERTEX_SHADER, VERTEX));
    gl.attachShader(program, shader(gl.FRAGMENT_SHADER, FRAGMENT));
    gl.linkProgram(program);
    if (!gl.getProgramParameter(program, gl.LINK_STATUS)) {
      throw new Error(gl.getProgramInfoLog(program) ?? 'program');
    }
    gl.useProgram(program);
    this.places = Object.fromEntries(['view', 'range', 'step', 'lines', 'ramp'].map(name => [name, gl.getUniformLocation(program, name)]));
    // Places as floats relative to the middle.
    const places = new Float32Array(2 * mesh.count);
    for (let i = 0; i < mesh.count; i++) {
      places[2 * i] = (mesh.x[i] - box.cx) / box.diagonal;
      places[2 * i + 1] = (mesh.y[i] - box.cy) / box.diagonal;
    }
    const attribute = (name, size, data, usage) => {
      const buffer = gl.createBuffer(), at = gl.getAttribLocation(program, name);
      gl.bindBuffer(gl.ARRAY_BUFFER, buffer);
      gl.bufferData(gl.ARRAY_BUFFER, data, usage);
      if (at >= 0) {
        gl.enableVertexAttribArray(at);
        gl.vertexAttribPointer(at, size, gl.FLOAT, false, 0, 0);
      }
      return buffer;
    };
    attribute('place', 2, places, gl.STATIC_DRAW);
    this.valueBuffer = attribute('value', 1, new Float32Array(mesh.count), gl.DYNAMIC_DRAW);
    this.potentialBuffer = attribute('potential', 1, new Float32Array(mesh.count), gl.DYNAMIC_DRAW);
    gl.bindBuffer(gl.ELEMENT_ARRAY_BUFFER, gl.createBuffer());
    gl.bufferData(gl.ELEMENT_ARRAY_BUFFER, mesh.small, gl.STATIC_DRAW);
    gl.bindTexture(gl.TEXTURE_2D, gl.createTexture());
    gl.pixelStorei(gl.UNPACK_ALIGNMENT, 1);
    for (const [name, value] of [[gl.TEXTURE_MIN_FILTER, gl.LINEAR], [gl.TEXTURE_MAG_FILTER, gl.LINEAR], [gl.TEXTURE_WRAP_S, gl.CLAMP_TO_EDGE], [gl.TEXTURE_WRAP_T, gl.CLAMP_TO_EDGE]]) {
      gl.texParameteri(gl.TEXTURE_2D, name, value);
    }
    gl.clearColor(0, 0, 0, 0);
  }

  /**
   * What to show.
   * @param values Float32Array, one per node; low and high end of the colours; table: the ramp.
   * @param potential Float32Array for the level lines, or null; step: between them, in the same unit.
   */
  show({ values, low, high, table, potential, step }) {
    Object.assign(this, { values, low, high: high > low ? high : low + 1, table, potential, step });
    this.#upload();
  }

  #upload() {
    if (this.kind !== 'webgl' || !this.values) {
      return;
    }
    const { gl } = this;
    gl.bindBuffer(gl.ARRAY_BUFFER, this.valueBuffer);
    gl.bufferSubData(gl.ARRAY_BUFFER, 0, this.values);
    if (this.potential) {
      gl.bindBuffer(gl.ARRAY_BUFFER, this.potentialBuffer);
      gl.bufferSubData(gl.ARRAY_BUFFER, 0, this.potential);
    }
    if (this.sentTable !== this.table) {
      gl.texImage2D(gl.TEXTURE_2D, 0, gl.RGB8, 256, 1, 0, gl.RGB, gl.UNSIGNED_BYTE, this.table);
      this.sentTable = this.table;
    }
  }

  /** Sets the size in pixels of the screen and the view: pixels of the page per metre, and the place of the sheet's middle. */
  look(width, height, ratio, scale, left, top) {
    Object.assign(this, { width, height, ratio, scale, left, top });
    const w = Math.max(1, Math.round(width * ratio)), h = Math.max(1, Math.round(height * ratio));
    if (this.canvas.width !== w || this.canvas.height !== h) {
      this.canvas.width = w;
      this.canvas.height = h;
    }
  }

  draw() {
    if (this.values && this.width) {
      this.kind === 'webgl' ? this.#drawWebgl() : this.#drawPlain();
    }
  }

  #drawWebgl() {
    const { gl, places, width, height, scale, left, top } = this, size = this.mesh.box.diagonal * scale;
    gl.viewport(0, 0, this.canvas.width, this.canvas.height);
    gl.clear(gl.COLOR_BUFFER_BIT);
    gl.uniform4f(places.view, 2 * size / width, 2 * size / height, 2 * left / width - 1, 1 - 2 * top / height);
    gl.uniform2f(places.range, this.low, this.high);
    gl.uniform1f(places.step, this.step || 1);
    gl.uniform1f(places.lines, this.potential ? Math.max(1, this.ratio) : 0);
    gl.drawElements(gl.TRIANGLES, this.mesh.small.length, gl.UNSIGNED_INT, 0);
  }

  // Which pixel lies in which small triangle, and where in it, is found once per view; a new frame or quantity then costs a few steps per pixel,
  // however many triangles there are.
  #findPixels() {
    const { mesh, canvas, ratio } = this, w = canvas.width, h = canvas.height, { small, box } = mesh;
    const key = [w, h, this.scale, this.left, this.top].join();
    if (key === this.pixelKey) {
      return this.found;
    }
    this.pixelKey = key;
    const k = this.scale * ratio, ox = this.left * ratio - k * box.cx - 0.5, oy = this.top * ratio + k * box.cy - 0.5;
    const px = this.px ??= new Float64Array(mesh.count), py = this.py ??= new Float64Array(mesh.count);
    for (let i = 0; i < mesh.count; i++) {
      px[i] = ox + k * mesh.x[i];
      py[i] = oy - k * mesh.y[i];
    }
    const owner = new Int32Array(w * h).fill(-1), second = new Float32Array(w * h), third = new Float32Array(w * h);
    let count = 0;
    for (let s = 0; s < small.length; s += 3) {
      const a = small[s], b = small[s + 1], c = small[s + 2], ax = px[a], ay = py[a], bx = px[b], by = py[b], cx = px[c], cy = py[c];
      const y0 = Math.max(0, Math.ceil(Math.min(ay, by, cy))), y1 = Math.min(h - 1, Math.floor(Math.max(ay, by, cy)));
      const det = (bx - ax) * (cy - ay) - (by - ay) * (cx - ax);
      if (y0 > y1 || det === 0) {
        continue;
      }
      const bdx = (cy - ay) / det, bdy = (ax - cx) / det, cdx = (ay - by) / det, cdy = (bx - ax) / det;
      for (let y = y0; y <= y1; y++) {
        let from = Infinity, to = -Infinity;
        // Where the row meets the three sides.
        if ((ay <= y) !== (by <= y)) {
          from = to = ax + (y - ay) * (bx - ax) / (by - ay);
        }
        if ((by <= y) !== (cy <= y)) {
          const x = bx + (y - by) * (cx - bx) / (cy - by);
          from = Math.min(from, x);
          to = Math.max(to, x);
        }
        if ((cy <= y) !== (ay <= y)) {
          const x = cx + (y - cy) * (ax - cx) / (ay - cy);
          from = Math.min(from, x);
          to = Math.max(to, x);
        }
        const x1 = Math.min(w - 1, Math.floor(to));
        for (let x = Math.max(0, Math.ceil(from)), p = y * w + x; x <= x1; x++, p++) {
          count += owner[p] < 0 ? 1 : 0;
          owner[p] = s;
          second[p] = (x - ax) * bdx + (y - ay) * bdy;
          third[p] = (x - ax) * cdx + (y - ay) * cdy;
        }
      }
    }
    const found = { pixel: new Int32Array(count), a: new Int32Array(count), b: new Int32Array(count), c: new Int32Array(count), wb: new Float32Array(count), wc: new Float32Array(count) };
    for (let p = 0, n = 0; p < owner.length; p++) {
      const s = owner[p];
      if (s >= 0) {
        found.pixel[n] = p;
        found.a[n] = small[s];
        found.b[n] = small[s + 1];
        found.c[n] = small[s + 2];
        found.wb[n] = second[p];
        found.wc[n++] = third[p];
      }
    }
    this.image = this.pen.createImageData(w, h);
    this.pixels = new Uint32Array(this.image.data.buffer);
    this.levels = new Float32Array(w * h).fill(NaN);
    return this.found = found;
  }

  #drawPlain() {
    const { values, table, low } = this, { pixel, a, b, c, wb, wc } = this.#findPixels(), { pixels } = this;
    if (this.wordTable !== table) {
      this.words = new Uint32Array(256);
      for (let i = 0; i < 256; i++) {
        this.words[i] = (255 << 24 | table[3 * i + 2] << 16 | table[3 * i + 1] << 8 | table[3 * i]) >>> 0;
      }
      this.wordTable = table;
    }
    const { words } = this, span = 255 / (this.high - low), base = 0.5 - low * span;
    for (let n = 0; n < pixel.length; n++) {
      const va = values[a[n]], v = base + span * (va + wb[n] * (values[b[n]] - va) + wc[n] * (values[c[n]] - va));
      pixels[pixel[n]] = words[v < 0 ? 0 : v > 255 ? 255 : v | 0];
    }
    if (this.potential) {
      this.#drawLevels(this.found);
    }
    this.pen.putImageData(this.image, 0, 0);
  }

  // White lines with a dark hem, as the shader draws them: by the distance from a level in pixels.
  #drawLevels({ pixel, a, b, c, wb, wc }) {
    const { potential, levels, pixels } = this, w = this.canvas.width, inverse = 1 / (this.step || 1), lines = Math.max(1, this.ratio);
    for (let n = 0; n < pixel.length; n++) {
      const v = potential[a[n]];
      levels[pixel[n]] = inverse * (v + wb[n] * (potential[b[n]] - v) + wc[n] * (potential[c[n]] - v));
    }
    for (let n = 0; n < pixel.length; n++) {
      const p = pixel[n], level = levels[p], off = Math.abs(level - Math.round(level));
      let dx = Math.abs(levels[p + 1] - level), dy = Math.abs(levels[p + w] - level);
      // Not a number at the rim: look back instead.
      dx = dx >= 0 ? dx : Math.abs(level - levels[p - 1]);
      dy = dy >= 0 ? dy : Math.abs(level - levels[p - w]);
      const width = (dx >= 0 ? dx : 0) + (dy >= 0 ? dy : 0);
      if (off < 1.3 * lines * width && width < 0.5) {
        const away = off / width, fade = 1 - smoothstep(0.25, 0.5, width);
        const dark = 1 - 0.3 * fade * smoothstep(lines * 1.3, lines * 0.9, away), white = 0.95 * fade * smoothstep(lines * 0.75, lines * 0.35, away);
        const word = pixels[p], mix = v => Math.round(255 * white + v * dark * (1 - white));
        pixels[p] = (255 << 24 | mix(word >> 16 & 255) << 16 | mix(word >> 8 & 255) << 8 | mix(word & 255)) >>> 0;
      }
    }
  }
}

/** As in the shading language: 0 at one end, 1 at the other, smooth between; the ends may be given in either order. */
function smoothstep(from, to, x) {
  const t = Math.max(0, Math.min(1, (x - from) / (to - from)));
  return t * t * (3 - 2 * t);
}
