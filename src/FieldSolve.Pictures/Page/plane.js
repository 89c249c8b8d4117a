// What every view of the sheet shares: places to pixels and back, zooming and shifting by the pointer, the axes and the strip of colours.

/** Box around lists of points x, y, x, y, …, metres. */
function extentOf(lists) {
  let x0 = Infinity, x1 = -Infinity, y0 = Infinity, y1 = -Infinity;
  for (const points of lists) {
    for (let i = 0; i < points.length; i += 2) {
      x0 = Math.min(x0, points[i]);
      x1 = Math.max(x1, points[i]);
      y0 = Math.min(y0, points[i + 1]);
      y1 = Math.max(y1, points[i + 1]);
    }
  }
  return { cx: (x0 + x1) / 2, cy: (y0 + y1) / 2, width: x1 - x0, height: y1 - y0 };
}

class Plane {
  /** @param least and most: how far it zooms. */
  constructor(least, most) {
    Object.assign(this, { leastZoom: least, mostZoom: most, zoom: 1, panX: 0, panY: 0 });
  }

  /** Pixels of the stage for a place, and back. */
  toScreen(x, y) {
    const s = this.fit * this.zoom, box = this.extent;
    return [this.margin.left + this.inner.width / 2 + this.panX + s * (x - box.cx), this.margin.top + this.inner.height / 2 + this.panY - s * (y - box.cy)];
  }

  toPlace(u, v) {
    const s = this.fit * this.zoom, box = this.extent;
    return [box.cx + (u - this.margin.left - this.inner.width / 2 - this.panX) / s, box.cy - (v - this.margin.top - this.inner.height / 2 - this.panY) / s];
  }

  /** Path data of points x, y, x, y, … */
  pathOf(points, close = false) {
    let d = '';
    for (let i = 0; i < points.length; i += 2) {
      const [u, v] = this.toScreen(points[i], points[i + 1]);
      d += `${i ? 'L' : 'M'}${u.toFixed(1)} ${v.toFixed(1)}`;
    }
    return close && d ? d + 'Z' : d;
  }

  /** Zooms about a point of the stage; the middle by default. */
  zoomBy(factor, u = this.margin.left + this.inner.width / 2, v = this.margin.top + this.inner.height / 2) {
    const [x, y] = this.toPlace(u, v);
    this.zoom = Math.max(this.leastZoom, Math.min(this.mostZoom, this.zoom * factor));
    if (this.zoom === 1) {
      this.panX = this.panY = 0;
    } else {
      const [u1, v1] = this.toScreen(x, y);
      this.panX += u - u1;
      this.panY += v - v1;
    }
    this.draw();
  }

  /** Shows the whole sheet again. */
  whole() {
    this.zoom = 1;
    this.panX = this.panY = 0;
    this.draw();
  }

  /** Zooms by a wheel's event. */
  wheel(e) {
    e.preventDefault();
    this.zoomBy(Math.exp(-(e.deltaY || e.deltaX) / 400), ...this.where(e));
  }

  /** Pixels of the stage for a pointer. */
  where(e) {
    const box = this.stage.getBoundingClientRect();
    return [e.clientX - box.left, e.clientY - box.top];
  }

  /** Holds a pointer until it is let go. */
  hold(e) {
    e.preventDefault();
    this.stage.setPointerCapture(e.pointerId);
    this.last = this.where(e);
  }

  /** Shifts the view by what the pointer moved since it was last seen. */
  shift(u, v) {
    this.panX += u - this.last[0];
    this.panY += v - this.last[1];
    this.last = [u, v];
    this.draw();
  }

  /** Puts the canvas, and whatever else fills the frame, in its place, and gives the overlay its size. */
  layOut(overlay, ...frames) {
    const { width, height, margin, inner } = this;
    fill(overlay, { width, height, viewBox: `0 0 ${width} ${height}` }, []);
    for (const node of frames) {
      for (const [name, value] of [['width', inner.width], ['height', inner.height], ['left', margin.left], ['top', margin.top]]) {
        node.style[name] = value + 'px';
      }
    }
    this.stage.style.height = height + 'px';
  }

  /** Frame, ticks and names of the two axes. */
  axisNodes() {
    const { margin, inner, unit } = this, right = margin.left + inner.width, bottom = margin.top + inner.height, f = unit.factor;
    const [x0, y1] = this.toPlace(margin.left, margin.top), [x1, y0] = this.toPlace(right, bottom), step = roundStep((x1 - x0) * f, 7), nodes = [];
    const text = v => number(Math.abs(v) < 1e-9 * step ? 0 : v, 6);
    for (const v of multiples(x0 * f, x1 * f, step)) {
      const [u] = this.toScreen(v / f, 0);
      nodes.push(svg('path', { class: 'frame', d: `M${u.toFixed(1)} ${bottom}v5` }), svg('text', { x: u.toFixed(1), y: bottom + 18, 'text-anchor': 'middle' }, text(v)));
    }
    for (const v of multiples(y0 * f, y1 * f, step)) {
      const [, w] = this.toScreen(0, v / f);
      nodes.push(svg('path', { class: 'frame', d: `M${margin.left} ${w.toFixed(1)}h-5` }), svg('text', { x: margin.left - 8, y: (w + 4).toFixed(1), 'text-anchor': 'end' }, text(v)));
    }
    nodes.push(
      svg('path', { class: 'frame', d: `M${margin.left} ${margin.top}V${bottom}H${right}V${margin.top}Z` }),
      svg('text', { x: right, y: bottom + 34, 'text-anchor': 'end' }, `x (${unit.unit})`),
      svg('text', { transform: `translate(13 ${margin.top + 30}) rotate(-90)`, 'text-anchor': 'middle' }, `y (${unit.unit})`));
    return nodes;
  }
}

/** A strip of colours with its values and a line of words. */
function rampLegend(legend, id, { low, high, unit, log, table, label, words, width, left }) {
  const right = width - 16, defs = svg('linearGradient', { id });
  for (let k = 0; k <= 32; k++) {
    defs.append(svg('stop', { offset: k / 32, 'stop-color': rgbText(table, k / 32) }));
  }
  const scale = scaleFor(Math.max(Math.abs(low), Math.abs(high)), unit), axis = makeAxis(low * scale.factor, (high > low ? high : low + 1) * scale.factor, left, right, log), narrow = width < 460;
  fill(legend, { width, height: 54, viewBox: `0 0 ${width} 54`, 'aria-label': `Colours: ${label} from ${quantity(low, unit)} to ${quantity(high, unit)}` }, []);
  legend.replaceChildren(svg('defs', null, defs), svg('rect', { x: left, y: 4, width: right - left, height: 13, fill: `url(#${id})`, class: 'frame-line' }));
  for (const v of axis.ticks) {
    const u = axis.at(v);
    if (u >= left - 1 && u <= right + 1) {
      legend.append(svg('path', { class: 'frame', d: `M${u.toFixed(1)} 17v4` }), svg('text', { x: u.toFixed(1), y: 33, 'text-anchor': 'middle' }, number(v, 5)));
    }
  }
  legend.append(svg('text', { x: narrow ? 4 : left, y: 50 }, `${label}${scale.unit ? ` (${scale.unit})` : ''}${log && !narrow ? ', logarithmic' : ''}${words}`));
}
