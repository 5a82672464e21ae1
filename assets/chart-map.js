/* A figure over load and input voltage, for chart.js: the kind "map". The type Map of
   chart_map.go writes its data.

   data:
     {"title": "Efficiency over load and input voltage",
      "x": {"label": "load, % of 2 A", "unit": "%"}, "y": {"label": "input, V", "unit": "V"},
      "value": {"label": "efficiency, %", "unit": "%"}, "loss": {"label": "loss, W", "unit": "W"},
      "loads": [5, 5.26, …, 100], "vins": [10.5, …, 14.4], "even": false,
      "values": [91.35, null, …], "losses": [0.23, null, …],
      "outside": [[0, 12], …],
      "unsettled": [{"name": "out of reach", "level": "out_of_reach", "runs": [[2340, 60], …]}, …],
      "limits": [{"name": "rectifier, junction temperature", "level": "exceeded", "runs": […]}, …],
      "here": [100, 12]}
     Points lie in rows from the lowest voltage, in each from the lowest load. A run is
     so many points from a number on. Without even the loads stand in equal ratios.
     Points of no figure are null and in one of unsettled, whose level is out_of_reach
     or runaway; a limit's is exceeded or caution. here may be absent. */
(() => {
  'use strict';

  const {kind, digits, quantity} = lossChart;
  const margin = {marginTop: 26, marginBottom: 42, marginLeft: 42, marginRight: 14};
  const shades = 10; // --m0 to --m9
  const letter = 6.3, line = 15; // px that a letter is wide, in the mean, and a line high
  let drawn = 0; // numbers the patterns, whose names must differ on a page

  // The levels of the contours: finer where most of the points lie.
  function levelsOf(values) {
    const sorted = values.filter((v) => v !== null).sort(d3.ascending);
    const low = sorted[0], high = sorted.at(-1), knee = d3.quantileSorted(sorted, 0.2);
    const between = (a, b, n) => d3.ticks(a, b, n).filter((t) => t > a && t < b);
    return d3.sort(d3.union(between(low, knee, 2), between(knee, high, 6)));
  }

  // The contour of a level as lines through the grid: [[x, y], …] in cells, whose
  // middles are at halves. A line ends where the next point has no figure.
  function contour(values, nx, ny, level) {
    const rings = d3.contours().size([nx, ny]).smooth(false).contour(values.map((v) => v ?? NaN), level).coordinates.flat();
    const at = (x, y) => values[y * nx + x] ?? null;
    const between = (a, b) => a === null || b === null || a === b ? null : (level - a) / (b - a) - 0.5;
    const place = ([x, y]) => {
      const edge = x === 0 || x === nx || y === 0 || y === ny;
      if (edge) return {edge, x, y};
      const onX = Number.isInteger(x), i = Math.floor(x), j = Math.floor(y);
      const step = onX ? between(at(i - 1, j), at(i, j)) : between(at(i, j - 1), at(i, j));
      return step === null ? null : {x: onX ? x + step : x, y: onX ? y : y + step};
    };
    return rings.flatMap((ring) => pieces(ring.slice(0, -1).map(place), nx, ny));
  }

  // Cuts a ring into its lines, and leads one that ends at the border up to it.
  function pieces(ring, nx, ny) {
    const cut = ring.findIndex((p) => !p || p.edge);
    if (cut < 0) return [[...ring, ring[0]].map((p) => [p.x, p.y])];
    const lines = [];
    let line = [], from; // from: the place before the line, of no figure or at the border
    for (const p of [...ring.slice(cut), ...ring.slice(0, cut + 1)]) {
      if (p && !p.edge) {
        line.push([p.x, p.y]);
        continue;
      }
      if (line.length > 1) lines.push([from?.edge && onward(line[1], line[0], nx, ny), ...line, p?.edge && onward(line.at(-2), line.at(-1), nx, ny)].filter(Boolean));
      line = [];
      from = p;
    }
    return lines;
  }

  // Leads a line on from p, where it came from before, to the border if that is near.
  function onward(before, p, nx, ny) {
    const [x, y] = p, dx = x - before[0], dy = y - before[1];
    const steps = [dx && ((dx > 0 ? nx : 0) - x) / dx, dy && ((dy > 0 ? ny : 0) - y) / dy].filter((t) => t > 0);
    const to = steps.map((t) => [x + t * dx, y + t * dy]);
    return d3.least(to.filter((q) => Math.hypot(q[0] - x, q[1] - y) < 3), (q) => Math.hypot(q[0] - x, q[1] - y));
  }

  // The cells of runs as a set of their numbers.
  const cells = (runs) => new Set(runs.flatMap(([from, n]) => d3.range(from, from + n)));

  // The outline of a set of cells within the grid, without the grid's own border.
  function outline(set, nx, ny, X, Y) {
    const d = [];
    const has = (x, y) => set.has(y * nx + x);
    for (let y = 1; y < ny; y++) {
      for (const [a, b] of stretches(nx, (x) => has(x, y) !== has(x, y - 1))) d.push(`M${X(a)} ${Y(y)}H${X(b)}`);
    }
    for (let x = 1; x < nx; x++) {
      for (const [a, b] of stretches(ny, (y) => has(x, y) !== has(x - 1, y))) d.push(`M${X(x)} ${Y(a)}V${Y(b)}`);
    }
    return d.join('');
  }

  // Where something holds, as [from, to] without to.
  function stretches(n, holds) {
    const list = [];
    for (let i = 0; i < n; i++) {
      if (!holds(i)) continue;
      if (list.at(-1)?.[1] === i) list.at(-1)[1]++;
      else list.push([i, i + 1]);
    }
    return list;
  }

  // Rectangles of neighbours in a row for which of(i) is the same; none for null.
  function bars(nx, ny, of, X, Y) {
    const list = [];
    for (let y = 0; y < ny; y++) {
      for (let x = 0, end; x < nx; x = end) {
        const is = of(y * nx + x);
        for (end = x + 1; end < nx && of(y * nx + end) === is; end++);
        if (is !== null) list.push({is, x: X(x), y: Y(y + 1), width: X(end) - X(x), height: Y(y) - Y(y + 1)});
      }
    }
    return list;
  }

  // Keeps words off each other: put(x, y, text) says whether there is room around a
  // middle, and takes it.
  function room(left, right, top, bottom) {
    const taken = [];
    return (x, y, text) => {
      const w = text.length * letter / 2 + 4, box = [x - w, x + w, y - line / 2, y + line / 2];
      if (box[0] < left || box[1] > right || box[2] < top || box[3] > bottom) return false;
      if (taken.some((t) => box[0] < t[1] && box[1] > t[0] && box[2] < t[3] && box[3] > t[2])) return false;
      taken.push(box);
      return true;
    };
  }

  // Where a set of cells could be named, the best place first: in the middle of its
  // widest rows, or beside one, tied by a line from its edge that leads so far.
  function spots(set, wide, {nx, ny, X, Y}) {
    const rows = d3.range(ny).flatMap((y) => stretches(nx, (x) => set.has(y * nx + x)).map(([a, b]) => ({y, left: X(a), right: X(b)})));
    const centre = d3.mean(rows, (r) => r.y), gap = 8;
    const sorted = d3.sort(rows, (r) => r.left - r.right, (r) => Math.abs(r.y - centre));
    return [
      ...sorted.filter((r) => r.right - r.left > wide + 8).map((r) => ({x: (r.left + r.right) / 2, y: Y(r.y + 0.5)})),
      ...sorted.map((r) => ({x: r.left - gap - wide / 2, y: Y(r.y + 0.5), lead: -gap, from: r.left})),
      ...sorted.map((r) => ({x: r.right + gap + wide / 2, y: Y(r.y + 0.5), lead: gap, from: r.right})),
    ];
  }

  const hatches = {
    exceeded: ['var(--mark)', 7, 'M0 7L7 0', 1.1],
    out_of_reach: ['var(--edge)', 8, 'M0 4H8', 1],
    runaway: ['var(--mark)', 6, 'M0 0L6 6M0 6L6 0', 0.9],
  };

  function patterns(g, id) {
    const defs = g.append('defs');
    for (const [name, [colour, size, d, weight]] of Object.entries(hatches)) {
      const p = defs.append('pattern').attr('id', `${id}-${name}`).attr('patternUnits', 'userSpaceOnUse').attr('width', size).attr('height', size);
      if (name !== 'exceeded') p.append('rect').attr('width', size).attr('height', size).attr('fill', 'var(--bg)');
      p.append('path').attr('d', d).attr('stroke', colour).attr('stroke-width', weight).attr('fill', 'none');
    }
  }

  function write(g, cls, x, y, text) {
    g.append('text').attr('class', cls).attr('x', x).attr('y', y).attr('dy', '0.33em').attr('text-anchor', 'middle').text(text);
  }

  // Draws everything that lies on the plane: shades, areas, contours, words.
  function plane(data, box) {
    const {nx, ny, X, Y} = box, id = `map-${++drawn}`;
    const g = d3.create('svg:g').attr('class', 'map');
    patterns(g, id);
    const levels = levelsOf(data.values);
    const shade = (v) => Math.round((levels.length - d3.bisectRight(levels, v)) / Math.max(1, levels.length) * (shades - 1));
    const rects = (list, fill, cls) => g.append('g').attr('class', cls).selectAll('rect').data(list).join('rect')
      .attr('x', (r) => r.x).attr('y', (r) => r.y).attr('width', (r) => r.width).attr('height', (r) => r.height)
      .attr('fill', fill).attr('shape-rendering', 'crispEdges');
    rects(bars(nx, ny, (i) => data.values[i] === null ? null : shade(data.values[i]), X, Y), (r) => `var(--m${r.is})`, 'shades');
    const lines = levels.map((level) => ({level, lines: contour(data.values, nx, ny, level)}));
    g.append('g').attr('class', 'contours').selectAll('path').data(lines).join('path')
      .attr('d', (c) => c.lines.map((l) => 'M' + l.map(([x, y]) => `${X(x).toFixed(1)} ${Y(y).toFixed(1)}`).join('L')).join('')).attr('fill', 'none');
    const areas = [...data.limits, ...data.unsettled].map((a) => ({...a, set: cells(a.runs)}));
    const over = new Set(areas.filter((a) => a.level === 'exceeded').flatMap((a) => [...a.set]));
    rects(bars(nx, ny, (i) => over.has(i) || null, X, Y), `url(#${id}-exceeded)`, 'over');
    for (const area of areas) {
      if (area.level in hatches && area.level !== 'exceeded') {
        rects(bars(nx, ny, (i) => area.set.has(i) || null, X, Y), `url(#${id}-${area.level})`, area.level);
      }
      g.append('path').attr('class', `edge ${area.level}`).attr('d', outline(area.set, nx, ny, X, Y)).attr('fill', 'none');
    }
    words(g, data, areas, lines, box);
    return g.node();
  }

  const spoken = {exceeded: 'over: ', caution: 'near: '};

  // Names what is drawn where it is: areas first, then the contours' values. What
  // has no room is named by the words beneath the chart, where all of it stands.
  function words(g, data, areas, lines, box) {
    const {X, Y, width, height} = box;
    const settled = data.values.filter((v) => v !== null).length;
    const put = room(margin.marginLeft, width - margin.marginRight, margin.marginTop, height - margin.marginBottom);
    const name = (area) => {
      const text = (spoken[area.level] ?? '') + area.name;
      const spot = spots(area.set, text.length * letter, box).find((s) => put(s.x, s.y, text));
      if (!spot) return;
      if (spot.lead) g.append('path').attr('class', `edge ${area.level}`).attr('d', `M${spot.from + spot.lead} ${spot.y}H${spot.from}`).attr('fill', 'none');
      write(g, `name ${area.level}`, spot.x, spot.y, text);
    };
    const parted = areas.filter((a) => a.level in spoken ? a.set.size < settled : true);
    parted.filter((a) => a.level !== 'caution').forEach(name);
    for (const {level, lines: list} of lines) {
      const text = quantity(level, data.value.unit);
      for (const l of d3.sort(list, (l) => -l.length).slice(0, 2)) {
        const spot = [0.5, 0.4, 0.6, 0.3, 0.7, 0.2, 0.8, 0.45, 0.55, 0.35, 0.65, 0.25, 0.75, 0.12, 0.88].map((t) => l[Math.round(t * (l.length - 1))]).find(([x, y]) => put(X(x), Y(y), text));
        if (spot) write(g, 'value', X(spot[0]), Y(spot[1]), text);
      }
    }
    parted.filter((a) => a.level === 'caution').forEach(name);
  }

  // Where a load or a voltage lies, in cells.
  function places(data) {
    const along = (list, of) => (v) => {
      const low = of(list[0]), high = of(list.at(-1));
      return high > low ? 0.5 + (of(v) - low) / (high - low) * (list.length - 1) : list.length / 2;
    };
    return {load: along(data.loads, data.even ? (v) => v : Math.log), vin: along(data.vins, (v) => v)};
  }

  const loadTicks = (data) => data.even ? [data.loads[0], ...d3.ticks(data.loads[0], data.loads.at(-1), 5).filter((t) => t > data.loads[0] * 2)]
    : [1, 2, 5, 10, 20, 50, 100].filter((t) => t >= data.loads[0] && t <= data.loads.at(-1));

  function stopsOf(data, {nx, ny, X, Y}) {
    const outside = cells(data.outside);
    const areas = (list) => list.map((a) => ({...a, set: cells(a.runs)}));
    const limits = areas(data.limits), unsettled = areas(data.unsettled);
    const text = (i, x, y) => {
      const at = `at ${quantity(data.loads[x], data.x.unit)}, ${quantity(data.vins[y], data.y.unit)} — `;
      if (data.values[i] === null) return at + 'no figure: ' + unsettled.filter((a) => a.set.has(i)).map((a) => a.name).join(', ');
      const told = (level) => limits.filter((l) => l.level === level && l.set.has(i)).map((l) => l.name).join('; ');
      const over = told('exceeded'), near = told('caution');
      return at + quantity(data.values[i], data.value.unit) + (outside.has(i) ? '†' : '') + `, loss ${quantity(data.losses[i], data.loss.unit)}`
        + (over && `. Over: ${over}`) + (near && `. Near: ${near}`);
    };
    return d3.range(ny - 1, -1, -1).flatMap((y) => d3.range(nx).map((x) => {
      const i = y * nx + x;
      return {x: X(x + 0.5), y: Y(y + 0.5), dots: [Y(y + 0.5)], get text() { return text(i, x, y); }};
    }));
  }

  function noteOf(data) {
    const exceeded = data.limits.some((l) => l.level === 'exceeded'), near = data.limits.some((l) => l.level === 'caution');
    return [data.here && `Ring: ${quantity(data.here[0], data.x.unit)}, ${quantity(data.here[1], data.y.unit)}.`, exceeded && 'Hatched: over a limit.', near && 'Dashed: near one.',
      data.outside.length && '† a curve held flat outside its range.'].filter(Boolean).join(' ');
  }

  function draw(data, width) {
    if (!data.values.some((v) => v !== null)) return {empty: 'No point of this map has a figure.'};
    const nx = data.loads.length, ny = data.vins.length;
    const height = Math.round(Math.max(280, Math.min(460, width * 0.56)));
    const X = d3.scaleLinear([0, nx], [margin.marginLeft, width - margin.marginRight]), Y = d3.scaleLinear([0, ny], [height - margin.marginBottom, margin.marginTop]);
    const box = {nx, ny, X, Y, width, height}, {load, vin} = places(data);
    const loads = loadTicks(data), vins = d3.ticks(data.vins[0], data.vins.at(-1), 5);
    const common = {labelArrow: 'none', tickSize: 4};
    const svg = Plot.plot({
      width, height, ...margin, x: {type: 'linear', domain: [0, nx]}, y: {type: 'linear', domain: [0, ny]},
      marks: [
        () => plane(data, box),
        Plot.axisX(loads.map(load), {...common, label: data.x.label, labelAnchor: 'center', labelOffset: 36, text: (_, i) => digits(loads[i])}),
        Plot.axisY(vins.map(vin), {...common, label: data.y.label, labelAnchor: 'top', labelOffset: 38, text: (_, i) => digits(vins[i])}),
        data.here && Plot.dot([data.here], {x: (p) => load(p[0]), y: (p) => vin(p[1]), r: 5, stroke: 'var(--ink)', strokeWidth: 1.6, fill: 'var(--bg)'}),
      ],
    });
    const nearest = (list, v) => d3.leastIndex(list, (a, b) => Math.abs(a - v) - Math.abs(b - v));
    const start = data.here && (ny - 1 - nearest(data.vins, data.here[1])) * nx + nearest(data.loads, data.here[0]);
    return {svg, note: noteOf(data), stops: stopsOf(data, box), across: nx, start};
  }

  kind('map', draw);
})();
