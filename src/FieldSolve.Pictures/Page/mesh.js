// Quadratic triangles with six nodes each (corners 0, 1, 2, then the middles of edges 01, 12, 20), bent along arcs, as in the solver.

class Mesh {
  /** @param like a mesh whose triangles are the same, only placed otherwise; data then needs no corners. */
  constructor(data, like = null) {
    const places = doublesOf(data.places), firstMiddle = places.length / 2;
    if (like) {
      const { count, triangles, nodes, before, small } = like;
      Object.assign(this, { count, triangles, nodes, before, small });
    } else {
      this.count = data.count;
      this.triangles = data.triangles;
      this.#findNodes(data.corners, firstMiddle);
    }
    const { count, triangles, nodes, before } = this, x = this.x = new Float64Array(count), y = this.y = new Float64Array(count);
    for (let i = 0; i < firstMiddle; i++) {
      x[i] = places[2 * i];
      y[i] = places[2 * i + 1];
    }
    for (let i = firstMiddle; i < count; i++) {
      const a = before.first[i], b = before.second[i];
      x[i] = 0.5 * (x[a] + x[b]);
      y[i] = 0.5 * (y[a] + y[b]);
    }
    const bent = new Int32Array(bytesOf(data.bent).buffer), bentPlaces = doublesOf(data.bentPlaces), isBent = new Uint8Array(count);
    bent.forEach((n, i) => {
      x[n] = bentPlaces[2 * i];
      y[n] = bentPlaces[2 * i + 1];
      isBent[n] = 1;
    });
    this.bent = new Uint8Array(triangles);
    for (let t = 0, n = 0; t < triangles; t++, n += 6) {
      this.bent[t] = isBent[nodes[n + 3]] | isBent[nodes[n + 4]] | isBent[nodes[n + 5]];
    }
    this.#measure();
  }

  // Corners, middles and the four small triangles of each.
  #findNodes(packed, firstMiddle) {
    const { count, triangles } = this, corners = new Int32Array(3 * triangles);
    let next = 0;
    new PackedNumbers(packed).read(corners.length, (back, i) => {
      corners[i] = next - back;
      next += back === 0 ? 1 : 0;
    });
    const nodes = this.nodes = new Int32Array(6 * triangles), small = this.small = new Uint32Array(12 * triangles);
    this.before = { first: new Int32Array(count).fill(-1), second: new Int32Array(count).fill(-1) };
    this.#findMiddles(corners, firstMiddle);
    for (let t = 0, n = 0, at = 0; t < triangles; t++, n += 6) {
      const a = nodes[n], b = nodes[n + 1], c = nodes[n + 2], d = nodes[n + 3], e = nodes[n + 4], f = nodes[n + 5];
      for (const k of [a, d, f, d, b, e, f, e, c, d, e, f]) {
        small[at++] = k;
      }
    }
  }

  // Middles are numbered as they appear, going through the triangles and their edges 01, 12, 20.
  #findMiddles(corners, firstMiddle) {
    // The edges of each corner to those of higher number, as chains.
    const head = new Int32Array(firstMiddle).fill(-1), chain = new Int32Array(this.count), { first, second } = this.before;
    let next = firstMiddle, corner = 0;
    for (let t = 0; t < this.triangles; t++) {
      // What a frame's values may be foretold from: the known corners of the first triangle of each corner, the ends of each edge.
      for (let k = 0; k < 3; k++) {
        if (corners[3 * t + k] === corner) {
          for (let j = 0; j < 3; j++) {
            const other = corners[3 * t + j];
            if (other < corner) {
              second[corner] = first[corner] < 0 ? other : first[corner];
              first[corner] = other;
            }
          }
          corner++;
        }
      }
      for (let k = 0; k < 3; k++) {
        const a = corners[3 * t + k], b = corners[3 * t + (k + 1) % 3], low = a < b ? a : b;
        let m = head[low];
        while (m >= 0 && first[m] + second[m] !== a + b) {
          m = chain[m];
        }
        if (m < 0) {
          m = next++;
          chain[m] = head[low];
          head[low] = m;
          first[m] = a;
          second[m] = b;
        }
        this.nodes[6 * t + k] = a;
        this.nodes[6 * t + 3 + k] = m;
      }
    }
  }

  #measure() {
    let x0 = Infinity, x1 = -Infinity, y0 = Infinity, y1 = -Infinity;
    for (let i = 0; i < this.count; i++) {
      x0 = Math.min(x0, this.x[i]);
      x1 = Math.max(x1, this.x[i]);
      y0 = Math.min(y0, this.y[i]);
      y1 = Math.max(y1, this.y[i]);
    }
    this.box = { x0, x1, y0, y1, cx: (x0 + x1) / 2, cy: (y0 + y1) / 2, width: x1 - x0, height: y1 - y0, diagonal: Math.hypot(x1 - x0, y1 - y0) };
  }

  // Boxes with the triangles that touch them, made when a place is first looked for.
  get grid() {
    return this.boxes ??= this.#makeGrid();
  }

  #makeGrid() {
    const { x0, y0, width, height } = this.box, cell = Math.sqrt(width * height / Math.max(64, this.triangles)) || 1;
    const columns = Math.max(1, Math.ceil(width / cell)), rows = Math.max(1, Math.ceil(height / cell));
    const start = new Int32Array(columns * rows + 1), slack = 1e-9 * this.box.diagonal;
    const visit = act => {
      for (let t = 0; t < this.triangles; t++) {
        let a = Infinity, b = -Infinity, c = Infinity, d = -Infinity;
        for (let k = 0; k < 6; k++) {
          const n = this.nodes[6 * t + k], x = this.x[n], y = this.y[n];
          a = Math.min(a, x);
          b = Math.max(b, x);
          c = Math.min(c, y);
          d = Math.max(d, y);
        }
        const i0 = Math.max(0, Math.floor((a - slack - x0) / cell)), i1 = Math.min(columns - 1, Math.floor((b + slack - x0) / cell));
        const j0 = Math.max(0, Math.floor((c - slack - y0) / cell)), j1 = Math.min(rows - 1, Math.floor((d + slack - y0) / cell));
        for (let j = j0; j <= j1; j++) {
          for (let i = i0; i <= i1; i++) {
            act(j * columns + i, t);
          }
        }
      }
    };
    visit(box => start[box + 1]++);
    for (let i = 0; i < columns * rows; i++) {
      start[i + 1] += start[i];
    }
    const member = new Int32Array(start[columns * rows]), at = start.slice();
    visit((box, t) => {
      member[at[box]++] = t;
    });
    return { x0, y0, cell, columns, rows, start, member };
  }

  /** The triangle under a point and the point's coordinates (b, c) in it, a = 1 - b - c; null outside the sheet. */
  locate(x, y) {
    const g = this.grid, i = Math.floor((x - g.x0) / g.cell), j = Math.floor((y - g.y0) / g.cell);
    if (i < -1 || i > g.columns || j < -1 || j > g.rows) {
      return null;
    }
    const box = Math.max(0, Math.min(g.rows - 1, j)) * g.columns + Math.max(0, Math.min(g.columns - 1, i)), slack = 1e-9;
    for (let k = g.start[box]; k < g.start[box + 1]; k++) {
      const t = g.member[k], n = 6 * t, p = this.nodes[n], q = this.nodes[n + 1], r = this.nodes[n + 2];
      const ox = this.x[p], oy = this.y[p], ux = this.x[q] - ox, uy = this.y[q] - oy, vx = this.x[r] - ox, vy = this.y[r] - oy;
      const px = x - ox, py = y - oy, det = ux * vy - uy * vx;
      let b = (px * vy - py * vx) / det, c = (ux * py - uy * px) / det;
      if (this.bent[t]) {
        if (b < -0.5 || c < -0.5 || b + c > 1.5) {
          continue;
        }
        for (let step = 0; step < 8; step++) {
          const s = this.#jacobian(t, b, c), ex = x - s.x, ey = y - s.y, d = s.xb * s.yc - s.xc * s.yb;
          const db = (ex * s.yc - ey * s.xc) / d, dc = (ey * s.xb - ex * s.yb) / d;
          b += db;
          c += dc;
          if (Math.abs(db) + Math.abs(dc) < 1e-13) {
            break;
          }
        }
      }
      if (b >= -slack && c >= -slack && b + c <= 1 + slack) {
        return { t, b, c };
      }
    }
    return null;
  }

  // Place and its derivatives by (b, c); differences to the first corner keep the digits of tiny triangles.
  #jacobian(t, b, c) {
    const n = this.nodes.subarray(6 * t, 6 * t + 6), x0 = this.x[n[0]], y0 = this.y[n[0]], v = shape(b, c), d = slopes(b, c);
    let x = 0, y = 0, xb = 0, xc = 0, yb = 0, yc = 0;
    for (let i = 1; i < 6; i++) {
      const px = this.x[n[i]] - x0, py = this.y[n[i]] - y0;
      x += v[i] * px;
      y += v[i] * py;
      xb += d[2 * i] * px;
      xc += d[2 * i + 1] * px;
      yb += d[2 * i] * py;
      yc += d[2 * i + 1] * py;
    }
    return { x: x + x0, y: y + y0, xb, xc, yb, yc };
  }

  /** Value of the quadratic element at a located point. */
  value(values, at) {
    const v = shape(at.b, at.c), n = 6 * at.t;
    let sum = 0;
    for (let i = 0; i < 6; i++) {
      sum += v[i] * values[this.nodes[n + i]];
    }
    return sum;
  }

  /** E = -grad phi at a located point: [Ex, Ey]. */
  field(phi, at) {
    const s = this.#jacobian(at.t, at.b, at.c), d = slopes(at.b, at.c), n = 6 * at.t, first = phi[this.nodes[n]], det = s.xb * s.yc - s.xc * s.yb;
    let db = 0, dc = 0;
    for (let i = 1; i < 6; i++) {
      const p = phi[this.nodes[n + i]] - first;
      db += d[2 * i] * p;
      dc += d[2 * i + 1] * p;
    }
    return [-(db * s.yc - dc * s.yb) / det, -(dc * s.xb - db * s.xc) / det];
  }

  /** E at the nodes, averaged over the triangles that meet there with their areas as weights: for the colours. */
  nodeFields(phi) {
    const ex = new Float64Array(this.count), ey = new Float64Array(this.count), weight = new Float64Array(this.count), { nodes, x, y } = this;
    const corners = [[0, 0], [1, 0], [0, 1], [0.5, 0], [0.5, 0.5], [0, 0.5]], tables = corners.map(([b, c]) => slopes(b, c));
    for (let t = 0; t < this.triangles; t++) {
      const n = 6 * t, p = nodes[n], q = nodes[n + 1], r = nodes[n + 2], f0 = phi[p];
      const ux = x[q] - x[p], uy = y[q] - y[p], vx = x[r] - x[p], vy = y[r] - y[p], twice = ux * vy - uy * vx;
      const f1 = phi[q] - f0, f2 = phi[r] - f0, f3 = phi[nodes[n + 3]] - f0, f4 = phi[nodes[n + 4]] - f0, f5 = phi[nodes[n + 5]] - f0;
      for (let k = 0; k < 6; k++) {
        const d = tables[k], m = nodes[n + k];
        const db = d[2] * f1 + d[4] * f2 + d[6] * f3 + d[8] * f4 + d[10] * f5;
        const dc = d[3] * f1 + d[5] * f2 + d[7] * f3 + d[9] * f4 + d[11] * f5;
        let xb = ux, xc = vx, yb = uy, yc = vy, det = twice;
        if (this.bent[t]) {
          ({ xb, xc, yb, yc } = this.#jacobian(t, corners[k][0], corners[k][1]));
          det = xb * yc - xc * yb;
        }
        ex[m] -= twice * (db * yc - dc * yb) / det;
        ey[m] -= twice * (dc * xb - db * xc) / det;
        weight[m] += twice;
      }
    }
    for (let i = 0; i < this.count; i++) {
      ex[i] /= weight[i];
      ey[i] /= weight[i];
    }
    return { ex, ey };
  }

  /** Values below which given shares of the sheet's area lie. */
  percentiles(values, shares) {
    const mean = new Float64Array(this.triangles), area = new Float64Array(this.triangles), { nodes, x, y } = this;
    let all = 0;
    for (let t = 0; t < this.triangles; t++) {
      const p = nodes[6 * t], q = nodes[6 * t + 1], r = nodes[6 * t + 2];
      mean[t] = (values[nodes[6 * t + 3]] + values[nodes[6 * t + 4]] + values[nodes[6 * t + 5]]) / 3;
      area[t] = Math.abs((x[q] - x[p]) * (y[r] - y[p]) - (y[q] - y[p]) * (x[r] - x[p]));
      all += area[t];
    }
    // Buckets instead of a sort: a thousandth of the range is finer than any eye.
    let low = Infinity, high = -Infinity;
    for (const v of mean) {
      low = Math.min(low, v);
      high = Math.max(high, v);
    }
    const logs = low > 0, lo = logs ? Math.log(low) : low, hi = logs ? Math.log(high) : high, bins = new Float64Array(4001);
    for (let t = 0; t < this.triangles; t++) {
      bins[hi > lo ? Math.round(4000 * ((logs ? Math.log(mean[t]) : mean[t]) - lo) / (hi - lo)) : 0] += area[t];
    }
    return shares.map(share => {
      let sum = 0, k = 0;
      while (k < 4000 && (sum += bins[k]) < share * all) {
        k++;
      }
      const v = lo + (hi - lo) * k / 4000;
      return logs ? Math.exp(v) : v;
    });
  }
}

/** The six shape functions at (b, c). */
function shape(b, c) {
  const a = 1 - b - c;
  return [a * (2 * a - 1), b * (2 * b - 1), c * (2 * c - 1), 4 * a * b, 4 * b * c, 4 * c * a];
}

/** Their derivatives by b and c, in pairs. */
function slopes(b, c) {
  const a = 1 - b - c;
  return [1 - 4 * a, 1 - 4 * a, 4 * b - 1, 0, 0, 4 * c - 1, 4 * (a - b), -4 * b, 4 * c, 4 * b, -4 * c, 4 * (a - c)];
}
