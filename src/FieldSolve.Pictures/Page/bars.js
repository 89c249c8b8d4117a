// Bars by name, lying, and histograms with upright marks. Both hand back what can be read from them: texts with their places.

/** Shortens a text for a place beside an axis. */
const shortened = (text, most) => text.length > most ? text.slice(0, most - 1) + '…' : text;

/** A rectangle between two corners. */
const barRect = (x0, y0, x1, y1, look) => svg('rect', {
  x: Math.min(x0, x1).toFixed(2), y: Math.min(y0, y1).toFixed(2), width: Math.max(0.5, Math.abs(x1 - x0)).toFixed(2), height: Math.max(0.5, Math.abs(y1 - y0)).toFixed(2), ...fillOf(look),
});

/** Draws a view of kind 'bars' or 'histogram' into an SVG element of a given size. */
function drawBars(plot, view, series, width, height) {
  plot.replaceChildren();
  return view.kind === 'bars' ? drawLyingBars(plot, view, series, width) : drawHistogram(plot, view, series, width, height);
}

// The first category on top; names need no turned heads.
function drawLyingBars(plot, view, series, width) {
  const most = width < 420 ? 16 : 30, longest = Math.max(0, ...view.categories.map(c => Math.min(most, c.length))), each = Math.max(20, 11 * series.length + 8);
  const left = Math.min(0.5 * width, 16 + 7.4 * longest), right = width - 16, top = 6, bottom = top + each * Math.max(1, view.categories.length), height = bottom + 46;
  fill(plot, { width, height, viewBox: `0 0 ${width} ${height}` }, []);
  const ends = series.flatMap(s => s.y.flatMap((y, k) => [y - (s.error[k] ?? 0), y + (s.error[k] ?? 0)])), low = Math.min(0, ...ends), high = Math.max(0, ...ends);
  const span = high - low || 1, sy = scaleFor(Math.max(-low, high), view.yUnit);
  const ax = makeAxis((low < 0 ? low - 0.04 * span : 0) * sy.factor, (high > 0 || low === 0 ? high + 0.04 * span : 0) * sy.factor, left, right, false);
  const grid = svg('g', { class: 'grid' }), labels = svg('g', { 'aria-hidden': 'true' }), placed = series.map(() => []);
  for (const v of ax.ticks) {
    grid.append(svg('path', { d: `M${ax.at(v).toFixed(1)} ${top}V${bottom}` }));
    labels.append(svg('text', { x: ax.at(v).toFixed(1), y: bottom + 17, 'text-anchor': 'middle' }, number(v, 6)));
  }
  plot.append(grid);
  const thick = (each - 6) / Math.max(1, series.length);
  series.forEach((s, k) => s.x.forEach((x, n) => {
    // A cause stands in one of the series: then its bar takes the whole height.
    const alone = series.every(o => o === s || !o.x.includes(x)), from = top + x * each + 3 + (alone ? 0 : k * thick), to = from + (alone ? each - 6 : thick), v = (from + to) / 2, u = ax.at(s.y[n] * sy.factor);
    const e = s.error[n] ?? 0, words = `${s.name}, ${view.categories[x]}: ${quantity(s.y[n], view.yUnit, 5)}${e > 0 ? ` ± ${quantity(e, view.yUnit, 2)}` : ''}`;
    const bar = barRect(ax.at(0), from, u, to, s.look);
    bar.append(svg('title', null, words));
    plot.append(bar);
    const u0 = ax.at((s.y[n] - e) * sy.factor), u1 = ax.at((s.y[n] + e) * sy.factor);
    if (u1 - u0 > 2.5) {
      plot.append(svg('path', { class: 'ink', d: `M${u0.toFixed(1)} ${v.toFixed(1)}H${u1.toFixed(1)}` }));
    }
    placed[k].push({ s, k: n, u, v, words, box: [0, top + x * each, width, top + (x + 1) * each] });
  }));
  view.categories.forEach((name, k) => labels.append(svg('text', { x: left - 8, y: (top + (k + 0.5) * each + 4).toFixed(1), 'text-anchor': 'end' }, shortened(name, most))));
  labels.append(svg('text', { x: (left + right) / 2, y: height - 8, 'text-anchor': 'middle' }, view.y + (sy.unit ? ` (${sy.unit})` : '')));
  plot.append(svg('path', { class: 'frame', d: `M${left} ${top}V${bottom}H${right}V${top}Z` }), svg('path', { class: 'ink', d: `M${ax.at(0).toFixed(1)} ${top}V${bottom}` }), labels);
  return placed;
}

function drawHistogram(plot, view, series, width, height) {
  const left = 72, right = width - 16, top = view.marks.length ? 34 : 10, bottom = height - 46, values = series.flatMap(s => s.curve ? s.curve[1] : s.y);
  const high = Math.max(0, ...values) || 1, ay = makeAxis(0, 1.05 * high, bottom, top, false), edges = [...series.flatMap(s => s.x), ...view.marks.map(m => m.x)];
  const sx = scaleFor(Math.max(0, ...edges.map(Math.abs)), view.xUnit), ax = makeAxis(Math.min(...edges) * sx.factor, Math.max(...edges) * sx.factor, left, right, false);
  fill(plot, { width, height, viewBox: `0 0 ${width} ${height}` }, []);
  const grid = svg('g', { class: 'grid' }), labels = svg('g', { 'aria-hidden': 'true' }), placed = series.map(() => []);
  for (const v of ay.ticks) {
    grid.append(svg('path', { d: `M${left} ${ay.at(v).toFixed(1)}H${right}` }));
    labels.append(svg('text', { x: left - 7, y: (ay.at(v) + 4).toFixed(1), 'text-anchor': 'end' }, number(v, 6)));
  }
  plot.append(grid);
  series.forEach((s, k) => s.y.forEach((y, n) => {
    const a = ax.at(s.x[n] * sx.factor), b = ax.at(s.x[n + 1] * sx.factor), words = `${s.name} from ${quantity(s.x[n], view.xUnit, 5)} to ${quantity(s.x[n + 1], view.xUnit, 5)}: ${number(y, 6)}`;
    const bar = barRect(a, ay.at(0), b, ay.at(y), s.look);
    bar.append(svg('title', null, words));
    plot.append(bar);
    placed[k].push({ s, k: n, u: (a + b) / 2, v: ay.at(y), words, box: [a, top, b, bottom] });
  }));
  for (const s of series.filter(s => s.curve)) {
    const d = s.curve[0].map((x, k) => `${k ? 'L' : 'M'}${ax.at(x * sx.factor).toFixed(1)} ${ay.at(s.curve[1][k]).toFixed(1)}`).join('');
    plot.append(svg('path', { d, fill: 'none', 'stroke-width': 1.8, 'stroke-dasharray': dashOf(s.look), ...strokeOf(s.look) }));
  }
  for (const v of ax.ticks) {
    labels.append(svg('text', { x: ax.at(v).toFixed(1), y: bottom + 18, 'text-anchor': 'middle' }, number(v, 6)));
  }
  // Names of marks that stand close together go on two lines; those at the ends stay within the picture.
  const last = [-Infinity, -Infinity];
  [...view.marks].sort((a, b) => a.x - b.x).forEach(m => {
    const u = ax.at(m.x * sx.factor), half = 3.8 * m.name.length, at = Math.max(left + half - 14, Math.min(right + 10 - half, u)), line = at - half > last[0] + 4 ? 0 : 1;
    last[line] = at + half;
    plot.append(svg('path', { class: 'ink', 'stroke-dasharray': '5 3', d: `M${u.toFixed(1)} ${top}V${bottom}` }));
    labels.append(svg('text', { x: at.toFixed(1), y: top - 6 - 13 * line, 'text-anchor': 'middle' }, m.name));
  });
  labels.append(
    svg('text', { x: (left + right) / 2, y: height - 8, 'text-anchor': 'middle' }, view.x + (sx.unit ? ` (${sx.unit})` : '')),
    svg('text', { transform: `translate(15 ${(top + bottom) / 2}) rotate(-90)`, 'text-anchor': 'middle' }, view.y));
  plot.append(svg('path', { class: 'frame', d: `M${left} ${top}V${bottom}H${right}V${top}Z` }), svg('path', { class: 'ink', d: `M${left} ${ay.at(0).toFixed(1)}H${right}` }), labels);
  return placed;
}

/** The numbers of such a view. */
function barRows(view, series) {
  return view.kind === 'bars'
    ? [['series', view.x, `${view.y} (${view.yUnit})`, `error (${view.yUnit})`], ...series.flatMap(s => s.x.map((x, k) => [s.name, view.categories[x], s.y[k], s.error[k]]))]
    : [['series', `from (${view.xUnit})`, `to (${view.xUnit})`, view.y], ...series.flatMap(s => s.y.map((y, k) => [s.name, s.x[k], s.x[k + 1], y]))];
}
