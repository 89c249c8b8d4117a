// A square of numbers from -1 to 1 with a name for each row and column, such as correlations: blue for plus, orange for minus, the number in the field.

/** Draws a view of kind 'matrix' and hands back what can be read from it, row by row. */
function drawMatrix(plot, view, width) {
  const { categories } = view, n = categories.length, values = view.series[0].y, most = width < 420 ? 12 : 22, longest = Math.max(0, ...categories.map(c => Math.min(most, c.length)));
  const left = Math.min(0.4 * width, 14 + 7.4 * longest), top = 6, field = Math.max(8, Math.min(46, (width - left - 12) / Math.max(1, n))), flat = categories.every(c => c.length * 7.4 < field);
  const bottom = top + n * field, height = bottom + (flat ? 26 : 22 + 5.4 * longest), placed = [], labels = svg('g', { 'aria-hidden': 'true' });
  fill(plot, { width, height, viewBox: `0 0 ${width} ${height}` }, []);
  plot.replaceChildren();
  for (let i = 0; i < n; i++) {
    const row = [];
    for (let j = 0; j < n; j++) {
      const r = values[i * n + j], x = left + j * field, y = top + i * field, known = r !== null && i !== j;
      const words = i === j ? categories[i] : `${categories[i]} with ${categories[j]}: ${known ? `${number(100 * r, 4)} %` : 'not determined'}`;
      plot.append(svg('rect', { x: x.toFixed(2), y: y.toFixed(2), width: field.toFixed(2), height: field.toFixed(2), class: i === j ? 'self' : r < 0 ? 'f1' : 'f0', 'fill-opacity': i === j ? 1 : known ? Math.abs(r).toFixed(3) : 0 }));
      if (known && field >= 25) {
        labels.append(svg('text', { x: (x + field / 2).toFixed(1), y: (y + field / 2 + 4).toFixed(1), 'text-anchor': 'middle', class: Math.abs(r) > 0.55 ? 'on' : null }, number(Math.round(100 * r), 3)));
      }
      row.push({ s: view.series[0], k: i * n + j, u: x + field / 2, v: y + field / 2, words, box: [x, y, x + field, y + field] });
    }
    placed.push(row);
    labels.append(svg('text', { x: left - 8, y: (top + (i + 0.5) * field + 4).toFixed(1), 'text-anchor': 'end' }, shortened(categories[i], most)));
    const u = left + (i + 0.5) * field;
    labels.append(flat ? svg('text', { x: u.toFixed(1), y: bottom + 18, 'text-anchor': 'middle' }, categories[i])
      : svg('text', { transform: `translate(${(u + 4).toFixed(1)} ${bottom + 12}) rotate(-45)`, 'text-anchor': 'end' }, shortened(categories[i], most)));
  }
  const lines = Array.from({ length: n + 1 }, (_, k) => `M${left} ${(top + k * field).toFixed(1)}h${(n * field).toFixed(1)}M${(left + k * field).toFixed(1)} ${top}v${(n * field).toFixed(1)}`).join('');
  plot.append(svg('path', { class: 'grid', d: lines, fill: 'none' }), svg('path', { class: 'frame', d: `M${left} ${top}h${(n * field).toFixed(1)}v${(n * field).toFixed(1)}h${(-n * field).toFixed(1)}Z` }), labels);
  return placed;
}

/** What its colours mean. */
const matrixKey = () => [['f0', 'rise and fall together'], ['f1', 'one rises as the other falls']].map(([look, text]) => html('span', { class: 'tick' },
  svg('svg', { width: 18, height: 14, 'aria-hidden': 'true' }, svg('rect', { x: 1, y: 1, width: 16, height: 12, class: look })), text));

/** The numbers of such a view. */
function matrixRows(view) {
  const { categories } = view, n = categories.length;
  return [['first', 'second', view.y], ...view.series[0].y.map((r, k) => [categories[Math.floor(k / n)], categories[k % n], r])];
}
