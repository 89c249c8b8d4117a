// Two perpendicular lines over the sheet, and the profiles along them for all frames.

const PROFILE_POINTS = 401;

class Crossing {
  constructor(mesh, direction) {
    this.mesh = mesh;
    this.x = mesh.box.cx;
    this.y = mesh.box.cy;
    this.angle = ((direction % 360) + 360) % 360;
    this.version = 0;
    this.#locate();
  }

  /** Moves and turns the lines; what is undefined stays. The middle stays within the sheet's box. */
  set({ x = this.x, y = this.y, angle = this.angle }) {
    const { box } = this.mesh;
    this.x = Math.max(box.x0, Math.min(box.x1, x));
    this.y = Math.max(box.y0, Math.min(box.y1, y));
    this.angle = ((angle % 360) + 360) % 360;
    this.#locate();
  }

  /** Unit vector of line 0 or 1. */
  along(line) {
    const turn = (this.angle + 90 * line) * Math.PI / 180;
    return [Math.cos(turn), Math.sin(turn)];
  }

  // Points over the stretch of each line that crosses the sheet's box, with their triangles: found once, used for all frames.
  #locate() {
    const { box } = this.mesh;
    this.version++;
    this.lines = [0, 1].map(line => {
      const [c, s] = this.along(line);
      let low = -Infinity, high = Infinity;
      for (const [d, p, a, b] of [[c, this.x, box.x0, box.x1], [s, this.y, box.y0, box.y1]]) {
        if (Math.abs(d) > 1e-12) {
          low = Math.max(low, Math.min((a - p) / d, (b - p) / d));
          high = Math.min(high, Math.max((a - p) / d, (b - p) / d));
        }
      }
      const points = [];
      for (let k = 0; k < PROFILE_POINTS; k++) {
        // A hair inside, so that the ends do not round to the outside.
        const at = low + (high - low) * (k + 1e-6) / (PROFILE_POINTS - 1 + 2e-6), x = this.x + at * c, y = this.y + at * s;
        points.push({ at, x, y, place: this.mesh.locate(x, y) });
      }
      return { low, high, points };
    });
  }

  /** Values along a line: one number per point, NaN outside the sheet. */
  profile(line, evaluate) {
    return this.lines[line].points.map(p => p.place ? evaluate(p.place) : NaN);
  }
}

/** Profiles of all frames, the present one in strong ink. */
class ProfilePlot {
  constructor(label) {
    this.plot = svg('svg', { class: 'plot profile', role: 'img' });
    this.label = label;
  }

  /** @param data { points, curves: [numbers], unit, name, log, width, angle } */
  draw(data) {
    const { points, curves, unit, name, log } = data, width = Math.max(240, data.width), height = Math.round(Math.max(150, Math.min(210, width * 0.42)));
    const { plot } = this, left = 66, right = width - 10, top = 22, bottom = height - 38;
    let low = Infinity, high = -Infinity;
    for (const curve of curves) {
      for (const v of curve) {
        if (Number.isFinite(v) && (!log || v > 0)) {
          low = Math.min(low, v);
          high = Math.max(high, v);
        }
      }
    }
    if (!(high >= low)) {
      [low, high] = log ? [1, 10] : [0, 1];
    }
    const sx = scaleFor(Math.max(Math.abs(points[0].at), Math.abs(points[points.length - 1].at)), 'm'), sy = scaleFor(Math.max(Math.abs(low), Math.abs(high)), unit);
    const room = log ? 0 : (high - low || 1) * 0.05;
    const ax = makeAxis(points[0].at * sx.factor, points[points.length - 1].at * sx.factor, left, right, false);
    const ay = makeAxis(log ? low * sy.factor / 1.1 : (low - room) * sy.factor, log ? high * sy.factor * 1.1 : (high + room) * sy.factor, bottom, top, log);
    plot.replaceChildren();
    plot.setAttribute('width', width);
    plot.setAttribute('height', height);
    plot.setAttribute('viewBox', `0 0 ${width} ${height}`);
    plot.setAttribute('aria-label', `${this.label}: ${name} along the line at ${number(data.angle, 4)}°, from ${quantity(low, unit)} to ${quantity(high, unit)} over all values of the drive.`);
    const grid = svg('g', { class: 'grid' }), labels = svg('g', null);
    for (const v of ax.ticks) {
      grid.append(svg('path', { d: `M${ax.at(v).toFixed(1)} ${top}V${bottom}` }));
      labels.append(svg('text', { x: ax.at(v).toFixed(1), y: bottom + 16, 'text-anchor': 'middle' }, number(v, 6)));
    }
    for (const v of ay.ticks) {
      grid.append(svg('path', { d: `M${left} ${ay.at(v).toFixed(1)}H${right}` }));
      labels.append(svg('text', { x: left - 6, y: (ay.at(v) + 4).toFixed(1), 'text-anchor': 'end' }, number(v, 5)));
    }
    labels.append(
      svg('text', { x: left, y: 14 }, `${this.label}, at ${number(Math.round(data.angle * 100) / 100, 5)}°`),
      svg('text', { x: right, y: height - 6, 'text-anchor': 'end' }, `distance from the crossing (${sx.unit})`),
      svg('text', { transform: `translate(13 ${(top + bottom) / 2}) rotate(-90)`, 'text-anchor': 'middle' }, sy.unit ? `${name} (${sy.unit})` : name));
    plot.append(grid, svg('path', { class: 'frame', d: `M${left} ${top}V${bottom}H${right}V${top}Z` }), labels);
    const us = points.map(p => ax.at(p.at * sx.factor).toFixed(1));
    const from = isDark() ? 0.25 : 0.05, to = isDark() ? 1 : 0.72;
    curves.forEach((curve, k) => plot.append(this.#curve(curve, us, ay, sy.factor, log, { stroke: rgbText(RAMPS.shore, from + (to - from) * k / Math.max(1, curves.length - 1)), 'stroke-width': 1.1 })));
    if (points[0].at <= 0 && points[points.length - 1].at >= 0) {
      plot.append(svg('path', { class: 'ink', 'stroke-dasharray': '2 3', d: `M${ax.at(0).toFixed(1)} ${top}V${bottom}` }));
    }
    this.strong = svg('path', { fill: 'none', class: 'ink', 'stroke-width': 2.2 });
    plot.append(this.strong);
    this.shown = values => this.strong.setAttribute('d', this.#curve(values, us, ay, sy.factor, log, {}).getAttribute('d'));
  }

  #curve(values, us, ay, factor, log, look) {
    let d = '', open = false;
    for (let k = 0; k < values.length; k++) {
      const v = ay.at(values[k] * factor);
      if (!Number.isFinite(v) || (log && !(values[k] > 0))) {
        open = false;
        continue;
      }
      d += `${open ? 'L' : 'M'}${us[k]} ${v.toFixed(1)}`;
      open = true;
    }
    return svg('path', { d, fill: 'none', ...look });
  }
}
