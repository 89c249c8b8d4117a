// Elements, numbers, files. Text always goes in as text: nothing here or below ever makes markup of it.

const SVG = 'http://www.w3.org/2000/svg';

/** Sets attributes, listeners (on…) and children of an element. */
function fill(node, attributes, children) {
  for (const [name, value] of Object.entries(attributes ?? {})) {
    if (name.startsWith('on')) {
      node.addEventListener(name.slice(2), value);
    } else if (name === 'class') {
      node.setAttribute('class', value);
    } else if (value !== null && value !== undefined && value !== false) {
      node.setAttribute(name, value === true ? '' : String(value));
    }
  }
  for (const child of children) {
    node.append(child);
  }
  return node;
}

/** Gives an element these children and leaves those that are there already where they are, with their focus. */
function adopt(parent, children) {
  const wanted = new Set(children);
  let at = parent.firstChild;
  const skip = () => {
    while (at && !wanted.has(at)) {
      const gone = at;
      at = at.nextSibling;
      gone.remove();
    }
  };
  skip();
  for (const child of children) {
    if (child === at) {
      at = at.nextSibling;
      skip();
    } else {
      parent.insertBefore(child, at);
    }
  }
}

/** What was made under a name, kept until its key changes. */
class Kept {
  #known = new Map();

  /** @param make gets what was made before, or undefined. */
  of(name, key, make) {
    const known = this.#known.get(name);
    if (known?.key === key) {
      return known.made;
    }
    const made = make(known?.made);
    this.#known.set(name, { key, made });
    return made;
  }

  /** Forgets what is not named. */
  only(names) {
    for (const name of this.#known.keys()) {
      if (!names.has(name)) {
        this.#known.delete(name);
      }
    }
  }
}

/** An HTML element. */
const html = (tag, attributes, ...children) => fill(document.createElement(tag), attributes, children);

/** An SVG element. */
const svg = (tag, attributes, ...children) => fill(document.createElementNS(SVG, tag), attributes, children);

const PREFIXES = ['a', 'f', 'p', 'n', 'µ', 'm', '', 'k', 'M', 'G', 'T'];

/** Prefix that suits a largest value: { factor, unit }. Squared units take squared prefixes; reciprocal units and degrees none. */
function scaleFor(largest, unit) {
  if (unit === '' || unit === '°' || unit.startsWith('1/')) {
    return { factor: 1, unit };
  }
  const power = unit.endsWith('²') && !unit.includes('/') ? 2 : 1;
  const size = Math.abs(largest);
  let step = size > 0 && Number.isFinite(size) ? Math.floor((Math.log10(size) + 1e-9) / (3 * power)) : 0;
  step = Math.max(-6, Math.min(4, step));
  return { factor: Math.pow(10, -3 * power * step), unit: PREFIXES[step + 6] + unit };
}

/** A number at so many significant digits, with a true minus sign and no needless zeros. */
function number(value, digits = 4) {
  if (!Number.isFinite(value)) {
    return '–';
  }
  if (value === 0) {
    return '0';
  }
  const power = Math.floor(Math.log10(Math.abs(Number(value.toPrecision(digits)))));
  let text;
  if (power < -4 || power >= Math.max(digits, 6)) {
    const [lead, exponent] = value.toExponential(digits - 1).split('e');
    const raised = [...String(Number(exponent))].map(c => c === '-' ? '⁻' : '⁰¹²³⁴⁵⁶⁷⁸⁹'[Number(c)]).join('');
    text = `${String(Number(lead))}·10${raised}`;
  } else {
    text = String(Number(value.toPrecision(digits)));
  }
  return text.replace('-', '−');
}

/** A value with its prefixed unit. */
function quantity(value, unit, digits = 4) {
  const scale = scaleFor(value, unit);
  return `${number(value * scale.factor, digits)} ${scale.unit}`;
}

/** A value at a fixed number of significant digits, trailing zeros kept, so that a reading does not jump while the pointer moves. */
function reading(value, unit, digits, floor = 0) {
  const size = Math.abs(value);
  if (!(size > floor)) {
    return `0 ${unit}`;
  }
  const scale = scaleFor(value, unit);
  return `${(value * scale.factor).toPrecision(digits).replace('-', '−')} ${scale.unit}`;
}

/** Step of 1, 2 or 5 times a power of ten that cuts a range into about so many parts. */
function roundStep(range, parts) {
  if (!(range > 0) || !Number.isFinite(range)) {
    return 1;
  }
  const raw = range / parts, power = Math.pow(10, Math.floor(Math.log10(raw))), lead = raw / power;
  return power * (lead < 1.5 ? 1 : lead < 3.5 ? 2 : lead < 7.5 ? 5 : 10);
}

/** Multiples of a step within a range. */
function multiples(low, high, step) {
  const out = [];
  for (let k = Math.ceil(low / step - 1e-9); k * step <= high + 1e-9 * step && out.length < 400; k++) {
    out.push(k * step);
  }
  return out;
}

/** Bytes of a base64 text. */
function bytesOf(text) {
  if (Uint8Array.fromBase64) {
    return Uint8Array.fromBase64(text);
  }
  const raw = atob(text), bytes = new Uint8Array(raw.length);
  for (let i = 0; i < raw.length; i++) {
    bytes[i] = raw.charCodeAt(i);
  }
  return bytes;
}

/** Doubles of a base64 text; little-endian like every machine that runs a browser today. */
const doublesOf = text => new Float64Array(bytesOf(text).buffer);

/** A name for files out of any text. */
const fileName = (...parts) => parts.join('-').replace(/[^\p{L}\p{N}.+-]+/gu, '-').replace(/-+/g, '-').replace(/^-|-$/g, '').slice(0, 80) || 'picture';

/** Lets the reader keep a file. */
function save(name, content, type) {
  const url = URL.createObjectURL(content instanceof Blob ? content : new Blob([content], { type }));
  const link = html('a', { href: url, download: name });
  link.click();
  setTimeout(() => URL.revokeObjectURL(url), 10000);
}

/** One field of a CSV file (RFC 4180). */
const csvField = value => {
  const text = value === null || value === undefined ? '' : String(value);
  return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
};

/** A whole CSV file. */
const csv = rows => rows.map(row => row.map(csvField).join(',')).join('\r\n') + '\r\n';

/** Draws an SVG text on a canvas and keeps it as PNG. */
function savePng(name, text, width, height) {
  const image = new Image(), factor = Math.max(1, Math.min(4, 1800 / width));
  image.onload = () => {
    const canvas = html('canvas', { width: Math.round(width * factor), height: Math.round(height * factor) });
    canvas.getContext('2d').drawImage(image, 0, 0, canvas.width, canvas.height);
    canvas.toBlob(blob => save(name, blob), 'image/png');
  };
  image.src = 'data:image/svg+xml;charset=utf-8,' + encodeURIComponent(text);
}

/** The buttons that keep a picture and its data; without rows the picture alone. */
function saveButtons(what, svgText, csvRows) {
  const bar = html('div', { class: 'saves screen', role: 'group', 'aria-label': `Save ${what.label()}` });
  const button = (text, run) => bar.append(html('button', { type: 'button', class: 'small', onclick: run, title: `Save as ${text}` }, text));
  button('SVG', () => save(what.name() + '.svg', svgText().text, 'image/svg+xml'));
  button('PNG', () => {
    const picture = svgText();
    savePng(what.name() + '.png', picture.text, picture.width, picture.height);
  });
  if (!csvRows) {
    return bar;
  }
  button('CSV', () => save(what.name() + '.csv', csv(csvRows()), 'text/csv'));
  return bar;
}

/** A choice with a label. */
function choice(label, options, value, change) {
  const select = html('select', { onchange: () => change(select.value) });
  for (const [key, text] of options) {
    select.append(html('option', { value: key, selected: key === value }, text));
  }
  const box = html('label', { class: 'choice' }, html('span', null, label), select);
  box.select = select;
  return box;
}

/** A box to tick. */
function tick(label, value, change) {
  const input = html('input', { type: 'checkbox', checked: value, onchange: () => change(input.checked) });
  const box = html('label', { class: 'tick' }, input, html('span', null, label));
  box.input = input;
  return box;
}

/** Runs a function once per frame however often it is asked for. */
function perFrame(run) {
  let waiting = false;
  return () => {
    if (!waiting) {
      waiting = true;
      requestAnimationFrame(() => {
        waiting = false;
        run();
      });
    }
  };
}

/** True while the page is dark; paper is light. */
const isDark = () => document.documentElement.dataset.theme === 'dark' && !document.documentElement.dataset.print;
