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
    group.replaceChildren(svg('title', null, c.name + (words ? `, ${words.spoken}` : '')), ...shapesOf(c, { u, v, d, role, chosen, mark }));
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

// Width of a text in the font of the names, pixels.
const nameWidths = new Map(), namePen = html('canvas').getContext('2d');

function nameWidth(text) {
  if (!nameWidths.has(text)) {
    namePen.font = '600 12px "DejaVu Sans", Verdana, Geneva, sans-serif';
    nameWidths.set(text, namePen.measureText(text).width);
  }
  return nameWidths.get(text);
}

/** A name of at most so many letters: its beginning and its end, which often is a number. */
function shortName(name, most) {
  const letters = [...name];
  return letters.length <= most ? name : `${letters.slice(0, Math.ceil(most / 2)).join('')}…${letters.slice(letters.length - Math.floor(most / 2) + 1).join('')}`;
}

// Boxes [left, top, right, bottom] on the screen.
const meet = (a, b) => a[0] < b[2] && b[0] < a[2] && a[1] < b[3] && b[1] < a[3];
const inflated = (b, by) => [b[0] - by, b[1] - by, b[2] + by, b[3] + by];

function boxOn(stage, c, by) {
  const box = extentOf([c.kind === 'tip' ? c.middle : c.points]), [u, v] = stage.toScreen(box.cx, box.cy), k = stage.fit * stage.zoom / 2;
  return [u - k * box.width - by, v - k * box.height - by, u + k * box.width + by, v + k * box.height + by];
}

/** Where a name can stand, the best first: { x, y, anchor, own } with own for a place in its own pad. Those of edges and pads stand away from the middle of the sheet, those of tips above them. */
function namePlaces(stage, c, wide, box) {
  const [u, v] = stage.toScreen(...c.middle), [mu, mv] = stage.toScreen(stage.extent.cx, stage.extent.cy), far = Math.hypot(u - mu, v - mv) || 1, places = [];
  const first = c.kind === 'tip' ? -Math.PI / 2 : Math.atan2(v - mv, u - mu);
  if (c.kind === 'pad') {
    // In it where it fits, else beyond its outermost corner, up or down.
    const inside = { x: u, y: v + 4, anchor: 'middle', own: true }, above = { x: u, y: box[1] - 3, anchor: 'middle' }, below = { x: u, y: box[3] + 12, anchor: 'middle' };
    places.push(...box[2] - box[0] > wide + 8 && box[3] - box[1] > 20 ? [inside] : [], ...v - mv > 0 ? [below, above] : [above, below]);
  } else if (c.kind === 'tip') {
    places.push({ x: u, y: v - 10, anchor: 'middle' });
  }
  for (const distance of [0, 9]) {
    for (const turn of [0, 1, -1, 2, -2, 3, -3, 4]) {
      const angle = first + turn * Math.PI / 4, du = Math.cos(angle), dv = Math.sin(angle);
      places.push({ x: u + (15 + distance) * du, y: v + (18 + distance) * dv + 4, anchor: du > 0.4 ? 'start' : du < -0.4 ? 'end' : 'middle' });
    }
  }
  return places;
}

/** The names of the contacts, clear of contacts, of the dial and of one another: at other places or shortened where they are too long. The contact itself tells its whole name. */
function nameNodes(stage, roles, dial) {
  const frame = [stage.margin.left + 3, stage.margin.top + 1, stage.margin.left + stage.inner.width - 3, stage.margin.top + stage.inner.height - 1], boxes = stage.state.contacts.map(c => boxOn(stage, c, c.kind === 'edge' ? 4 : 6)), taken = [...dial], nodes = [];
  // Those that the wiring uses choose first.
  const order = stage.state.contacts.map((c, k) => ({ c, k, ...roleOf(roles[k]) })).filter(({ k }) => meet(boxes[k], frame)).sort((a, b) => Boolean(b.role) - Boolean(a.role) || a.k - b.k);
  for (const { c, k, role, words } of order) {
    let best = null;
    for (const most of [40, 12, 8, 5]) {
      const text = shortName(c.name, most) + (words ? ` ${words.short}` : ''), wide = nameWidth(text);
      if (best?.cost === 0 || text === best?.text) {
        continue;
      }
      for (const { x, y, anchor, own } of namePlaces(stage, c, wide, boxes[k])) {
        const before = { start: 0, middle: wide / 2, end: wide }[anchor], left = Math.max(frame[0], Math.min(frame[2] - wide, x - before)), base = Math.max(frame[1] + 11, Math.min(frame[3] - 3, y)), box = [left, base - 11, left + wide, base + 3];
        // One that stands far off seems to belong to another contact.
        const cost = boxes.reduce((sum, b, j) => sum + (meet(b, box) && !(own && j === k) ? 1 : 0), 0) + 3 * taken.filter(b => meet(b, box)).length + (meet(inflated(boxes[k], 24), box) ? 0 : 2);
        if (cost < (best?.cost ?? Infinity)) {
          best = { cost, text, box, x: left + before, y: base, anchor };
        }
        if (cost === 0) {
          break;
        }
      }
    }
    taken.push([best.box[0] - 2, best.box[1], best.box[2] + 2, best.box[3]]);
    const attributes = { class: `tag ${role}`, x: best.x.toFixed(1), y: best.y.toFixed(1), 'text-anchor': best.anchor };
    nodes.push(stage.kept.of(`name ${c.name}`, JSON.stringify([attributes, best.text]), () => svg('text', attributes, best.text)));
  }
  return nodes;
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
