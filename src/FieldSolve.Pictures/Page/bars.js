// Bars by name, and histograms with upright marks.

/** Draws a view of kind 'bars' or 'histogram' into an SVG element of a given size. */
function drawBars(plot, view, series, width, height) {
  const bars = view.kind === 'bars', tilt = bars && view.categories.some(name => name.length * 7 > (width - 86) / Math.max(1, view.categories.length));
  const left = 72, right = width - 14, top = view.marks.length ? 26 : 10, bottom = height - (tilt ? 96 : 46), values = series.flatMap(s => s.curve ? s.curve[1] : s.y);
  const low = Math.min(0, ...values), high = Math.max(0, ...values, low === 0 && !values.some(v => v > 0) ? 1 : 0), sy = scaleFor(Math.max(-low, high), view.yUnit), room = 0.05 * (high - low);
  const ay = makeAxis((low < 0 ? low - room : 0) * sy.factor, (high > 0 ? high + room : 0) * sy.factor, bottom, top, false);
  fill(plot, { width, height, viewBox: `0 0 ${width} ${height}` }, []);
  plot.replaceChildren();
  const grid = svg('g', { class: 'grid' }), labels = svg('g', { 'aria-hidden': 'true' });
  for (const v of ay.ticks) {
    grid.append(svg('path', { d: `M${left} ${ay.at(v).toFixed(1)}H${right}` }));
    labels.append(svg('text', { x: left - 7, y: (ay.at(v) + 4).toFixed(1), 'text-anchor': 'end' }, number(v, 6)));
  }
  plot.append(grid);
  const rect = (x0, x1, v, look, words, opacity) => {
    const a = ay.at(0), b = ay.at(v * sy.factor);
    plot.append(svg('rect', { x: x0.toFixed(2), y: Math.min(a, b).toFixed(2), width: Math.max(0.5, x1 - x0).toFixed(2), height: Math.abs(a - b).toFixed(2), opacity, ...fillOf(look) }, svg('title', null, words)));
  };
  if (bars) {
    const step = (right - left) / Math.max(1, view.categories.length), each = 0.8 * step / Math.max(1, series.length);
    series.forEach((s, k) => s.x.forEach((x, n) => {
      const from = left + (x + 0.1) * step + k * each;
      rect(from, from + each, s.y[n], s.look, `${s.name}, ${view.categories[x]}: ${quantity(s.y[n], view.yUnit, 5)}`, 1);
      const e = s.error[n] ?? 0, u = from + each / 2, v0 = ay.at((s.y[n] - e) * sy.factor), v1 = ay.at((s.y[n] + e) * sy.factor);
      if (v0 - v1 > 2.5) {
        plot.append(svg('path', { class: 'ink', d: `M${u.toFixed(1)} ${v0.toFixed(1)}V${v1.toFixed(1)}` }));
      }
    }));
    view.categories.forEach((name, k) => {
      const u = left + (k + 0.5) * step;
      labels.append(tilt
        ? svg('text', { transform: `translate(${u.toFixed(1)} ${bottom + 12}) rotate(-40)`, 'text-anchor': 'end' }, name.length > 16 ? name.slice(0, 15) + '…' : name)
        : svg('text', { x: u.toFixed(1), y: bottom + 18, 'text-anchor': 'middle' }, name));
    });
    labels.append(svg('text', { x: right, y: height - 6, 'text-anchor': 'end' }, view.x));
  } else {
    const edges = [...series.flatMap(s => s.x), ...view.marks.map(m => m.x)], sx = scaleFor(Math.max(0, ...edges.map(Math.abs)), view.xUnit);
    const ax = makeAxis(Math.min(...edges) * sx.factor, Math.max(...edges) * sx.factor, left, right, false);
    for (const s of series) {
      s.y.forEach((v, n) => rect(ax.at(s.x[n] * sx.factor), ax.at(s.x[n + 1] * sx.factor), v, s.look, `${s.name}: ${quantity(s.x[n], view.xUnit, 5)} to ${quantity(s.x[n + 1], view.xUnit, 5)}: ${number(v, 6)}`, series.filter(c => !c.curve).length > 1 ? 0.6 : 0.9));
    }
    for (const s of series.filter(s => s.curve)) {
      const d = s.curve[0].map((x, k) => `${k ? 'L' : 'M'}${ax.at(x * sx.factor).toFixed(1)} ${ay.at(s.curve[1][k] * sy.factor).toFixed(1)}`).join('');
      plot.append(svg('path', { d, fill: 'none', 'stroke-width': 1.8, 'stroke-dasharray': dashOf(s.look), ...strokeOf(s.look) }));
    }
    for (const v of ax.ticks) {
      labels.append(svg('text', { x: ax.at(v).toFixed(1), y: bottom + 18, 'text-anchor': 'middle' }, number(v, 6)));
    }
    view.marks.forEach((m, k) => {
      const u = ax.at(m.x * sx.factor).toFixed(1);
      plot.append(svg('path', { class: 'ink', 'stroke-dasharray': '5 3', d: `M${u} ${top}V${bottom}` }));
      labels.append(svg('text', { x: u, y: top - 5 - 11 * (k % 2), 'text-anchor': 'middle' }, m.name));
    });
    labels.append(svg('text', { x: (left + right) / 2, y: height - 8, 'text-anchor': 'middle' }, view.x + (sx.unit ? ` (${sx.unit})` : '')));
  }
  labels.append(svg('text', { transform: `translate(15 ${(top + bottom) / 2}) rotate(-90)`, 'text-anchor': 'middle' }, view.y + (sy.unit ? ` (${sy.unit})` : '')));
  plot.append(svg('path', { class: 'frame', d: `M${left} ${top}V${bottom}H${right}V${top}Z` }), svg('path', { class: 'ink', d: `M${left} ${ay.at(0).toFixed(1)}H${right}` }), labels);
}

/** The numbers of such a view. */
function barRows(view, series) {
  return view.kind === 'bars'
    ? [['series', view.x, `${view.y} (${view.yUnit})`, `error (${view.yUnit})`], ...series.flatMap(s => s.x.map((x, k) => [s.name, view.categories[x], s.y[k], s.error[k]]))]
    : [['series', `from (${view.xUnit})`, `to (${view.xUnit})`, view.y], ...series.flatMap(s => s.y.map((y, k) => [s.name, s.x[k], s.x[k + 1], y]))];
}
