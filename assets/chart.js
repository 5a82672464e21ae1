/* <loss-chart>: one element that hides the drawing library. It needs
   lib/d3.min.js and lib/plot.umd.min.js loaded before it.

     <loss-chart kind="efficiency" scale="log" data="{…}" hx-morph-skip-children></loss-chart>

   It draws into itself, again whenever an attribute or its width changes; the page
   owns the attributes, and the chart's table beside it. Colours are variables of
   the stylesheet, so light and dark need no redraw.

   Each kind is a file that calls lossChart.kind(name, draw) and says what its data
   holds: chart-lines.js, chart-stack.js, chart-map.js. What every chart can do
   besides – its cursor, and being taken along as a file (chart-take.js) – needs
   nothing more of a kind. All data has a title (read aloud, not
   drawn) and x and y with {label, unit}. draw(data, width, scale) returns

     {svg,      the drawing, as wide as it was told
      stops,    what the cursor stops at: [{x, dots, text}] from the left. x and the
                heights of the dots are in pixels, text is what is read there
      across,   where stops lie in rows from the top, {x, y, dots, text}: how many in
                each row. The keys up and down then go from row to row
      start,    the stop that the keys begin at, if it is neither of the ends
      note,     said while nothing is pointed at
      key,      [{name, cls}] of parts, or [{name, dash}] of lines, to be set below
                the drawing; none where it names them itself
      empty}    words instead of a drawing, where there is nothing to draw */
globalThis.lossChart = (() => {
  'use strict';

  const lineHeight = 16; // px between names, a little over the height of their letters
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

  const margins = {marginTop: 26, marginBottom: 42, marginLeft: 42};
  const frame = (width, names) => ({width, height: 226, ...margins, marginRight: names ? names + 22 : 12});

  // The axes are drawn by hand: ticks and formats given to a scale don't reach them.
  const axes = (data, x, y) => [
    Plot.gridY(y.ticks, {stroke: 'var(--rule)', strokeOpacity: 1}),
    Plot.axisY(y.ticks, {label: data.y.label, labelAnchor: 'top', labelArrow: 'none', labelOffset: 38, tickSize: 0,
      text: (t) => digits(t, y.form)}),
    Plot.axisX(x.ticks ?? x.domain, {label: data.x.label, labelAnchor: 'center', labelArrow: 'none', labelOffset: 36, tickSize: 4,
      text: (t) => x.ticks ? digits(t) : t}),
  ];

  const drawings = new Map();

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
    #take = make('div', {class: 'take noprint'});
    #below = make('div', {class: 'below'});
    #sizes = new ResizeObserver(() => { if (this.clientWidth !== this.#width) this.#schedule(); });
    #width = 0;
    #frame = 0; // the animation frame a drawing is asked for in; 0: none
    #cursor = -1; // index into #stops; -1: none
    #stops = [];
    #across = 0; // stops in a row; 0: all lie in one
    #start = -1; // where the keys begin; -1: at the ends
    #note = '';

    constructor() {
      super();
      this.#pane.addEventListener('keydown', (event) => this.#press(event));
      this.#pane.addEventListener('pointermove', (event) => this.#point(event));
      for (const form of ['SVG', 'PNG']) {
        const button = make('button', {type: 'button', class: 'quiet'}, form);
        button.addEventListener('click', () => this.#save(form));
        this.#take.append(button);
      }
      for (const left of ['pointerleave', 'blur']) this.#pane.addEventListener(left, () => this.#move(-1));
    }

    connectedCallback() {
      this.#below.replaceChildren(this.#reading, this.#take);
      this.replaceChildren(this.#pane, this.#key, this.#below);
      this.#sizes.observe(this);
      this.#schedule();
    }

    disconnectedCallback() {
      this.#sizes.disconnect();
      cancelAnimationFrame(this.#frame);
      this.#frame = 0;
    }

    attributeChangedCallback() { this.#schedule(); }

    redraw() { this.#schedule(); }

    // Draws the chart for another place: {data, drawn}.
    drawn(width) {
      const data = JSON.parse(this.getAttribute('data'));
      return {data, drawn: drawings.get(this.getAttribute('kind'))(data, width, this.getAttribute('scale'))};
    }

    async #save(form) {
      try {
        await lossChart.take(this, form);
      } catch {
        this.#reading.textContent = `The ${form} could not be made: Lossbook did not answer, or there is no room for it.`;
      }
    }

    // Several attributes change in one morph; they are drawn once, before the paint.
    #schedule() {
      this.#frame ||= requestAnimationFrame(() => {
        this.#frame = 0;
        if (this.isConnected && this.clientWidth) this.#draw();
      });
    }

    #draw() {
      this.#width = this.clientWidth;
      if (!drawings.has(this.getAttribute('kind'))) return; // its file is still to come
      const {data, drawn} = this.drawn(this.#width);
      this.#stops = drawn.stops ?? [];
      this.#across = drawn.across ?? 0;
      this.#start = drawn.start ?? -1;
      this.#note = drawn.note ?? '';
      this.#pane.setAttribute('aria-label', `${data.title}: ${hint}`);
      this.#pane.replaceChildren(drawn.svg ? labelled(drawn.svg, data) : make('p', {class: 'empty'}, drawn.empty));
      this.#take.hidden = !drawn.svg;
      for (const button of this.#take.children) button.setAttribute('aria-label', `Save “${data.title}” as ${button.textContent}`);
      this.#key.replaceChildren(...(drawn.key ?? []).map(keyEntry));
      this.#move(Math.min(this.#cursor, this.#stops.length - 1));
    }

    #press(event) {
      if (event.key === 'Escape') this.#move(-1);
      const to = this.#cursor < 0 ? this.#first(event.key) : this.#next(event.key);
      if (to === undefined || !this.#stops.length || event.ctrlKey || event.altKey || event.metaKey) return;
      event.preventDefault();
      this.#move(to);
    }

    #first(key) {
      const last = this.#stops.length - 1, forth = this.#start < 0 ? 0 : this.#start, back = this.#start < 0 ? last : this.#start;
      return {ArrowLeft: back, ArrowRight: forth, PageUp: 0, PageDown: Math.min(9, last), Home: 0, End: last,
        ...(this.#across && {ArrowUp: back, ArrowDown: forth, PageDown: forth, PageUp: back})}[key];
    }

    #next(key) {
      const across = this.#across || this.#stops.length, column = this.#cursor % across, row = (this.#cursor - column) / across;
      const rows = this.#stops.length / across, many = this.#across ? 0 : 10;
      const go = {
        ArrowLeft: [-1, 0], ArrowRight: [1, 0], Home: [-across, 0], End: [across, 0], PageUp: [-many, -10], PageDown: [many, 10],
        ...(this.#across && {ArrowUp: [0, -1], ArrowDown: [0, 1]}),
      }[key];
      const within = (i, n) => Math.max(0, Math.min(n - 1, i));
      return go && within(row + go[1], rows) * across + within(column + go[0], across);
    }

    #point(event) {
      const box = this.#pane.getBoundingClientRect(), x = event.clientX - box.left, y = event.clientY - box.top;
      const far = (stop) => Math.hypot(stop.x - x, this.#across ? stop.y - y : 0);
      this.#move(d3.leastIndex(this.#stops, (a, b) => far(a) - far(b)) ?? -1);
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
      const foot = svg.attr('height') - margins.marginBottom;
      g.append('path').attr('d', this.#across ? `M${margins.marginLeft} ${stop.y}H${stop.x}V${foot}` : `M${stop.x} ${margins.marginTop}V${foot}`);
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

  function keyEntry({name, cls, dash}) {
    const entry = make('li', {}, name);
    entry.prepend(cls ? make('i', {class: cls}) : sample(dash));
    return entry;
  }

  const sample = (dash) => {
    const svg = d3.create('svg:svg').attr('class', 'dash').attr('width', 26).attr('height', 10).attr('aria-hidden', 'true');
    svg.append('path').attr('d', 'M0 5H26').attr('stroke', 'var(--ink)').attr('stroke-width', 1.8).attr('stroke-dasharray', dash);
    return svg.node();
  };

  customElements.define('loss-chart', LossChart);

  // Says how a kind of chart is drawn.
  function kind(name, draw) {
    drawings.set(name, draw);
    for (const chart of document.querySelectorAll('loss-chart')) if (chart.getAttribute('kind') === name) chart.redraw();
  }

  return {kind, make, number, change, digits, quantity, widest, partFill, drawNames, frame, axes};
})();
