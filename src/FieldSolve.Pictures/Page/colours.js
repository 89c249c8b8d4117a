// Colour ramps of even lightness. Each is a path in OKLab (B. Ottosson, "A perceptual color space for image processing", 2020): lightness grows in
// equal steps, so equal differences look equal and the order survives in grey; hues run from blue towards yellow or from violet through red towards yellow, a
// difference in lightness at every step, so it survives colour blindness too.

/** sRGB (0 to 255) of an OKLab colour given by lightness, chroma and hue in degrees; chroma gives way where the screen cannot show it. */
function fromOklch(lightness, chroma, hue) {
  const turn = hue * Math.PI / 180;
  for (let c = chroma; ; c *= 0.97) {
    const a = c * Math.cos(turn), b = c * Math.sin(turn);
    const l = Math.pow(lightness + 0.3963377774 * a + 0.2158037573 * b, 3);
    const m = Math.pow(lightness - 0.1055613458 * a - 0.0638541728 * b, 3);
    const s = Math.pow(lightness - 0.0894841775 * a - 1.2914855480 * b, 3);
    const rgb = [
      4.0767416621 * l - 3.3077115913 * m + 0.2309699292 * s,
      -1.2684380046 * l + 2.6097574011 * m - 0.3413193965 * s,
      -0.0041960863 * l - 0.7034186147 * m + 1.7076147010 * s,
    ];
    if (c < 1e-3 || rgb.every(v => v >= -1e-4 && v <= 1.0001)) {
      return rgb.map(v => {
        const x = Math.min(1, Math.max(0, v));
        return Math.round(255 * (x <= 0.0031308 ? 12.92 * x : 1.055 * Math.pow(x, 1 / 2.4) - 0.055));
      });
    }
  }
}

/** 256 colours through stops [position, chroma, hue], lightness even between two ends. */
function ramp(dark, light, stops) {
  const table = new Uint8Array(256 * 3);
  for (let i = 0; i < 256; i++) {
    const t = i / 255;
    let k = 0;
    while (k + 2 < stops.length && t > stops[k + 1][0]) {
      k++;
    }
    const [p0, c0, h0] = stops[k], [p1, c1, h1] = stops[k + 1], w = (t - p0) / (p1 - p0);
    table.set(fromOklch(dark + (light - dark) * t, c0 + (c1 - c0) * w, h0 + (h1 - h0) * w), 3 * i);
  }
  return table;
}

const RAMPS = {
  // Deep sea to sand.
  shore: ramp(0.27, 0.93, [[0, 0.09, 268], [0.3, 0.105, 232], [0.55, 0.09, 185], [0.8, 0.10, 125], [1, 0.115, 96]]),
  // Night to ember to straw.
  ember: ramp(0.2, 0.94, [[0, 0.06, 300], [0.3, 0.15, 338], [0.55, 0.175, 385], [0.8, 0.15, 420], [1, 0.09, 452]]),
  // Dusk to rose to cream.
  dusk: ramp(0.26, 0.94, [[0, 0.11, 285], [0.4, 0.13, 320], [0.7, 0.12, 375], [1, 0.06, 430]]),
};

const rgbText = (table, t) => {
  const k = 3 * Math.max(0, Math.min(255, Math.round(255 * t)));
  return `rgb(${table[k]},${table[k + 1]},${table[k + 2]})`;
};
