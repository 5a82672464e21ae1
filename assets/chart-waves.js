/* Waveforms above each other on one time axis, for chart.js: the kind "waves". The
   type Waves of chart_waves.go writes its data.

   data, kind "waves":
     {"title":     "Waveforms",
      "x":         {"label": "time, µs", "unit": "µs"},
      "y":         {"label": "currents and switch voltage", "unit": ""},
      "period":    4,
      "intervals": [{"name": "t1", "from": 0, "to": 1.8}, …],        from 0 to the period
      "rows":      [{"name": "Switch current, A", "short": "switch", "cls": "p-switch", "unit": "A",
                     "points": [[0, 3.1], [1.8, 5.2], [1.8, 0], [4, 0]],
                     "levels": [{"name": "rms", "text": "2.9", "value": 2.9, "dash": 1}, …]}]}
     Two periods are drawn. Every row has its own scale, which holds 0. */
(() => {
  'use strict';

  const {kind, digits, quantity, widest, partFill, drawNames, frame} = lossChart;
  const periods = 2;
  const rowHeight = 56; // px of a row's plot
  const narrow = 560; // px; below it the levels are read above the plot, not beside it
  const dashes = [null, '6 3', '1.5 2.5'];
  const steps = 12; // stops of the cursor in an interval
  const tickRoom = 16; // px between ticks, a little over the height of their names
  const nearest = 17; // px between the names of two intervals

  const labelOf = (level, row) => `${level.name}\u00a0${level.text}\u00a0${row.unit}`;

  // Where each row's name and plot stand, from the top.
  function layOut(data, width) {
    const beside = width >= narrow;
    const levels = data.rows.flatMap((row) => row.levels.map((level) => labelOf(level, row)));
    const {marginTop, marginBottom, ...rest} = frame(width, beside ? widest(levels) : 0);
    const head = beside ? 29 : 48, pitch = head + rowHeight;
    const rows = data.rows.map((_, i) => ({name: marginTop + i * pitch + 19, top: marginTop + i * pitch + head}));
    return {...rest, beside, rows, marginTop, marginBottom, height: marginTop + data.rows.length * pitch + marginBottom};
  }

  function yScale({points, levels}, top) {
    const [low, high] = d3.extent([0, ...points.map((p) => p[1]), ...levels.map((level) => level.value)]);
    const [from, to] = d3.nice(low, high > low ? high : low + 1, 3);
    return d3.scaleLinear([from, to], [top + rowHeight, top]);
  }

  // One period after the other; the jump between them is drawn like any other.
  const repeated = (points, period) => d3.range(periods).flatMap((n) => points.map(([t, v]) => [t + n * period, v]));

  const line = (d) => `M${d.map((p) => p.map((v) => Math.round(v * 100) / 100).join(' ')).join('L')}`;

  // Where they would stand too close, every other tick; 0 is always one.
  function ticksOf(y) {
    const ticks = y.ticks(4), step = ticks[1] - ticks[0];
    const close = Math.abs(y(ticks[1]) - y(ticks[0])) < tickRoom;
    return close ? ticks.filter((t) => Math.round(t / step) % 2 === 0) : ticks;
  }

  function drawGrid(g, y, lay, x) {
    for (const t of ticksOf(y)) {
      const at = y(t);
      g.append('path').attr('d', `M${x.range()[0]} ${at}H${x.range()[1]}`).attr('stroke', t === 0 ? 'var(--edge)' : 'var(--rule)');
      g.append('text').attr('x', lay.marginLeft - 6).attr('y', at).attr('dy', '0.32em').attr('text-anchor', 'end').text(digits(t));
    }
  }

  function drawRow(svg, row, i, lay, x, data) {
    const {name, top} = lay.rows[i], y = yScale(row, top), colour = partFill(row.cls);
    const g = svg.append('g').attr('class', 'wave').attr('fill', 'none');
    drawGrid(g, y, lay, x);
    const course = repeated(row.points, data.period).map(([t, v]) => [x(t), y(v)]);
    const [first, last] = [course[0], course.at(-1)];
    g.append('path').attr('d', `${line([[first[0], y(0)], ...course, [last[0], y(0)]])}Z`).attr('fill', colour).attr('fill-opacity', 0.14);
    for (const level of row.levels) {
      g.append('path').attr('d', `M${x.range()[0]} ${y(level.value)}H${x.range()[1]}`).attr('stroke', 'var(--dim)').attr('stroke-dasharray', dashes[level.dash]);
    }
    g.append('path').attr('class', 'course').attr('d', line(course)).attr('stroke', colour).attr('stroke-width', 2).attr('stroke-linejoin', 'round');
    g.append('text').attr('class', 'title').attr('x', lay.beside ? lay.marginLeft : 0).attr('y', name).text(row.name);
    nameLevels(svg, g, row, y, lay, x.range()[1], name, top);
    return y;
  }

  function nameLevels(svg, g, row, y, lay, right, name, top) {
    if (!lay.beside) {
      g.append('text').attr('x', 0).attr('y', name + 16).text(row.levels.map((level) => `${level.name}\u00a0${level.text}`).join(', '));
      return;
    }
    const spots = row.levels.map((level) => ({name: labelOf(level, row), x: right, y: y(level.value), colour: 'var(--dim)', weight: 0.8}));
    svg.append(() => drawNames(spots, {...lay, marginTop: top - 3, marginBottom: lay.height - top - rowHeight - 3}));
  }

  // Every interval is parted from the next in all rows; in the first period it is
  // named above them.
  function drawIntervals(svg, data, lay, x) {
    const g = svg.append('g').attr('class', 'intervals').attr('fill', 'none');
    const edges = [...data.intervals.map((part) => part.from), data.period];
    for (const edge of d3.range(periods).flatMap((n) => edges.map((e) => e + n * data.period))) {
      const strokes = lay.rows.map(({top}) => `M${x(edge)} ${top}v${rowHeight}`);
      g.append('path').attr('d', `M${x(edge)} ${lay.marginTop - 6}v8${strokes.join('')}`).attr('stroke', 'var(--edge)').attr('stroke-dasharray', '2 3');
    }
    let after = 0;
    for (const part of data.intervals) {
      const at = Math.max(x((part.from + part.to) / 2), after);
      g.append('text').attr('x', at).attr('y', 14).attr('text-anchor', 'middle').text(part.name);
      after = at + nearest;
    }
  }

  function drawTime(svg, data, lay, x) {
    const g = svg.append('g').attr('class', 'time').attr('fill', 'none'), foot = lay.height - lay.marginBottom;
    for (const t of x.ticks(lay.beside ? 8 : 4)) {
      g.append('path').attr('d', `M${x(t)} ${foot}v4`).attr('stroke', 'var(--ink)');
      g.append('text').attr('x', x(t)).attr('y', foot + 17).attr('text-anchor', 'middle').text(digits(t));
    }
    g.append('text').attr('x', d3.mean(x.range())).attr('y', foot + 36).attr('text-anchor', 'middle').text(data.x.label);
  }

  const between = ([t0, v0], [t1, v1], t) => t1 > t0 ? v0 + (v1 - v0) * (t - t0) / (t1 - t0) : v1;

  // What a waveform comes from and goes on with at a time of the period.
  function before(points, t) {
    const i = points.findIndex((p) => p[0] >= t);
    return i > 0 ? between(points[i - 1], points[i], t) : points.at(-1)[1];
  }

  function behind(points, t) {
    const i = points.findLastIndex((p) => p[0] <= t);
    return i + 1 < points.length ? between(points[i], points[i + 1], t) : points[0][1];
  }

  function reads(row, t) {
    const [from, to] = [before(row.points, t), behind(row.points, t)].map((v) => digits(Math.abs(v) < 1e-9 ? 0 : v));
    return `${row.short} ${from === to ? from : `${from} → ${to}`}\u00a0${row.unit}`;
  }

  // The cursor stops where intervals part, and evenly within them.
  function stopsOf(data, x, scales) {
    const within = data.intervals.flatMap((part) =>
      d3.range(steps).map((k) => ({t: part.from + (part.to - part.from) * k / steps, name: part.name})));
    const all = d3.range(periods).flatMap((n) => within.map(({t, name}) => ({t, n, name}))).concat({t: 0, n: periods, name: data.intervals[0].name});
    return all.map(({t, n, name}) => ({
      x: x(t + n * data.period),
      dots: data.rows.map((row, i) => scales[i](behind(row.points, t))),
      text: `at ${quantity(t + n * data.period, data.x.unit)}, ${name} — ${data.rows.map((row) => reads(row, t)).join(', ')}`,
    }));
  }

  kind('waves', (data, width) => {
    const lay = layOut(data, width);
    const x = d3.scaleLinear([0, periods * data.period], [lay.marginLeft, width - lay.marginRight]);
    const svg = d3.create('svg').attr('width', width).attr('height', lay.height).attr('viewBox', `0 0 ${width} ${lay.height}`);
    const scales = data.rows.map((row, i) => drawRow(svg, row, i, lay, x, data));
    drawIntervals(svg, data, lay, x);
    drawTime(svg, data, lay, x);
    return {svg: svg.node(), stops: stopsOf(data, x, scales)};
  });
})();
