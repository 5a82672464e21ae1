/* Small behaviours of the pages. Everything works without them, by forms.

   Load order, all with defer: lib/htmx.min.js, lib/d3.min.js, lib/plot.umd.min.js,
   chart.js and its kinds, app.js. htmx is set up by <meta name="htmx-config"> (assets.HTMXConfig).

   Hooks in the markup:
     data-focus      takes focus on load, and after an answer to a submitted form or
                     a click; never while someone types. Needs tabindex="-1".
     data-sheet      on a form: Enter in an input sends no form (the value has been
                     taken already); data-enter on an input lets it.
     data-curve      around the rows of a curve: pasting several values into one of
                     its inputs fills and adds rows. Rows are the children of the
                     [data-rows] inside; a <template> inside holds one more row, in
                     whose attributes __row__ stands for the number of the row.
     data-silence    in <template id="silence">: what is said in #trouble while the
                     server does not answer. The sheet then triggers "again" on its
                     form, now and then.
     data-watch      around figures: a td, dd, strong or [data-figure] whose text an
                     answer changes wears the class "flash" for a moment.

   Measured for tests, by performance.getEntriesByName: "answer", from the sending
   of a request to the frame that shows its answer, and "typing-to-answer", from
   the last input event to that frame. Each holds its newest value only. */
(() => {
  'use strict';

  const flashTime = 1200; // ms, as long as the animation in the stylesheet

  // Focus

  const focusMessage = () => document.querySelector('[data-focus]')?.focus();
  document.addEventListener('DOMContentLoaded', focusMessage);
  document.addEventListener('htmx:after:swap', (event) => {
    if (/^(submit|click)$/.test(event.detail.ctx?.sourceEvent?.type)) focusMessage();
  });

  document.addEventListener('keydown', (event) => {
    const input = event.target.closest?.('[data-sheet] input');
    if (input && event.key === 'Enter' && !/^(submit|button|checkbox|radio)$/.test(input.type) && !input.matches('[data-enter]')) {
      event.preventDefault();
    }
  });

  // What waited for the answer before it is sent as the sheet then stands: with the
  // version which that answer brought, and with the entries and rows it left.
  document.addEventListener('htmx:before:request', ({detail: {ctx}}) => {
    const form = ctx.request.form;
    if (!form?.matches('[data-sheet]') || !ctx.request.body?.has?.('version')) return;
    ctx.request.body = new URLSearchParams(new FormData(form));
    const button = ctx.sourceElement;
    if (button.matches('button[name]')) ctx.request.body.append(button.name, button.value);
  });

  // No answer

  const retryTime = 2000; // ms
  let retry;
  const silence = () => document.querySelector('[data-silence]');

  // A request that got no whole answer is said to have got none, and what stands on
  // the sheet is sent again until it gets through.
  document.addEventListener('htmx:error', ({detail: {ctx}}) => {
    if (!ctx || ctx.text !== undefined) return;
    const words = document.querySelector('#silence');
    if (words && !silence()) document.querySelector('#trouble').prepend(words.content.cloneNode(true));
    clearTimeout(retry);
    retry = setTimeout(() => htmx.trigger('form[data-sheet]', 'again'), retryTime);
  });

  document.addEventListener('htmx:before:response', () => {
    clearTimeout(retry);
    silence()?.remove();
  });

  // The browser asks before it drops what could not be sent.
  addEventListener('beforeunload', (event) => { if (silence()) event.preventDefault(); });

  // Leaving: what was typed within the pause before it is sent goes along.
  let typed = false;
  document.addEventListener('input', (event) => { if (event.target.form?.matches('[data-sheet]')) typed = true; });
  document.addEventListener('htmx:before:request', () => { typed = false; });
  addEventListener('pagehide', () => {
    const form = document.querySelector('form[data-sheet]');
    if (typed && form) navigator.sendBeacon(form.getAttribute('action'), new URLSearchParams(new FormData(form)));
  });

  // Pasting a curve

  // The cells of pasted text: by tab, else semicolon, else comma, else blanks. A
  // first line without any digit is a header and is left out.
  function cells(text) {
    const lines = text.split(/\r\n|\r|\n/).map((line) => line.trim()).filter(Boolean);
    if (lines.length > 1 && !/\d/.test(lines[0])) lines.shift();
    const separator = [/\t/, /;/, /,/].find((s) => s.test(text)) ?? /\s+/;
    return lines.map((line) => line.split(separator).map((cell) => cell.trim()));
  }

  function addRow(curve, rows) {
    const fragment = curve.querySelector('template').content.cloneNode(true);
    for (const element of fragment.querySelectorAll('*')) {
      for (const attribute of element.attributes) {
        attribute.value = attribute.value.replaceAll('__row__', rows.children.length);
      }
    }
    rows.append(fragment);
    return rows.lastElementChild;
  }

  const inputsOf = (row) => Array.from(row.querySelectorAll('input:not([type=hidden])'));

  function fill(curve, start, pasted) {
    const rows = curve.querySelector('[data-rows]');
    const first = Array.from(rows.children).findIndex((row) => row.contains(start));
    const column = inputsOf(rows.children[first]).indexOf(start);
    pasted.forEach((values, i) => {
      const inputs = inputsOf(rows.children[first + i] ?? addRow(curve, rows));
      values.forEach((value, j) => { if (inputs[column + j]) inputs[column + j].value = value; });
    });
  }

  document.addEventListener('paste', (event) => {
    const curve = event.target.closest?.('input') && event.target.closest('[data-curve]');
    if (!curve?.querySelector('[data-rows]')?.contains(event.target)) return;
    const pasted = cells(event.clipboardData.getData('text/plain'));
    if (pasted.length < 2 && (pasted[0]?.length ?? 0) < 2) return;
    event.preventDefault();
    fill(curve, event.target, pasted);
    event.target.dispatchEvent(new Event('input', {bubbles: true}));
  });

  // Marking what changed

  const timers = new WeakMap();
  function flash(figure) {
    figure.classList.add('flash');
    clearTimeout(timers.get(figure));
    timers.set(figure, setTimeout(() => figure.classList.remove('flash'), flashTime));
  }

  // A morph edits text in place, so a changed figure shows as changed characters.
  new MutationObserver((changes) => {
    for (const {target} of changes) {
      const figure = target.parentElement?.closest('td, dd, strong, [data-figure]');
      if (figure?.closest('[data-watch]')) flash(figure);
    }
  }).observe(document.documentElement, {characterData: true, subtree: true});

  // Measuring

  function measure(name, start) {
    performance.clearMeasures(name);
    if (performance.getEntriesByName(start).length) performance.measure(name, start);
    performance.clearMarks(start);
  }

  function mark(name) {
    performance.clearMarks(name);
    performance.mark(name);
  }

  document.addEventListener('input', () => mark('typed'), true);
  document.addEventListener('htmx:before:request', () => mark('asked'));
  document.addEventListener('htmx:after:swap', () => {
    // The timer runs after the frame, when charts are drawn and the page is painted.
    requestAnimationFrame(() => setTimeout(() => {
      measure('answer', 'asked');
      measure('typing-to-answer', 'typed');
    }));
  });
})();
