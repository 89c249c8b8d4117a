// The sheet law as the run sampled it: K = s E + |E| N, N a Fourier sum over the angle of E in the crystal frame, cubic pieces in ln |E|.

class Law {
  /** @param table the table of another turn of the same law; by default that of the data. */
  constructor(data, table = doublesOf(data.table)) {
    this.data = data;
    Object.assign(this, { zero: data.zero, first: data.first, step: data.step, count: data.count, terms: data.degree + 1, error: data.error });
    this.cos = Math.cos(data.axis);
    this.sin = Math.sin(data.axis);
    this.table = table;
    this.sums = new Float64Array(12);
  }

  /** The law with the crystal turned by an angle; it shares the table. */
  turned(angle) {
    return angle ? new Law({ ...this.data, axis: this.data.axis + angle }, this.table) : this;
  }

  /** Fills out with Kx, Ky and, if wanted, dKx/dEx, dKx/dEy, dKy/dEx, dKy/dEy in the lab frame. */
  at(ex, ey, out, slope = false) {
    const { cos, sin, zero } = this, ea = cos * ex + sin * ey, eb = cos * ey - sin * ex;
    let ka = zero[0] * ea + zero[1] * eb, kb = zero[2] * ea + zero[3] * eb, aa = zero[0], ab = zero[1], ba = zero[2], bb = zero[3];
    const r = Math.hypot(ea, eb);
    if (this.count > 0 && r > 0) {
      const c1 = ea / r, s1 = eb / r, s = this.#sum(r, c1, s1);
      ka += r * s[0];
      kb += r * s[1];
      if (slope) {
        // d(r N)/dE = (N + dN/d ln r) e_r + dN/d angle e_angle.
        aa += (s[0] + s[2]) * c1 - s[4] * s1;
        ab += (s[0] + s[2]) * s1 + s[4] * c1;
        ba += (s[1] + s[3]) * c1 - s[5] * s1;
        bb += (s[1] + s[3]) * s1 + s[5] * c1;
      }
    }
    out[0] = cos * ka - sin * kb;
    out[1] = sin * ka + cos * kb;
    if (slope) {
      const p = cos * aa - sin * ba, q = cos * ab - sin * bb, u = sin * aa + cos * ba, v = sin * ab + cos * bb;
      out[2] = p * cos - q * sin;
      out[3] = p * sin + q * cos;
      out[4] = u * cos - v * sin;
      out[5] = u * sin + v * cos;
    }
  }

  // N, dN/d ln r and dN/d angle for both components.
  #sum(r, c1, s1) {
    const { table, terms, step, sums } = this, n = terms, place = (Math.log(r) - this.first) / step, below = place < 0;
    const u = Math.max(0, Math.min(this.count - 1, place)), j = Math.min(this.count - 2, Math.floor(u)), t = u - j;
    const h0 = (1 + 2 * t) * (1 - t) * (1 - t), g0 = step * t * (1 - t) * (1 - t), h1 = t * t * (3 - 2 * t), g1 = step * t * t * (t - 1);
    const d0 = 6 * t * (t - 1) / step, e0 = (1 - t) * (1 - 3 * t), d1 = -d0, e1 = t * (3 * t - 2);
    sums.fill(0);
    let c = 1, s = 0;
    for (let m = 0; m < n; m++) {
      for (let q = 0; q < 2; q++) {
        let k = (8 * j + 2 * q) * n + m;
        const p0 = table[k], p1 = table[k + n], v0 = table[k + 4 * n], v1 = table[k + 5 * n];
        k += 8 * n;
        const q0 = table[k], q1 = table[k + n], w0 = table[k + 4 * n], w1 = table[k + 5 * n];
        const a = h0 * p0 + g0 * v0 + h1 * q0 + g1 * w0, b = h0 * p1 + g0 * v1 + h1 * q1 + g1 * w1;
        sums[q] += a * c + b * s;
        sums[2 + q] += (d0 * p0 + e0 * v0 + d1 * q0 + e1 * w0) * c + (d0 * p1 + e0 * v1 + d1 * q1 + e1 * w1) * s;
        sums[4 + q] += m * (b * c - a * s);
      }
      const next = c * c1 - s * s1;
      s = s * c1 + c * s1;
      c = next;
    }
    if (below) {
      // Below the table N starts in proportion to |E|.
      const f = r / Math.exp(this.first);
      for (let k = 0; k < 6; k++) {
        sums[k] *= f;
      }
      sums[2] = sums[0];
      sums[3] = sums[1];
    }
    return sums;
  }
}
