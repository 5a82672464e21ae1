/* Charts of losses piled up by part, for chart.js: the kind "stack". The type Stack
   of chart.go writes its data.

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

  const {kind, digits, widest, partFill, drawNames, frame, axes} = lossChart;
  const narrow = 430; // px; below it the parts' names go under the stack, not beside it

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

  kind('stack', drawStack);
})();
