/* Charts of lines against load, for chart.js: the kinds "efficiency" and
   "difference". The type Lines of chart.go writes their data.

   data, kind "efficiency" (also fits any figure against load, a line per series):
     {"title":  "Efficiency against load",        read aloud, not drawn
      "x":      {"label": "load, % of 2 A", "unit": "%"},
      "y":      {"label": "efficiency, %",  "unit": "%"},
      "series": [{"name": "12 V", "dash": 0,      0 solid, 1 dashed, 2 dotted, 3, 4 mixed
                  "points": [[5, 91.35], [10, null], [20, 95.05, 1], …]}]}
     Points rise in x. A null y leaves a gap. A third member 1 says that a curve
     was held flat for this point: it is underlaid, and marked † where it is read.
   kind "difference" takes the same; 0 is on its axis and ruled, values are signed.
   scale: "log" (what it is without the attribute) or "lin". */
(() => {
  'use strict';

  const {kind, number, change, quantity, widest, drawNames, frame, axes} = lossChart;
  const dashes = [null, '7 3', '2 3', '9 3 2 3', '14 4'];

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

  const names = (series) => widest(series.map((s) => s.name));
  const roomy = (series, width) => width - names(series) > 240; // px; else the names go under the lines

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

  // always: values that the axis holds besides those of the lines, each ruled.
  function drawLines(data, width, scale, always, form) {
    const points = data.series.flatMap((s) => s.points);
    if (!points.some((p) => p[1] !== null)) return {empty: 'No load here has a figure.'};
    const x = xScale(points, scale), y = {...yScale(points, always), form};
    const marks = [...axes(data, x, y), Plot.ruleY(always, {stroke: 'var(--edge)'}), ...data.series.flatMap(seriesMarks)];
    const beside = roomy(data.series, width);
    const svg = Plot.plot({...frame(width, beside ? names(data.series) : 0), x, y, marks: beside ? [...marks, seriesNames(data.series)] : marks});
    const note = points.some((p) => p[2]) ? '† underlaid: a curve held flat outside its range.' : '';
    return {svg, note, stops: seriesStops(data, svg, form), key: beside ? [] : data.series.map((s) => ({name: s.name, dash: dashes[s.dash % dashes.length]}))};
  }

  kind('efficiency', (data, width, scale) => drawLines(data, width, scale, [], number));
  kind('difference', (data, width, scale) => drawLines(data, width, scale, [0], change));
})();
