// Lines of current over the sheet.

/**
 * Lines along a vector field with roughly even spacing, after B. Jobard and W. Lefer, "Creating evenly-spaced streamlines of arbitrary
 * density", Visualization in Scientific Computing '97, 43-56. Each is a list x, y, x, y, … in the direction of the field.
 */
function streamlines(mesh, vx, vy, spacing) {
  const taken = new Map(), { box } = mesh, lines = [];
  let top = 0;
  for (let i = 0; i < mesh.count; i++) {
    top = Math.max(top, Math.hypot(vx[i], vy[i]));
  }
  if (!(top > 0)) {
    return lines;
  }
  const vectorAt = (px, py) => {
    const at = mesh.locate(px, py);
    if (!at) {
      return null;
    }
    // Straight within each quarter: averages at the nodes do not overshoot then.
    const n = 6 * at.t, { b, c } = at, a = 1 - b - c, m = mesh.nodes;
    let i, j, k, wi, wj, wk;
    if (a >= 0.5) {
      [i, j, k, wi, wj, wk] = [m[n], m[n + 3], m[n + 5], 2 * a - 1, 2 * b, 2 * c];
    } else if (b >= 0.5) {
      [i, j, k, wi, wj, wk] = [m[n + 1], m[n + 4], m[n + 3], 2 * b - 1, 2 * c, 2 * a];
    } else if (c >= 0.5) {
      [i, j, k, wi, wj, wk] = [m[n + 2], m[n + 5], m[n + 4], 2 * c - 1, 2 * a, 2 * b];
    } else {
      [i, j, k, wi, wj, wk] = [m[n + 3], m[n + 4], m[n + 5], 1 - 2 * c, 1 - 2 * a, 1 - 2 * b];
    }
    const ux = wi * vx[i] + wj * vx[j] + wk * vx[k], uy = wi * vy[i] + wj * vy[j] + wk * vy[k], size = Math.hypot(ux, uy);
    return size > 1e-9 * top ? [ux / size, uy / size, size] : null;
  };
  const key = (px, py) => Math.floor((px - box.x0) / spacing) + 8192 * Math.floor((py - box.y0) / spacing);
  const isFree = (px, py, distance) => {
    for (let dj = -1; dj <= 1; dj++) {
      for (let di = -1; di <= 1; di++) {
        for (const [qx, qy] of taken.get(key(px, py) + di + 8192 * dj) ?? []) {
          if (Math.hypot(px - qx, py - qy) < distance) {
            return false;
          }
        }
      }
    }
    return true;
  };
  const follow = (px, py, sign, strength) => {
    const line = [], h = sign * spacing / 5;
    for (let k = 0; k < 3000; k++) {
      const d1 = vectorAt(px, py), d2 = d1 && vectorAt(px + h / 2 * d1[0], py + h / 2 * d1[1]);
      if (!d2) {
        break;
      }
      const qx = px + h * d2[0], qy = py + h * d2[1], here = vectorAt(qx, qy);
      // Tubes of current narrow where it grows denser, so lines may draw together on their way to a contact.
      if (!here || !isFree(qx, qy, 0.45 * spacing * Math.max(0.12, Math.min(1, strength / here[2])))) {
        break;
      }
      line.push([qx, qy]);
      [px, py] = [qx, qy];
    }
    return line;
  };
  const seeds = [], step = spacing / 2;
  for (let j = 0, sy = box.y0; sy <= box.y1; j++, sy += step * 0.87) {
    for (let sx = box.x0 + (j % 2) * step / 2; sx <= box.x1; sx += step) {
      seeds.push([sx, sy, Math.hypot(sx - box.cx, sy - box.cy)]);
    }
  }
  seeds.sort((p, q) => p[2] - q[2]);
  let flow = 0, inside = 0;
  const strengths = seeds.map(([sx, sy]) => {
    const v = vectorAt(sx, sy);
    flow += v ? v[2] : 0;
    inside += v ? 1 : 0;
    return v ? v[2] : 0;
  });
  seeds.forEach(([sx, sy], k) => {
    // None where the sheet is almost at rest.
    if (strengths[k] > 0.03 * flow / Math.max(1, inside) && isFree(sx, sy, spacing)) {
      const line = [...follow(sx, sy, -1, strengths[k]).reverse(), [sx, sy], ...follow(sx, sy, 1, strengths[k])];
      if (line.length > 8) {
        for (const p of line) {
          const id = key(p[0], p[1]);
          taken.has(id) ? taken.get(id).push(p) : taken.set(id, [p]);
        }
        lines.push(line.flat());
      }
    }
  });
  return lines;
}
