/* Taking a chart along, for chart.js: as an SVG file that stands alone, or as a PNG
   of twice its size. It is drawn anew, always light and equally wide, whatever the
   window; its colours and type are written out, the fonts it needs lie in it, and
   it says what it is: the chart's title and caption above, and below the line that
   every printed page carries (.printmark).

   The file is named after the nearest [data-file] and the chart's figure. */
(() => {
  'use strict';

  const {make, partFill} = lossChart;
  const width = 760, pad = 20, head = 54, foot = 34, row = 20; // px
  const scale = 2; // of a PNG
  const most = 128; // letters of a line of words

  const short = (text) => text.length > most ? text.slice(0, most - 1) + '…' : text;
  const folded = (element) => (element?.textContent ?? '').replace(/\s+/g, ' ').trim();

  // The whole picture as an element: ground, words, drawing, key.
  function compose(chart, {data, drawn}) {
    const inner = drawn.svg, height = +inner.getAttribute('height');
    const key = keyRows(drawn.key ?? []), notes = drawn.note ? 1 : 0;
    const full = [width + 2 * pad, head + height + row * (key.length + notes) + foot];
    const svg = d3.create('svg:svg').attr('width', full[0]).attr('height', full[1]).attr('viewBox', `0 0 ${full[0]} ${full[1]}`);
    const words = (x, y, text, fill, size, family = 'var(--sans)', weight = 400) => svg.append('text').attr('x', x).attr('y', y)
      .style('fill', fill).attr('font-size', size).attr('font-family', family).attr('font-weight', weight).text(short(text));
    svg.append('title').text(data.title);
    svg.append('desc').text(`${data.y.label} over ${data.x.label}. ${folded(document.querySelector('.printmark'))}`);
    svg.append('rect').attr('width', full[0]).attr('height', full[1]).attr('fill', 'var(--bg)');
    words(pad, 26, data.title, 'var(--ink)', 17, 'var(--serif)', 600);
    words(pad, 44, folded(chart.closest('figure')?.querySelector('figcaption > span')), 'var(--dim)', 12.5);
    svg.append(() => inner).attr('x', pad).attr('y', head).attr('overflow', 'visible');
    let y = head + height + 14;
    for (const entries of key) {
      entries.forEach((entry) => drawKey(svg, entry, y));
      y += row;
    }
    if (drawn.note) words(pad, y, drawn.note, 'var(--dim)', 12);
    words(pad, full[1] - 12, [folded(document.querySelector('.printmark')), 'Lossbook'].filter(Boolean).join(' · '), 'var(--dim)', 11.5);
    return svg.node();
  }

  // The entries of a key in rows as wide as the drawing.
  function keyRows(key) {
    const rows = [];
    let x = width;
    for (const entry of key) {
      const wide = 7 * entry.name.length + 40;
      if (x + wide > width) {
        rows.push([]);
        x = 0;
      }
      rows.at(-1).push({...entry, x: pad + x});
      x += wide;
    }
    return rows;
  }

  function drawKey(svg, {name, cls, dash, x}, y) {
    if (cls) svg.append('rect').attr('x', x).attr('y', y - 9).attr('width', 10).attr('height', 10).attr('fill', partFill(cls));
    else svg.append('path').attr('d', `M${x} ${y - 4}h22`).attr('stroke', 'var(--ink)').attr('stroke-width', 1.8).attr('stroke-dasharray', dash);
    svg.append('text').attr('x', x + (cls ? 15 : 28)).attr('y', y).attr('font-size', 12).attr('font-family', 'var(--sans)').text(name);
  }

  const painted = ['fill', 'fill-opacity', 'stroke', 'stroke-opacity', 'stroke-width', 'stroke-dasharray', 'stroke-linejoin', 'paint-order'];
  const lettered = ['font-family', 'font-size', 'font-weight'];
  const plain = {'fill-opacity': '1', 'stroke-opacity': '1', 'stroke-width': '1px', 'stroke-dasharray': 'none', 'stroke-linejoin': 'miter', 'paint-order': 'normal'};

  // Writes out what the stylesheets say of each element, and drops what only they use.
  function settle(svg) {
    for (const style of svg.querySelectorAll('style, .cursor')) style.remove();
    const all = [...svg.querySelectorAll('*'), svg];
    for (const [element, values] of all.map((element) => [element, written(element)])) {
      for (const name of ['class', 'style', 'role', 'aria-label', 'aria-hidden', 'tabindex']) element.removeAttribute(name);
      for (const [name, value] of Object.entries(values)) element.setAttribute(name, value);
    }
  }

  function written(element) {
    const style = getComputedStyle(element), values = {};
    const leaf = element.matches('path, rect, circle, line, text, tspan, use');
    for (const {name, value} of element.attributes) {
      if (name !== 'style' && /var\(|currentColor/i.test(value)) values[name] = style.getPropertyValue(name);
    }
    if (!leaf) return values;
    for (const name of element.matches('text, tspan') ? [...painted, ...lettered] : painted) {
      const value = style.getPropertyValue(name);
      const idle = value === plain[name] && !element.hasAttribute(name) || name.startsWith('stroke-') && style.stroke === 'none';
      if (!idle && !element.getAttribute(name)?.startsWith('url(')) values[name] = value;
    }
    return values;
  }

  // The fonts that the words need, each as a rule with its file in it.
  async function fonts(svg) {
    const texts = [...svg.querySelectorAll('text')];
    const faces = new Set(texts.map((t) => `${family(t.getAttribute('font-family'))} ${t.getAttribute('font-weight')}`));
    const letters = texts.map((t) => t.textContent).join('');
    const rules = faceRules(document.styleSheets).filter(({style}) =>
      faces.has(`${family(style.fontFamily)} ${style.fontWeight}`) && style.fontStyle !== 'italic' && covers(style.unicodeRange, letters));
    return (await Promise.all(rules.map(embed))).join('');
  }

  const family = (list) => list.split(',')[0].replace(/["']/g, '').trim();

  const faceRules = (sheets) => Array.from(sheets).flatMap((sheet) => Array.from(sheet.cssRules)).flatMap((rule) =>
    rule instanceof CSSImportRule ? faceRules([rule.styleSheet]) : rule instanceof CSSFontFaceRule ? [rule] : []);

  // Whether a unicode-range holds one of the letters that fonts differ in.
  const covers = (range, letters) => !/^U\+0?370/i.test(range) || /[\u0370-\u03ff\u2126]/.test(letters);

  async function embed(rule) {
    const src = new URL(/url\("?([^")]+)/.exec(rule.style.src)[1], rule.parentStyleSheet.href);
    const answer = await fetch(src);
    if (!answer.ok) throw new Error(answer.statusText);
    const bytes = new Uint8Array(await answer.arrayBuffer());
    const text = btoa(Array.from(bytes, (b) => String.fromCharCode(b)).join(''));
    const {fontFamily, fontWeight, unicodeRange} = rule.style;
    return `@font-face{font-family:${fontFamily};font-weight:${fontWeight};src:url(data:font/woff2;base64,${text}) format("woff2");unicode-range:${unicodeRange}}`;
  }

  // Signs that no XML may hold, such as the control characters of a pasted name.
  const forbidden = /[^\t\n\r\u0020-\ud7ff\ue000-\ufffd\u{10000}-\u{10ffff}]/gu;

  // The chart as the text of an SVG file, and its size.
  async function fileOf(chart) {
    const host = make('div', {class: 'taking', 'aria-hidden': 'true'});
    host.inert = true;
    chart.append(host);
    try {
      const svg = compose(chart, chart.drawn(width));
      host.append(svg);
      settle(svg);
      const style = document.createElementNS(svg.namespaceURI, 'style');
      style.textContent = await fonts(svg) + 'text{font-variant-numeric:tabular-nums;white-space:pre}';
      host.remove();
      svg.prepend(style);
      const text = new XMLSerializer().serializeToString(svg).toWellFormed().replace(forbidden, '\ufffd');
      return {text, width: +svg.getAttribute('width'), height: +svg.getAttribute('height')};
    } finally {
      host.remove();
    }
  }

  async function pictureOf({text, width, height}) {
    const image = new Image();
    image.src = 'data:image/svg+xml;charset=utf-8,' + encodeURIComponent(text);
    await image.decode();
    const canvas = make('canvas', {width: scale * width, height: scale * height});
    canvas.getContext('2d').drawImage(image, 0, 0, canvas.width, canvas.height);
    return new Promise((resolve, reject) => canvas.toBlob((blob) => blob ? resolve(blob) : reject(new Error('no picture')), 'image/png'));
  }

  const nameOf = (chart) => [chart.closest('[data-file]')?.dataset.file, (chart.closest('figure')?.id || chart.getAttribute('kind')).replace(/^chart-/, '')]
    .filter(Boolean).join('-');

  function save(blob, name) {
    const link = make('a', {href: URL.createObjectURL(blob), download: name});
    link.click();
    setTimeout(() => URL.revokeObjectURL(link.href), 10_000);
  }

  lossChart.take = async (chart, form) => {
    const file = await fileOf(chart);
    const blob = form === 'SVG' ? new Blob([file.text], {type: 'image/svg+xml'}) : await pictureOf(file);
    save(blob, `${nameOf(chart)}.${form.toLowerCase()}`);
  };
})();
