// Looks at the page as a reader would and returns what is wrong with it, a
// sentence each: a page that scrolls sideways, text that is cut, that lies
// over another or that cannot be told from its ground, a figure without its
// text alternative, a script.
(() => {
  const wrong = [];
  const say = (s) => { if (wrong.length < 20) wrong.push(s); };
  const short = (s) => JSON.stringify((s || '').trim().replace(/\s+/g, ' ').slice(0, 60));
  const width = document.documentElement.clientWidth;

  if (document.scripts.length) say('the page has a script');
  for (const e of document.querySelectorAll('*')) {
    for (const a of e.attributes) {
      if (/^on/i.test(a.name)) say(`${e.tagName} has a handler ${a.name}`);
      if (/^(href|src|xlink:href|action|data)$/i.test(a.name) && !a.value.startsWith('#')) say(`${e.tagName} leads to ${a.value}`);
    }
  }
  if (document.documentElement.scrollWidth > width) say(`the page is ${document.documentElement.scrollWidth} wide, the window ${width}`);

  const boxOf = (node) => {
    const r = document.createRange();
    r.selectNodeContents(node);
    return r.getBoundingClientRect();
  };
  const scroller = (e) => e.closest('.wide');
  const scrolls = (e) => getComputedStyle(e).overflowX === 'auto';

  // What is wider than its place scrolls, and can be reached by keyboard.
  for (const e of document.querySelectorAll('.wide')) {
    if (e.scrollWidth <= e.clientWidth) continue;
    if (!scrolls(e)) say(`${e.getAttribute('aria-labelledby') || e.getAttribute('aria-label')} is ${e.scrollWidth} wide, its place ${e.clientWidth}, and does not scroll`);
    if (e.tabIndex < 0) say('a region scrolls and cannot be focused');
    if (!e.getAttribute('aria-label') && !e.getAttribute('aria-labelledby')) say('a region scrolls and has no name');
  }

  // Text that is not cut.
  for (const e of document.querySelectorAll('h1,h2,h3,p,li,figcaption,.signatures div')) {
    if (!e.textContent.trim()) { say(`an empty ${e.tagName}`); continue; }
    const t = boxOf(e), b = e.getBoundingClientRect();
    if (t.right > width + 1 || t.left < -1) say(`${short(e.textContent)} goes beyond the page`);
    if (t.right > b.right + 1 || t.bottom > b.bottom + 6) say(`${short(e.textContent)} goes beyond its place`);
  }
  for (const e of document.querySelectorAll('td,th')) {
    if (!e.textContent.trim() || getComputedStyle(e).position === 'absolute') continue;
    const t = boxOf(e), b = e.getBoundingClientRect();
    if (t.left < b.left - 1 || t.right > b.right + 1 || t.top < b.top - 1 || t.bottom > b.bottom + 1) say(`the cell ${short(e.textContent)} is cut`);
    if (!scrolls(scroller(e)) && b.right > width + 1) say(`the cell ${short(e.textContent)} goes beyond the page`);
  }

  // Figures.
  const figures = document.querySelectorAll('svg.figure');
  for (const svg of figures) {
    const name = svg.querySelector('title')?.textContent || '';
    if (svg.getAttribute('role') !== 'img') say(`figure ${name} is no image to a reader of screens`);
    if (!name) say('a figure has no title');
    if (!/[0-9]/.test(svg.querySelector('desc')?.textContent || '')) say(`figure ${name} does not say its numbers`);
    for (const id of (svg.getAttribute('aria-labelledby') || '').split(/\s+/)) {
      if (document.querySelectorAll('#' + CSS.escape(id)).length !== 1) say(`figure ${name} is labelled by ${id}, which is not there once`);
    }
    const frame = svg.getBoundingClientRect();
    const scale = frame.width / svg.viewBox.baseVal.width;
    const hair = 1.5 * scale;
    const texts = [...svg.querySelectorAll('text')].filter((t) => t.textContent.trim()).map((t) => ({ text: t.textContent, box: t.getBoundingClientRect() }));
    texts.forEach(({ text, box }, i) => {
      if (box.left < frame.left - 0.5 || box.right > frame.right + 0.5 || box.top < frame.top - hair || box.bottom > frame.bottom + hair) say(`figure ${name}: ${short(text)} is cut`);
      for (const other of texts.slice(0, i)) {
        const o = other.box;
        if (box.left + 0.5 < o.right && o.left + 0.5 < box.right && box.top + hair < o.bottom - hair && o.top + hair < box.bottom - hair) {
          say(`figure ${name}: ${short(text)} lies over ${short(other.text)}`);
        }
      }
    });
  }

  // Contrast of text and its ground, by WCAG 2.2, 1.4.3: 4.5 to 1.
  const rgb = (s) => (s.match(/[\d.]+/g) || []).map(Number);
  const light = ([r, g, b]) => {
    const f = (v) => (v / 255 <= 0.04045 ? v / 255 / 12.92 : ((v / 255 + 0.055) / 1.055) ** 2.4);
    return 0.2126 * f(r) + 0.7152 * f(g) + 0.0722 * f(b);
  };
  const filled = new Map();
  const rects = (svg) => {
    if (!filled.has(svg)) {
      filled.set(svg, [...svg.querySelectorAll('rect')].filter((r) => getComputedStyle(r).fill !== 'none').map((of) => ({ of, box: of.getBoundingClientRect() })));
    }
    return filled.get(svg);
  };
  const ground = (e) => {
    const svg = e.closest('svg');
    if (svg) { // what is drawn below the middle of the text, if anything
      const t = e.getBoundingClientRect(), x = (t.left + t.right) / 2, y = (t.top + t.bottom) / 2;
      let below = null;
      for (const { box, of } of rects(svg)) {
        if (box.left <= x && x <= box.right && box.top <= y && y <= box.bottom && of.compareDocumentPosition(e) & Node.DOCUMENT_POSITION_FOLLOWING) below = of;
      }
      if (below) return rgb(getComputedStyle(below).fill);
    }
    for (; e; e = e.parentElement) {
      const c = rgb(getComputedStyle(e).backgroundColor);
      if (c.length === 3 || c[3] > 0.99) return c;
    }
    return [255, 255, 255];
  };
  const seen = new Set();
  for (const e of document.querySelectorAll('h1,h2,h3,p,li,figcaption,td,th,strong,.signatures div,svg text')) {
    const style = getComputedStyle(e);
    const ink = rgb(e.closest('svg') ? style.fill : style.color), paper = ground(e);
    const key = ink + '/' + paper;
    if (seen.has(key)) continue;
    seen.add(key);
    const [a, b] = [light(ink), light(paper)].sort((x, y) => y - x);
    const contrast = (a + 0.05) / (b + 0.05);
    if (!(contrast >= 4.5)) say(`${short(e.textContent)} has a contrast of ${contrast.toFixed(2)} to 1`);
  }
  return wrong;
})();
