// Polygons traced on the sheet or on a micrograph: an outline, holes, pads. They snap to corners, to edges, and to the horizontal and the vertical.

const SNAP = 9;
// How far across the rim a corner of a pad is set, pixels: one on the rim itself, rounded in a file, would leave a strip of sheet of next to no width.
const ACROSS = 5;

class Trace {
  /** @param plane the view; changed() is told of every change; rims() and others() give polygons [x, y, …] to snap to, the sheet left of the rims. */
  constructor(plane, { changed, rims, others }) {
    Object.assign(this, { plane, changed, rims, others, shapes: [], open: null, kind: 'outline', near: null, held: null });
  }

  /** Where a point goes: to a corner, an edge, or level with the last corner; free with the Alt key. */
  snap([x, y], free = false, without = null) {
    const { plane } = this, [u, v] = plane.toScreen(x, y), start = this.open?.[0], last = this.open?.[this.open.length - 1];
    if (free) {
      return { x, y, by: '' };
    }
    const pad = (without ? without.shape.kind : this.kind) === 'pad', traced = this.shapes.map(s => ({ kind: s.kind, list: s.points.flatMap((p, k) => s === without?.shape && k === without.index ? [] : p) }));
    // A traced outline is to replace the sheet on show.
    const rims = traced.some(s => s.kind === 'outline') ? traced.filter(s => s.kind !== 'pad').map(s => sheetLeft(s.list, s.kind === 'hole')) : this.rims();
    const lists = [...this.others(), ...pad ? [] : this.rims(), ...traced.filter(s => !pad || s.kind === 'pad').map(s => s.list)];
    let best = null;
    const corner = (p, by) => {
      const [a, b] = plane.toScreen(...p), d = Math.hypot(a - u, b - v);
      if (d < (best?.d ?? SNAP)) {
        best = { x: p[0], y: p[1], by, d };
      }
    };
    if (start) {
      corner(start, 'first corner');
    }
    for (const list of lists) {
      for (let i = 0; i + 1 < list.length; i += 2) {
        corner([list[i], list[i + 1]], 'corner');
      }
    }
    if (best) {
      return best;
    }
    for (const list of lists) {
      for (let i = 0, n = list.length; i + 1 < n; i += 2) {
        const a = plane.toScreen(list[i], list[i + 1]), b = plane.toScreen(list[(i + 2) % n], list[(i + 3) % n]), t = nearestOn(a, b, [u, v]), d = Math.hypot(a[0] + t * (b[0] - a[0]) - u, a[1] + t * (b[1] - a[1]) - v);
        if (d < (best?.d ?? SNAP)) {
          best = { x: list[i] + t * (list[(i + 2) % n] - list[i]), y: list[i + 1] + t * (list[(i + 3) % n] - list[i + 1]), by: 'edge', d };
        }
      }
    }
    const over = pad ? across(plane, rims, [u, v], best?.d ?? SNAP) : null;
    if (over ?? best) {
      return over ?? best;
    }
    // Level with the last corner, and with the first, which gives rectangles.
    const made = { x, y, by: '' };
    for (const p of [start, last]) {
      if (p) {
        const [a, b] = plane.toScreen(...p);
        if (Math.abs(b - v) < 0.7 * SNAP) {
          Object.assign(made, { y: p[1], by: made.by === 'vertical' ? 'corner of a rectangle' : 'horizontal' });
        } else if (Math.abs(a - u) < 0.7 * SNAP) {
          Object.assign(made, { x: p[0], by: made.by === 'horizontal' ? 'corner of a rectangle' : 'vertical' });
        }
      }
    }
    return made;
  }

  /** The next corner, or the end of the polygon when it is the first one again. */
  add(place, free = false) {
    const at = this.snap(place, free);
    if (!this.open) {
      this.open = [[at.x, at.y]];
    } else if (at.x === this.open[0][0] && at.y === this.open[0][1]) {
      this.close();
      return;
    } else if (at.x !== this.open[this.open.length - 1][0] || at.y !== this.open[this.open.length - 1][1]) {
      this.open.push([at.x, at.y]);
    }
    this.changed();
  }

  /** Ends the polygon; under three corners there is none. */
  close() {
    if (this.open?.length >= 3) {
      let k = this.shapes.filter(s => s.kind === 'pad').length + 1;
      while (this.shapes.some(s => s.name === `w${k}`)) {
        k++;
      }
      this.shapes.push({ kind: this.kind, name: this.kind === 'pad' ? `w${k}` : '', points: this.open });
      // The outline is traced once; pads follow.
      this.kind = this.kind === 'outline' ? 'pad' : this.kind;
      this.open = null;
    }
    this.changed();
  }

  /** Takes the last corner back. */
  back() {
    this.open?.pop();
    this.open = this.open?.length ? this.open : null;
    this.changed();
  }

  cancel() {
    this.open = null;
    this.changed();
  }

  remove(shape) {
    this.shapes = this.shapes.filter(s => s !== shape);
    this.changed();
  }

  /** Moves all corners along with the picture that they were traced on. */
  carry(change) {
    for (const points of [...this.shapes.map(s => s.points), this.open ?? []]) {
      points.forEach((p, k) => { points[k] = change(p); });
    }
  }

  /** What travels to the program. */
  get request() {
    return this.shapes.map(s => ({ kind: s.kind, name: s.name, corners: s.points.flat() }));
  }

  nodes(active, handlers) {
    const { plane } = this, nodes = [];
    this.shapes.forEach((s, index) => {
      const d = plane.pathOf(s.points.flat(), true);
      nodes.push(svg('path', { class: 'trace-halo', d }), svg('path', { class: `trace ${s.kind}`, d }));
      if (s.name && !handlers.taken(s.name)) {
        const n = s.points.length, [u, v] = plane.toScreen(s.points.reduce((t, p) => t + p[0] / n, 0), s.points.reduce((t, p) => t + p[1] / n, 0));
        nodes.push(svg('text', { class: 'tag', x: u.toFixed(1), y: (v + 4).toFixed(1), 'text-anchor': 'middle' }, s.name));
      }
      if (active && !this.open) {
        s.points.forEach((p, k) => {
          const [u, v] = plane.toScreen(...p);
          nodes.push(svg('rect', { class: 'corner traced', x: (u - 4.5).toFixed(1), y: (v - 4.5).toFixed(1), width: 9, height: 9, 'data-traced': `${index}:${k}`, tabindex: 0, role: 'button', 'aria-label': `Corner ${k + 1} of the traced ${s.name || s.kind}. Arrow keys move it, Delete removes it.`, onkeydown: e => handlers.key(e, index, k) }));
        });
      }
    });
    if (this.open) {
      const points = this.near ? [...this.open, [this.near.x, this.near.y]] : this.open, d = plane.pathOf(points.flat());
      nodes.push(svg('path', { class: 'trace-halo', d }), svg('path', { class: 'trace open', d }));
      this.open.forEach((p, k) => {
        const [u, v] = plane.toScreen(...p);
        nodes.push(svg('circle', { class: `corner-dot ${k ? '' : 'first'}`, cx: u.toFixed(1), cy: v.toFixed(1), r: k ? 3.2 : 6 }));
      });
    }
    if (active && this.near) {
      const [u, v] = plane.toScreen(this.near.x, this.near.y);
      nodes.push(svg('path', { class: 'trace-halo', d: `M${u - 10} ${v}h20M${u} ${v - 10}v20` }), svg('path', { class: 'measure', d: `M${u - 10} ${v}h20M${u} ${v - 10}v20` }));
      if (this.near.by) {
        nodes.push(svg('text', { class: 'tag', x: (u + 12).toFixed(1), y: (v - 8).toFixed(1) }, this.near.by));
      }
    }
    return nodes;
  }
}

/** The polygon with the sheet on its left: counter-clockwise, a hole clockwise. */
function sheetLeft(list, hole) {
  let area = 0;
  for (let i = 0, n = list.length; i < n; i += 2) {
    area += list[i] * list[(i + 3) % n] - list[(i + 2) % n] * list[i + 1];
  }
  return area > 0 === hole ? list.map((_, i) => list[list.length - 2 - i + 2 * (i % 2)]) : list;
}

/** The place across the rim beside a point that lies within a distance of it, both in pixels; null for others. */
function across(plane, rims, p, within) {
  let best = null;
  for (const rim of rims) {
    const at = [];
    for (let i = 0; i + 1 < rim.length; i += 2) {
      const q = plane.toScreen(rim[i], rim[i + 1]), last = at[at.length - 1];
      if (!last || Math.hypot(q[0] - last[0], q[1] - last[1]) > 0.01) {
        at.push(q);
      }
    }
    // The screen's second axis points down, so the way out, right of the rim, is (-dy, dx) there.
    const out = k => {
      const a = at.at(k), b = at[(k + 1 + at.length) % at.length], l = Math.hypot(b[0] - a[0], b[1] - a[1]);
      return [-(b[1] - a[1]) / l, (b[0] - a[0]) / l];
    };
    for (let k = 0; at.length >= 3 && k < at.length; k++) {
      const a = at[k], b = at[(k + 1) % at.length], t = nearestOn(a, b, p), q = [a[0] + t * (b[0] - a[0]), a[1] + t * (b[1] - a[1])], d = Math.hypot(q[0] - p[0], q[1] - p[1]);
      if (d < (best?.d ?? within)) {
        // Across both edges at a corner.
        const n = out(k), m = t === 0 ? out(k - 1) : t === 1 ? out((k + 1) % at.length) : n, s = ACROSS / Math.max(0.2, 1 + n[0] * m[0] + n[1] * m[1]);
        const [x, y] = plane.toPlace(q[0] + s * (n[0] + m[0]), q[1] + s * (n[1] + m[1]));
        best = { x, y, by: 'across the edge', d };
      }
    }
  }
  return best;
}

/** Share of the way from a to b at which the line is nearest to p. */
function nearestOn(a, b, p) {
  const dx = b[0] - a[0], dy = b[1] - a[1], size = dx * dx + dy * dy;
  return size > 0 ? Math.max(0, Math.min(1, ((p[0] - a[0]) * dx + (p[1] - a[1]) * dy) / size)) : 0;
}
