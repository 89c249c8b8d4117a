// Puts the live parts into the page. Without this script the page shows the same answer in tables and still pictures.

function theme() {
  const root = document.documentElement, dark = matchMedia('(prefers-color-scheme: dark)');
  const select = choice('Page', [['auto', 'as the system'], ['light', 'light'], ['dark', 'dark']], 'auto', v => apply(v));
  const apply = v => {
    root.dataset.theme = v === 'auto' ? dark.matches ? 'dark' : 'light' : v;
    window.fieldsolve?.map?.drawProfiles();
    window.fieldsolve?.shares?.forEach(s => s.draw());
  };
  dark.addEventListener('change', () => apply(select.select.value));
  apply('auto');
  document.querySelector('header')?.append(select);
}

// Still pictures can be kept too.
function keepStills() {
  for (const image of document.querySelectorAll('main > figure img, .figures > figure img')) {
    const text = () => ({ text: decodeURIComponent(image.getAttribute('src').replace(/^[^,]*,/, '')), width: Number(image.getAttribute('width')), height: Number(image.getAttribute('height')) });
    const name = image.getAttribute('alt').split(/[;:.,]/)[0].slice(0, 40);
    image.after(saveButtons({ label: () => name, name: () => fileName(document.title, name) }, text));
  }
}

function start() {
  const block = document.getElementById('data');
  if (!block) {
    return;
  }
  const data = JSON.parse(block.textContent), charts = [];
  block.remove();
  let live = null;
  const pick = (map, frame) => {
    live?.show(map, frame);
    live?.host.scrollIntoView({ block: 'nearest', behavior: matchMedia('(prefers-reduced-motion: reduce)').matches ? 'auto' : 'smooth' });
  };
  const host = document.querySelector('[data-maps]');
  if (host && data.maps.length) {
    host.hidden = false;
    const meshes = data.meshes.map(m => new Mesh(m)), laws = data.laws.map(l => new Law(l));
    live = new LiveMap(host, data.maps, meshes, laws, (map, frame) => charts.forEach(c => c.shows(map, frame)));
    live.read(null);
  }
  const pair = document.querySelector('[data-comparison]');
  let comparison = null;
  if (pair && data.comparison) {
    pair.hidden = false;
    comparison = new Comparison(pair, data.comparison, data.meshes.map(m => new Mesh(m)));
  }
  // The map is painted before charts are made.
  const rest = () => {
    for (const host of document.querySelectorAll('[data-chart]')) {
      const spec = data.charts.find(c => c.id === host.dataset.chart);
      if (spec) {
        charts.push(new Chart(host, spec, pick));
        host.hidden = false;
      }
    }
    const shares = [...document.querySelectorAll('[data-share]')].map(place => {
      place.hidden = false;
      return new ShareMap(place, data.share);
    });
    charts.forEach(c => live && c.shows(live.map.id, live.frameIndex));
    keepStills();
    // For tests and for the curious, on the console.
    window.fieldsolve = { map: live, comparison, charts, shares, RAMPS, DIVERGING, MeshCanvas, Law, Chart, PackedNumbers };
    document.documentElement.dataset.ready = 'yes';
  };
  live ? requestAnimationFrame(() => setTimeout(rest, 0)) : rest();
}

// The columns of the paper before the parts are laid out anew for it.
addEventListener('beforeprint', () => { document.documentElement.dataset.print = 'yes'; });
addEventListener('afterprint', () => { delete document.documentElement.dataset.print; });
theme();
// After the first paint, so that the answer stands at once.
requestAnimationFrame(() => setTimeout(start, 0));
