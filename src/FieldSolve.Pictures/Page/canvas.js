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
      this.done = '';
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

  /** Shows nothing. */
  clear() {
    this.canvas.width = this.canvas.width;
    this.done = '';
  }

  /** Goes on with another mesh; for the plain kind, whose canvas knows nothing of meshes. */
  use(mesh) {
    this.mesh = mesh;
    this.done = '';
  }

  // Triangle by triangle and row by row: value and level grow by fixed steps along a row. Costs less than to remember which pixel lies where.
  #drawPlain() {
    const { mesh, canvas, ratio, values, potential, table, low, high, step } = this, w = canvas.width, h = canvas.height;
    const key = [w, h, this.scale, this.left, this.top, low, high, step].join();
    if (key === this.done && this.drawn?.values === values && this.drawn.potential === potential && this.drawn.table === table) {
      return;
    }
    this.done = key;
    this.drawn = { values, potential, table };
    if (this.image?.width !== w || this.image.height !== h) {
      this.image = this.pen.createImageData(w, h);
      this.pixels = new Uint32Array(this.image.data.buffer);
    } else {
      this.pixels.fill(0);
    }
    if (this.wordTable !== table) {
      this.words = new Uint32Array(256);
      for (let i = 0; i < 256; i++) {
        this.words[i] = (255 << 24 | table[3 * i + 2] << 16 | table[3 * i + 1] << 8 | table[3 * i]) >>> 0;
      }
      this.wordTable = table;
    }
    const k = this.scale * ratio, ox = this.left * ratio - k * mesh.box.cx - 0.5, oy = this.top * ratio + k * mesh.box.cy - 0.5, count = mesh.count;
    if (!(this.px?.length >= count)) {
      this.px = new Float64Array(count);
      this.py = new Float64Array(count);
    }
    const { px, py } = this;
    for (let i = 0; i < count; i++) {
      px[i] = ox + k * mesh.x[i];
      py[i] = oy - k * mesh.y[i];
    }
    fillTriangles({ pixels: this.pixels, w, h, small: mesh.small, px, py, values, words: this.words, low, span: 255 / (high - low), potential, inverse: 1 / (step || 1), thick: Math.max(1, ratio) });
    this.pen.putImageData(this.image, 0, 0);
  }
}

// Level lines are white with a dark hem, as the shader draws them: by the distance from a level in pixels.
function fillTriangles({ pixels, w, h, small, px, py, values, words, low, span, potential, inverse, thick }) {
  const start = 0.5 - low * span;
  for (let s = 0; s < small.length; s += 3) {
    const a = small[s], b = small[s + 1], c = small[s + 2], ax = px[a], ay = py[a], bx = px[b], by = py[b], cx = px[c], cy = py[c];
    const y0 = Math.max(0, Math.ceil(ay < by ? ay < cy ? ay : cy : by < cy ? by : cy)), y1 = Math.min(h - 1, Math.floor(ay > by ? ay > cy ? ay : cy : by > cy ? by : cy));
    const det = (bx - ax) * (cy - ay) - (by - ay) * (cx - ax);
    if (y0 > y1 || det === 0 || (ax < 0 && bx < 0 && cx < 0) || (ax >= w && bx >= w && cx >= w)) {
      continue;
    }
    const bdx = (cy - ay) / det, bdy = (ax - cx) / det, cdx = (ay - by) / det, cdy = (bx - ax) / det;
    const va = values[a], vb = span * (values[b] - va), vc = span * (values[c] - va), vdx = vb * bdx + vc * cdx, vdy = vb * bdy + vc * cdy, v0 = start + span * va;
    let l0 = 0, ldx = 0, ldy = 0, near = 0, width = 1;
    if (potential) {
      const la = potential[a], lb = inverse * (potential[b] - la), lc = inverse * (potential[c] - la);
      l0 = inverse * la;
      ldx = lb * bdx + lc * cdx;
      ldy = lb * bdy + lc * cdy;
      width = Math.abs(ldx) + Math.abs(ldy);
      near = width > 0 && width < 0.5 ? 1.3 * thick * width : 0;
    }
    for (let y = y0; y <= y1; y++) {
      let from = Infinity, to = -Infinity;
      // Where the row meets the three sides.
      if ((ay <= y) !== (by <= y)) {
        from = to = ax + (y - ay) * (bx - ax) / (by - ay);
      }
      if ((by <= y) !== (cy <= y)) {
        const x = bx + (y - by) * (cx - bx) / (cy - by);
        from = x < from ? x : from;
        to = x > to ? x : to;
      }
      if ((cy <= y) !== (ay <= y)) {
        const x = cx + (y - cy) * (ax - cx) / (ay - cy);
        from = x < from ? x : from;
        to = x > to ? x : to;
      }
      const x0 = from > 0 ? Math.ceil(from) : 0, x1 = to < w - 1 ? Math.floor(to) : w - 1, row = y * w;
      let v = v0 + (x0 - ax) * vdx + (y - ay) * vdy, level = l0 + (x0 - ax) * ldx + (y - ay) * ldy;
      for (let p = row + x0; p <= row + x1; p++, v += vdx, level += ldx) {
        const word = words[v < 0 ? 0 : v > 255 ? 255 : v | 0];
        if (near > 0) {
          const off = Math.abs(level - Math.floor(level + 0.5));
          pixels[p] = off < near ? onLine(word, off / width, width, thick) : word;
        } else {
          pixels[p] = word;
        }
      }
    }
  }
}

function onLine(word, away, width, thick) {
  const fade = 1 - smoothstep(0.25, 0.5, width), dark = 1 - 0.3 * fade * smoothstep(thick * 1.3, thick * 0.9, away), white = 0.95 * fade * smoothstep(thick * 0.75, thick * 0.35, away), keep = dark * (1 - white), plus = 255 * white + 0.5;
  return (255 << 24 | (plus + (word >> 16 & 255) * keep) << 16 | (plus + (word >> 8 & 255) * keep) << 8 | (plus + (word & 255) * keep)) >>> 0;
}

/** As in the shading language: 0 at one end, 1 at the other, smooth between; the ends may be given in either order. */
function smoothstep(from, to, x) {
  const t = Math.max(0, Math.min(1, (x - from) / (to - from)));
  return t * t * (3 - 2 * t);
}
