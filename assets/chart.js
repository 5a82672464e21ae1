/* <loss-chart>: one element that hides the drawing library. It needs
   lib/d3.min.js and lib/plot.umd.min.js loaded before it.

     <loss-chart kind="efficiency" scale="log" data="{…}" hx-morph-skip-children></loss-chart>
     <loss-chart kind="difference" data="{…}" hx-morph-skip-children></loss-chart>
     <loss-chart kind="stack" data="{…}" hx-morph-skip-children></loss-chart>

   It draws into itself, again whenever an attribute or its width changes; the page
   owns the attributes, and the chart's table beside it. Colours are variables of
   the stylesheet, so light and dark need no redraw.

   The types Lines and Stack of chart.go write the data.

   data, kind "efficiency" (also fits any figure against load, a line per series):
     {"title":  "Efficiency against load",        read aloud, not drawn
      "x":      {"label": "load, % of 2 A", "unit": "%"},
      "y":      {"label": "efficiency, %",  "unit": "%"},
      "series": [{"name": "12 V", "dash": 0,      0 solid, 1 dashed, 2 dotted, 3, 4 mixed
                  "points": [[5, 91.35], [10, null], [20, 95.05, 1], …]}]}
     Points rise in x. A null y leaves a gap. A third member 1 says that a curve
     was held flat for this point: it is underlaid, and marked † where it is read.
   kind "difference" takes the same; 0 is on its axis and ruled, values are signed.
   scale: "log" (what it is without the attribute) or "lin".

   data, kind "stack":
     {"title":   "Loss against load, by part",
      "x":       {"label": "load, % of 2 A", "unit": "%"},
      "y":       {"label": "loss, W",        "unit": "W"},
      "parts":   [{"name": "Switch", "cls": "p-switch"}, …],    from the bottom up
      "columns": [{"x": "5", "values": [0.05, …], "total": "0.23", "outside": true},
                  {"x": "100", "reason": "thermal runaway"}]}
     Values stand in the order of the parts. A column with a reason has no bar;
     "outside" (may be absent) marks its total with †. */
(() => {
  'use strict';

  const dashes = [null, '7 3', '2 3', '9 3 2 3', '14 4'];
  const lineHeight = 16; // px between names, a little over the height of their letters
  const narrow = 430; // px; below it the parts' names go under the stack, not beside it
  const number = new Intl.NumberFormat('en', {maximumSignificantDigits: 4, signDisplay: 'negative'});
  const change = new Intl.NumberFormat('en', {maximumSignificantDigits: 4, signDisplay: 'exceptZero'});
  const hint = 'Arrow keys or pointer read the values.';

  // Thousands are set apart by a thin space, as in the tables.
  const digits = (value, form = number) => form.format(value).replaceAll(',', '\u202f');
  const quantity = (value, unit, form) => digits(value, form) + (unit ? '\u00a0' + unit : '');
  const widest = (names) => 7 * Math.max(0, ...names.map((name) => name.length));
  const partFill = (cls) => /^p-[a-z]+$/.test(cls) ? `var(--${cls})` : 'var(--ink)';

  // Moves positions (rising) apart to at least one line, inside [top, bottom].
  function dodge(positions, top, bottom) {
    const out = positions.slice();
    out.forEach((y, i) => { out[i] = Math.max(y, i ? out[i - 1] + lineHeight : top); });
    for (let i = out.length - 1, limit = bottom; i >= 0; i--, limit -= lineHeight) {
      out[i] = Math.min(out[i], limit);
    }
    return out;
  }

  // A mark of names right of the plot, each tied to the spot it names by a thin
  // line. spots: [{name, x, y, colour}], x and y in pixels.
  function drawNames(spots, {width, height, marginRight, marginTop, marginBottom}) {
    const g = d3.create('svg:g').attr('class', 'names');
    const x = width - marginRight + 16;
    const sorted = spots.slice().sort((a, b) => a.y - b.y);
    const ys = dodge(sorted.map((s) => s.y), marginTop, height - marginBottom);
    sorted.forEach((s, i) => {
      g.append('path').attr('d', `M${s.x + 2} ${s.y}L${x - 10} ${ys[i]}h7`)
        .attr('fill', 'none').attr('stroke', s.colour).attr('stroke-width', s.weight);
      g.append('text').attr('x', x).attr('y', ys[i]).attr('dy', '0.33em')
        .attr('text-anchor', 'start').text(s.name);
    });
    return g.node();
  }

  const frame = (width, names) => ({
    width, height: 226, marginTop: 26, marginBottom: 42, marginLeft: 42, marginRight: names ? names + 22 : 12,
  });

  // The axes are drawn by hand: ticks and formats given to a scale don't reach them.
  const axes = (data, x, y) => [
    Plot.gridY(y.ticks, {stroke: 'var(--rule)', strokeOpacity: 1}),
    Plot.axisY(y.ticks, {label: data.y.label, labelAnchor: 'top', labelArrow: 'none', labelOffset: 38, tickSize: 0,
      text: (t) => digits(t, y.form)}),
    Plot.axisX(x.ticks ?? x.domain, {label: data.x.label, labelAnchor: 'center', labelArrow: 'none', labelOffset: 36, tickSize: 4,
      text: (t) => x.ticks ? digits(t) : t}),
  ];

  // 1, 2 and 5 of each decade, and the domain's own ends where they have room.
  function logTicks([low, high]) {
    const inside = [];
    for (let decade = 10 ** Math.floor(Math.log10(low)); decade <= high; decade *= 10) {
      inside.push(...[1, 2, 5].map((m) => m * decade).filter((t) => t > low * 1.2 && t < high / 1.2));
    }
    return [low, ...inside, high];
  }

  function xScale(points, scale) {
    const [low, high] = d3.extent(points, (p) => p[0]);
    return scale === 'lin' || !(low > 0) || low === high
      ? {type: 'linear', domain: [0, high], ticks: d3.ticks(0, high, 6)}
      : {type: 'log', domain: [low, high], ticks: logTicks([low, high])};
  }

  function yScale(points, always) {
    const [low, high] = d3.extent(points.filter((p) => p[1] !== null).map((p) => p[1]).concat(always));
    const spread = high > low ? [low, high] : [low - 1, high + 1];
    const domain = d3.nice(...spread, 5);
    return {domain, ticks: d3.ticks(...domain, 5)};
  }

  // A point between two gaps has no line; it is drawn as a dot.
  const alone = (points) => points.filter((p, i) =>
    p[1] !== null && (points[i - 1]?.[1] ?? null) === null && (points[i + 1]?.[1] ?? null) === null);

  function seriesMarks({points, dash}) {
    const at = {x: (p) => p[0], y: (p) => p[1]};
    const held = {...at, y: (p) => p[2] ? p[1] : null, stroke: 'var(--mark)', strokeOpacity: 0.3, strokeWidth: 7};
    return [
      Plot.line(points, held),
      Plot.line(points, {...at, stroke: 'var(--ink)', strokeWidth: 1.8, strokeDasharray: dashes[dash % dashes.length]}),
      Plot.dot(alone(points), {...at, r: 2.2, fill: 'var(--ink)'}),
    ];
  }

  function seriesNames(series) {
    return (_, {x, y}, __, dimensions) => drawNames(series.flatMap((s) => {
      const last = s.points.findLast((p) => p[1] !== null);
      return last ? [{name: s.name, x: x(last[0]), y: y(last[1]), colour: 'var(--dim)', weight: 0.8}] : [];
    }), dimensions);
  }

  const figure = (p, unit, form) => p[1] === null ? 'no figure' : quantity(p[1], unit, form) + (p[2] ? '†' : '');

  // What the cursor stops at: one entry per load, its place and what it reads.
  function seriesStops(data, svg, form) {
    const x = svg.scale('x'), y = svg.scale('y');
    const loads = d3.union(...data.series.map((s) => s.points.map((p) => p[0])));
    return Array.from(loads).sort(d3.ascending).map((load) => {
      const hits = data.series.map((s) => [s.name, s.points.find((p) => p[0] === load) ?? [load, null]]);
      const text = hits.map(([name, p]) => `${name}: ${figure(p, data.y.unit, form)}`);
      const dots = hits.filter(([, p]) => p[1] !== null).map(([, p]) => y.apply(p[1]));
      return {x: x.apply(load), dots, text: `at ${quantity(load, data.x.unit)} — ${text.join(', ')}`};
    });
  }

  const drawEfficiency = (data, width, scale) => drawLines(data, width, scale, [], number);
  const drawDifference = (data, width, scale) => drawLines(data, width, scale, [0], change);

  // always: values that the axis holds besides those of the lines, each ruled.
  function drawLines(data, width, scale, always, form) {
    const points = data.series.flatMap((s) => s.points);
    if (!points.some((p) => p[1] !== null)) return {empty: 'No load here has a figure.'};
    const x = xScale(points, scale), y = {...yScale(points, always), form};
    const marks = [...axes(data, x, y), Plot.ruleY(always, {stroke: 'var(--edge)'}), ...data.series.flatMap(seriesMarks), seriesNames(data.series)];
    const svg = Plot.plot({...frame(width, widest(data.series.map((s) => s.name))), x, y, marks});
    const note = points.some((p) => p[2]) ? '† underlaid: a curve held flat outside its range.' : '';
    return {svg, note, stops: seriesStops(data, svg, form)};
  }

  // The parts of one column, piled up: [{part, x, low, high, fill}].
  function pile(parts, column) {
    let low = 0;
    return (column.values ?? []).map((value, i) => {
      const segment = {part: parts[i].name, x: column.x, low, high: low + value, fill: partFill(parts[i].cls)};
      low = segment.high;
      return segment;
    });
  }

  function partNames(segments) {
    return (_, {x, y}, __, dimensions) => drawNames(segments.filter((s) => s.high > s.low).map((s) => ({
      name: s.part, x: x(s.x) + x.bandwidth(), y: y((s.low + s.high) / 2), colour: s.fill, weight: 2,
    })), dimensions);
  }

  function stackStops(data, svg) {
    const x = svg.scale('x'), unit = data.y.unit;
    return data.columns.map((column) => {
      const shares = column.values?.map((v, i) => `${data.parts[i].name} ${digits(v)}`).join(', ');
      const told = column.reason ?? `${column.total}\u00a0${unit}${column.outside ? '†' : ''}: ${shares}`;
      return {x: x.apply(column.x) + x.bandwidth / 2, dots: [], text: `at ${column.x}\u00a0${data.x.unit} — ${told}`};
    });
  }

  function drawStack(data, width) {
    const settled = data.columns.filter((c) => !c.reason);
    const segments = settled.map((c) => pile(data.parts, c));
    const beside = width >= narrow && settled.length > 0;
    const highest = Math.max(...segments.map((s) => s.at(-1)?.high ?? 0), 0) || 1;
    const total = (c) => c.total + (c.outside ? '†' : '');
    const x = {type: 'band', domain: data.columns.map((c) => c.x), padding: 0.22};
    const y = {domain: [0, highest], ticks: d3.ticks(0, highest, 4)};
    const reason = {x: 'x', y: 0, text: 'reason', rotate: -90, textAnchor: 'start', dy: -6, fill: 'var(--ink)', stroke: 'var(--bg)', strokeWidth: 5};
    const svg = Plot.plot({
      ...frame(width, beside ? widest(data.parts.map((p) => p.name)) : 0),
      x, y, color: {type: 'identity'},
      marks: [
        ...axes(data, x, y),
        Plot.barY(segments.flat(), {x: 'x', y1: 'low', y2: 'high', fill: 'fill', stroke: 'var(--bg)', strokeWidth: 1}),
        Plot.text(settled, {x: 'x', y: (c) => d3.sum(c.values), text: total, dy: -8}),
        beside ? partNames(segments.at(-1)) : null,
        Plot.text(data.columns.filter((c) => c.reason), reason),
      ],
    });
    const note = settled.some((c) => c.outside) ? '† a curve held flat outside its range.' : '';
    return {svg, note, stops: stackStops(data, svg), key: beside ? [] : data.parts};
  }

  const drawings = {efficiency: drawEfficiency, difference: drawDifference, stack: drawStack};

  function make(tag, attributes, text = '') {
    const element = document.createElement(tag);
    for (const [name, value] of Object.entries(attributes)) element.setAttribute(name, value);
    element.textContent = text;
    return element;
  }

  class LossChart extends HTMLElement {
    static observedAttributes = ['data', 'kind', 'scale'];

    #pane = make('div', {class: 'pane', tabindex: '0', role: 'group'});
    #key = make('ul', {class: 'key'});
    #reading = make('p', {class: 'reading', 'aria-live': 'polite'});
    #sizes = new ResizeObserver(() => { if (this.clientWidth !== this.#width) this.#schedule(); });
    #width = 0;
    #frame = 0; // the animation frame a drawing is asked for in; 0: none
    #cursor = -1; // index into #stops; -1: none
    #stops = [];
    #note = '';

    constructor() {
      super();
      this.#pane.addEventListener('keydown', (event) => this.#press(event));
      this.#pane.addEventListener('pointermove', (event) => this.#point(event));
      for (const left of ['pointerleave', 'blur']) this.#pane.addEventListener(left, () => this.#move(-1));
    }

    connectedCallback() {
      this.replaceChildren(this.#pane, this.#key, this.#reading);
      this.#sizes.observe(this);
      this.#schedule();
    }

    disconnectedCallback() {
      this.#sizes.disconnect();
      cancelAnimationFrame(this.#frame);
      this.#frame = 0;
    }

    attributeChangedCallback() { this.#schedule(); }

    // Several attributes change in one morph; they are drawn once, before the paint.
    #schedule() {
      this.#frame ||= requestAnimationFrame(() => {
        this.#frame = 0;
        if (this.isConnected && this.clientWidth) this.#draw();
      });
    }

    #draw() {
      this.#width = this.clientWidth;
      const data = JSON.parse(this.getAttribute('data'));
      const drawn = drawings[this.getAttribute('kind')](data, this.#width, this.getAttribute('scale'));
      this.#stops = drawn.stops ?? [];
      this.#note = drawn.note ?? '';
      this.#pane.setAttribute('aria-label', `${data.title}: ${hint}`);
      this.#pane.replaceChildren(drawn.svg ? labelled(drawn.svg, data) : make('p', {class: 'empty'}, drawn.empty));
      this.#key.replaceChildren(...(drawn.key ?? []).map(keyEntry));
      this.#move(Math.min(this.#cursor, this.#stops.length - 1));
    }

    #press(event) {
      const last = this.#stops.length - 1;
      const to = {
        ArrowLeft: this.#cursor < 0 ? last : this.#cursor - 1, ArrowRight: this.#cursor + 1,
        PageUp: this.#cursor - 10, PageDown: this.#cursor + 10, Home: 0, End: last,
      }[event.key];
      if (event.key === 'Escape') this.#move(-1);
      if (to === undefined || last < 0 || event.ctrlKey || event.altKey || event.metaKey) return;
      event.preventDefault();
      this.#move(Math.max(0, Math.min(last, to)));
    }

    #point(event) {
      const x = event.clientX - this.#pane.getBoundingClientRect().left;
      this.#move(d3.leastIndex(this.#stops, (a, b) => Math.abs(a.x - x) - Math.abs(b.x - x)) ?? -1);
    }

    #move(index) {
      this.#cursor = index;
      const stop = this.#stops[index];
      const text = stop ? stop.text : [hint, this.#note].join(' ').trim();
      if (this.#reading.textContent !== text) this.#reading.textContent = text;
      const svg = d3.select(this.#pane).select('svg');
      svg.selectAll('.cursor').remove();
      if (!stop || svg.empty()) return;
      const g = svg.append('g').attr('class', 'cursor');
      g.append('path').attr('d', `M${stop.x} 26V${svg.attr('height') - 42}`);
      g.selectAll('circle').data(stop.dots).join('circle').attr('cx', stop.x).attr('cy', (y) => y).attr('r', 3.5);
    }
  }

  // One name for the whole drawing instead of the library's many inner ones.
  function labelled(svg, data) {
    svg.querySelectorAll('[aria-label]').forEach((inner) => inner.removeAttribute('aria-label'));
    svg.setAttribute('role', 'img');
    svg.setAttribute('aria-label', `${data.title}: ${data.y.label} over ${data.x.label}`);
    return svg;
  }

  function keyEntry({name, cls}) {
    const entry = make('li', {}, name);
    entry.prepend(make('i', {class: cls}));
    return entry;
  }

  customElements.define('loss-chart', LossChart);
})();
