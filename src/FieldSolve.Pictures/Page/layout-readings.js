// Readings of the wiring on show with their error bars, their difference from a pinned reference, and the curves.

/** A value with its error: as many digits as the error leaves. */
function plusMinus(value, error, unit) {
  if (value === 0 && !(error > 0)) {
    return `0\u00A0${unit}`;
  }
  const scale = scaleFor(Math.max(Math.abs(value), Math.abs(error)), unit), f = scale.factor;
  const places = error > 0 ? Math.max(0, Math.min(9, 1 - Math.floor(Math.log10(error * f)))) : 4;
  const text = (value * f).toFixed(places);
  // No minus before what rounds to zero.
  return `${(Number(text) === 0 ? text.replace('-', '') : text).replace('-', '−')} ±\u00A0${(error * f).toFixed(places)}\u00A0${scale.unit}`;
}

class LayoutReadings {
  constructor(host, chartHost) {
    Object.assign(this, { host, chartHost, pinned: null, chart: null, names: '' });
  }

  /** Keeps the readings of an answer as the reference; null takes it away. */
  pin(answer) {
    this.pinned = answer;
  }

  #row(answer, wiring) {
    const rows = answer?.rows.filter(r => r.wiring === wiring) ?? [];
    return rows.length ? rows.reduce((best, r) => Math.abs(r.current) >= Math.abs(best.current) ? r : best) : null;
  }

  show(answer, wiring) {
    const row = this.#row(answer, wiring), reference = this.#row(this.pinned, wiring);
    if (answer?.failure || !row) {
      this.host.replaceChildren(html('p', { class: 'note-line' }, answer?.failure ? `No answer: ${answer.failure}.` : 'Waiting for an answer.'));
      return;
    }
    const head = ['', 'reading', 'odd part', 'even part'], body = html('tbody', null);
    const largest = Math.max(...row.readings.map(r => Math.abs(r.value)));
    for (const r of row.readings) {
      const share = largest > 0 ? Math.abs(r.value) / largest : 0, bar = svg('svg', { class: 'bar-line', viewBox: '0 0 100 6', preserveAspectRatio: 'none', 'aria-hidden': 'true' },
        svg('rect', { class: 'bar-back', x: 0, y: 0, width: 100, height: 6 }), svg('rect', { class: 'bar-fill', x: 0, y: 0, width: (100 * share).toFixed(2), height: 6 }),
        svg('rect', { class: 'bar-error', x: Math.max(0, 100 * share - 100 * r.error / (largest || 1)).toFixed(2), y: 0, width: Math.min(100, Math.max(0.6, 200 * r.error / (largest || 1))).toFixed(2), height: 6 }));
      const old = reference?.readings.find(o => o.pair === r.pair);
      // Errors of two answers are not independent; their sum is on the safe side.
      const change = (now, error, before, beforeError) => reference && now !== undefined ? [html('div', { class: 'change' }, before === undefined ? 'Δ –' : `Δ ${plusMinus(now - before, error + beforeError, 'V')}`)] : [];
      const cells = [
        html('th', { scope: 'row' }, r.pair), html('td', { class: 'main' }, plusMinus(r.value, r.error, 'V'), bar, ...change(r.value, r.error, old?.value, old?.error ?? 0)),
        html('td', null, r.odd === undefined ? '–' : plusMinus(r.odd, r.error, 'V'), ...change(r.odd, r.error, old?.odd, old?.error ?? 0)),
        html('td', null, r.even === undefined ? '–' : plusMinus(r.even, r.evenError ?? 0, 'V'), ...change(r.even, r.evenError ?? 0, old?.even, old?.evenError ?? 0)),
      ];
      body.append(html('tr', { 'data-pair': r.pair, 'data-value': r.value, 'data-error': r.error }, ...cells));
    }
    const status = row.status === 'ok' || !answer.accurate ? '' : ` Status ${row.status}.`;
    this.host.replaceChildren(
      html('div', { class: 'wide' }, html('table', { class: 'readings' }, html('caption', null, `${wiring} at ${quantity(row.current, 'A')}; errors are those of the numerics.${reference ? ` Δ is the change from the pinned reference${reference.current === row.current ? '' : `, which was at ${quantity(reference.current, 'A')}`}.` : ''}${status}`), html('thead', null, html('tr', null, ...head.map(h => html('th', { scope: 'col' }, h)))), body)));
    if (answer.cautions?.length) {
      this.host.append(html('details', { class: 'cautions' }, html('summary', null, answer.cautions.length > 1 ? `${answer.cautions.length} cautions and warnings` : '1 caution or warning'), html('ul', null, ...answer.cautions.map(c => html('li', null, c)))));
    }
  }

  /** Curves of all wirings of an answer. */
  curves(answer, wirings) {
    const rows = answer?.rows ?? [], views = [];
    const series = (pick, x) => wirings.map((name, look) => {
      const own = rows.filter(r => r.wiring === name).map(r => ({ r, p: pick(r) })).filter(o => o.p);
      return { name, look, x: own.map(o => x(o)), y: own.map(o => o.p.y), error: own.map(o => o.p.error), doubtful: own.map(o => answer.accurate && o.r.status !== 'ok'), frame: [] };
    });
    const of = (r, pair) => r.readings.find(x => x.pair === pair);
    if (rows.some(r => of(r, 'across')?.even) && rows.some(r => of(r, 'across')?.even !== undefined && of(r, 'along')?.odd !== undefined)) {
      views.push({
        label: 'even part', x: 'V_along, odd, squared', xUnit: 'V²', y: 'V_across, even', yUnit: 'V', kind: 'curve', categories: [], marks: [], logarithmic: false,
        series: series(r => of(r, 'across')?.even !== undefined && of(r, 'along')?.odd !== undefined ? { y: of(r, 'across').even, error: of(r, 'across').evenError ?? 0, x: of(r, 'along').odd ** 2 } : null, o => o.p.x),
      });
    }
    for (const pair of ['along', 'across', 'source']) {
      if (rows.some(r => of(r, pair))) {
        views.push({ label: pair, x: 'current', xUnit: 'A', y: `V_${pair}`, yUnit: 'V', kind: 'curve', categories: [], marks: [], logarithmic: false, series: series(r => of(r, pair) ? { y: of(r, pair).value, error: of(r, pair).error } : null, o => o.r.current) });
      }
    }
    if (!views.length) {
      return;
    }
    const names = JSON.stringify([wirings, views.map(v => v.label)]);
    if (names !== this.names) {
      this.names = names;
      this.chartHost.replaceChildren();
      this.chart = new Chart(this.chartHost, { id: 'curves', title: 'Curves', note: '', views }, null);
    } else {
      this.chart.spec.views = views;
      this.chart.view = views.find(v => v.label === this.chart.view.label) ?? views[0];
      this.chart.draw();
    }
  }
}
