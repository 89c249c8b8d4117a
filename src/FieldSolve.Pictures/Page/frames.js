// What can be shown of a frame, worked out from its potential.

const QUANTITIES = {
  phi: { label: 'potential φ', unit: 'V', table: 'shore', log: false },
  e: { label: 'field |E|', unit: 'V/m', table: 'ember', log: true },
  k: { label: 'current density |K|', unit: 'A/m', table: 'ember', log: true },
  p: { label: 'power density E·K', unit: 'W/m²', table: 'ember', log: true },
  a: { label: 'anisotropy of dK/dE', unit: '', table: 'dusk', log: false },
};

/** Ratio of the larger to the smaller eigenvalue of the symmetric part of a tensor (xx, xy, yx, yy from index 2 on). */
function anisotropy(d) {
  const mean = (d[2] + d[5]) / 2, half = (d[2] - d[5]) / 2, off = (d[3] + d[4]) / 2, r = Math.hypot(half, off);
  return mean > r ? (mean + r) / (mean - r) : Infinity;
}

/** Values of one frame at the nodes, worked out when they are first asked for. */
class FrameFields {
  /** @param all the fields of all frames of the map, from which a packed one is foretold. */
  constructor(mesh, law, frame, all) {
    Object.assign(this, { mesh, law, frame, all });
  }

  get phi() {
    if (!this.potential) {
      const { frame, mesh } = this;
      if (frame.rest) {
        this.potential = unpackFrame(mesh, frame, frame.from.map(k => this.all[k].phi));
        frame.rest = null;
        return this.potential;
      }
      const phi = new Float64Array(mesh.count).fill(frame.low);
      if (frame.phi) {
        const raw = new Uint32Array(bytesOf(frame.phi).buffer), step = (frame.high - frame.low) / 4294967295;
        for (let i = 0; i < raw.length; i++) {
          phi[i] = frame.low + raw[i] * step;
        }
        frame.phi = null;
      }
      this.potential = phi;
    }
    return this.potential;
  }

  get potentialFloats() {
    return this.floats ??= Float32Array.from(this.phi);
  }

  get field() {
    return this.nodeField ??= this.mesh.nodeFields(this.phi);
  }

  get current() {
    if (!this.nodeCurrent) {
      const { ex, ey } = this.field, kx = new Float64Array(ex.length), ky = new Float64Array(ex.length), out = new Float64Array(6);
      for (let i = 0; i < ex.length; i++) {
        this.law.at(ex[i], ey[i], out);
        kx[i] = out[0];
        ky[i] = out[1];
      }
      this.nodeCurrent = { kx, ky };
    }
    return this.nodeCurrent;
  }

  /** Node values of a quantity. */
  values(name) {
    this.cache ??= {};
    return this.cache[name] ??= this.#make(name);
  }

  #make(name) {
    if (name === 'phi') {
      return this.potentialFloats;
    }
    const { ex, ey } = this.field, out = new Float32Array(ex.length);
    if (name === 'e') {
      for (let i = 0; i < out.length; i++) {
        out[i] = Math.hypot(ex[i], ey[i]);
      }
    } else if (name === 'a') {
      const d = new Float64Array(6);
      for (let i = 0; i < out.length; i++) {
        this.law.at(ex[i], ey[i], d, true);
        out[i] = Math.min(1e6, anisotropy(d));
      }
    } else {
      const { kx, ky } = this.current;
      for (let i = 0; i < out.length; i++) {
        out[i] = name === 'k' ? Math.hypot(kx[i], ky[i]) : ex[i] * kx[i] + ey[i] * ky[i];
      }
    }
    return out;
  }

  /** Everything at a located point, from the quadratic element itself. */
  at(place) {
    const [ex, ey] = this.mesh.field(this.phi, place), out = new Float64Array(6);
    this.law.at(ex, ey, out, true);
    return { phi: this.mesh.value(this.phi, place), ex, ey, kx: out[0], ky: out[1], e: Math.hypot(ex, ey), k: Math.hypot(out[0], out[1]), p: ex * out[0] + ey * out[1], a: anisotropy(out) };
  }

  /** Range of colours: percentiles of the area, for logarithmic scales at most two decades. */
  range(name) {
    this.ranges ??= {};
    return this.ranges[name] ??= this.#range(name);
  }

  #range(name) {
    if (name === 'phi') {
      return [this.frame.low, this.frame.high];
    }
    const [low, high] = this.mesh.percentiles(this.values(name), [0.01, 0.99]);
    return QUANTITIES[name].log ? [Math.max(low, 0.01 * high), high] : [low, high];
  }

  lines(spacing) {
    const { kx, ky } = this.current;
    return this.flow ??= streamlines(this.mesh, kx, ky, spacing);
  }
}
