// What is drawn over the map: contacts, pads and tips with their names, and the corners of an outline.

/** What a contact does in a wiring, for its name on the map and in words; a contact may serve several pairs. */
function roleOf(raw) {
  const all = (raw ?? '').split(' ').filter(r => r), marks = { source: 'I+', drain: 'I−', along: '∥', across: '⊥' };
  const parts = all.map(r => ({ role: r.replace(/[+-]$/, ''), sign: r.endsWith('+') ? '+' : r.endsWith('-') ? '−' : '' }));
  return { role: parts[0]?.role ?? '', words: parts.length ? { short: parts.map(p => `${marks[p.role] ?? ''}${p.sign}`).join(' '), spoken: parts.map(p => `${p.role} ${p.sign}`.trim()).join(', ') } : null };
}

/** One contact, pad or tip; onkey(e, contact) gets its keys. The element stays the same as long as there is a contact of that name, so that it keeps the focus. */
function partNode(stage, c, role, words, onkey) {
  const chosen = c.name === stage.selected, mark = stage.marks?.get(c.name), [u, v] = stage.toScreen(...c.middle), d = c.kind === 'tip' ? '' : stage.pathOf(c.points, c.kind === 'pad');
  const attributes = {
    class: `part ${chosen ? 'chosen' : ''}`, tabindex: stage.tool === 'move' ? 0 : -1, 'aria-pressed': String(chosen),
    'aria-label': `${{ edge: 'Contact', pad: 'Pad', tip: 'Tip' }[c.kind]} ${c.name}${words ? `, ${words.spoken}` : ''}; x ${number(c.middle[0] * stage.unit.factor, 4)}, y ${number(c.middle[1] * stage.unit.factor, 4)} ${stage.unit.unit}. Arrow keys move it.${mark ? ` Misplaced it changes V_across by ${mark.text}.` : ''}`,
  };
  const make = before => {
    const group = fill(before ?? svg('g', {
      'data-contact': c.name, role: 'button', onkeydown: e => onkey(e, stage.state.contacts.find(o => o.name === c.name)), onfocus: () => stage.act.select(c.name),
    }), attributes, []);
    group.replaceChildren(...shapesOf(c, { u, v, d, role, chosen, mark }));
    return group;
  };
  return stage.kept.of(`part ${c.name}`, JSON.stringify([attributes, c.kind, role, mark?.share, d || [u, v]]), make);
}

function shapesOf(c, { u, v, d, role, chosen, mark }) {
  if (c.kind === 'tip') {
    return [svg('circle', { class: 'grip', cx: u.toFixed(1), cy: v.toFixed(1), r: 13 }), svg('circle', { class: `tip ${role}`, cx: u.toFixed(1), cy: v.toFixed(1), r: chosen ? 6 : 4.5 })];
  }
  const wide = c.kind === 'pad' ? 2 : mark ? 8 : role ? 7 : 5, nodes = [svg('path', { class: 'grip', d, 'stroke-width': 22 })];
  if (chosen) {
    nodes.push(svg('path', { class: 'chosen-line', d, 'stroke-width': wide + 9 }));
  }
  if (mark) {
    nodes.push(svg('path', { class: 'sensed-edge', 'stroke-width': wide + 3, d }), svg('path', { class: 'sensed', stroke: rgbText(RAMPS.ember, mark.share), fill: c.kind === 'pad' ? rgbText(RAMPS.ember, mark.share) : 'none', 'fill-opacity': 0.8, 'stroke-width': wide, d }));
  } else {
    nodes.push(svg('path', { class: 'halo', 'stroke-width': wide + 2.5, d }), svg('path', { class: `${c.kind === 'pad' ? 'pad ' : ''}metal ${role}`, 'stroke-width': wide, d }));
  }
  return nodes;
}

/** Names stand outside: those of edges and pads away from the middle of the sheet, those of tips above them. */
function nameNode(stage, c, role, words) {
  const [u, v] = stage.toScreen(...c.middle), [mu, mv] = stage.toScreen(stage.extent.cx, stage.extent.cy), far = Math.hypot(u - mu, v - mv) || 1, text = c.name + (words ? ` ${words.short}` : '');
  let du = (u - mu) / far, dv = (v - mv) / far, x = u + 15 * du, y = v + 18 * dv + 4;
  if (c.kind === 'tip') {
    [du, x, y] = [0, u, v - 10];
  } else if (c.kind === 'pad') {
    // Beyond its outermost corner, up or down, unless the name fits into it.
    const at = [];
    for (let i = 0; i < c.points.length; i += 2) {
      at.push(stage.toScreen(c.points[i], c.points[i + 1]));
    }
    const low = Math.max(...at.map(p => p[1])), high = Math.min(...at.map(p => p[1])), wide = Math.max(...at.map(p => p[0])) - Math.min(...at.map(p => p[0]));
    [du, x] = [0, u];
    y = wide > 8 * text.length + 8 && low - high > 20 ? v + 4 : dv > 0 ? low + 15 : high - 6;
  }
  // Names stay within the frame; letters are about 8 pixels wide.
  const anchor = du > 0.4 ? 'start' : du < -0.4 ? 'end' : 'middle', wide = 8 * text.length, before = { start: 0, middle: wide / 2, end: wide }[anchor];
  x = Math.max(stage.margin.left + 3 + before, Math.min(stage.margin.left + stage.inner.width - 3 - wide + before, x));
  y = Math.max(stage.margin.top + 12, Math.min(stage.margin.top + stage.inner.height - 4, y));
  const attributes = { class: `tag ${role}`, x: x.toFixed(1), y: y.toFixed(1), 'text-anchor': anchor };
  return stage.kept.of(`name ${c.name}`, JSON.stringify([attributes, text]), () => svg('text', attributes, text));
}

/** Corners of the outline, and between them the places where one can be added; onkey(e, loop, corner) gets their keys. */
function cornerNodes(stage, points, loop, onkey) {
  const n = points.length / 2, nodes = [];
  for (let k = 0; k < n; k++) {
    const j = (k + 1) % n, [u, v] = stage.toScreen(points[2 * k], points[2 * k + 1]), [u1, v1] = stage.toScreen(points[2 * j], points[2 * j + 1]), picked = stage.picked?.loop === loop && stage.picked.k === k;
    if (Math.hypot(u1 - u, v1 - v) > 26) {
      nodes.push(svg('circle', { class: 'mid', cx: ((u + u1) / 2).toFixed(1), cy: ((v + v1) / 2).toFixed(1), r: 4.5, 'data-mid': `${loop}:${k}` }, svg('title', null, 'Drag to add a corner')));
    }
    nodes.push(svg('rect', {
      class: `corner ${picked ? 'picked' : ''}`, x: (u - 5).toFixed(1), y: (v - 5).toFixed(1), width: 10, height: 10, 'data-corner': `${loop}:${k}`, tabindex: 0, role: 'button',
      'aria-label': `Corner ${k + 1} of ${loop ? `hole ${loop}` : 'the outline'}; x ${number(points[2 * k] * stage.unit.factor, 4)}, y ${number(points[2 * k + 1] * stage.unit.factor, 4)} ${stage.unit.unit}. Arrow keys move it, Insert adds one behind it, Delete removes it.`,
      onkeydown: e => onkey(e, loop, k), onfocus: () => { if (!stage.picked || stage.picked.loop !== loop || stage.picked.k !== k) { stage.picked = { loop, k }; stage.act.pickCorner(loop, k); stage.draw(); } },
    }));
  }
  return nodes;
}
