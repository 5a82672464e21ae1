/* The working of a ledger's figure: focus goes to it when a cell opens it, and back to
   the cell when it is closed, by its link or by Escape. The ledger is one stop of the
   Tab key; arrows lead from figure to figure. Without this script the same links load
   whole pages, and those of the chosen load are stops.

   Hooks in the markup: a.figure is a cell's link; #working is the panel, whose
   data-cell is the address of the cell it belongs to, and a.close in it closes it. */
(() => {
  'use strict';

  const panel = () => document.getElementById('working');
  const cellAt = (address) => Array.from(document.querySelectorAll('[hx-get]')).find((a) => a.getAttribute('hx-get') === address && !a.matches('.close'));

  let closing = ''; // the address of the cell whose panel is being closed

  document.addEventListener('click', ({target}) => {
    closing = target.closest?.('#working a.close') ? panel().dataset.cell : '';
  }, true);

  document.addEventListener('htmx:after:swap', ({detail}) => {
    const source = detail.ctx?.sourceElement;
    if (closing && !panel()) {
      cellAt(closing)?.focus();
      closing = '';
    } else if (source?.matches?.('a[href$="#working"]')) {
      document.getElementById('working-title')?.focus();
    }
  });

  // One stop

  const figures = () => Array.from(document.querySelectorAll('.ledger a.figure'));

  let last = ''; // the address of the figure that was focused last
  function rove() {
    const all = figures();
    const stop = all.find((a) => a.getAttribute('hx-get') === last) ?? all.find((a) => a.hasAttribute('aria-current')) ?? all[0];
    for (const a of all) a.tabIndex = a === stop ? 0 : -1;
  }

  const steps = {ArrowLeft: [0, -1], ArrowRight: [0, 1], ArrowUp: [-1, 0], ArrowDown: [1, 0]};

  // The figure one step away, over cells and rows that have none.
  function beside(figure, [down, right]) {
    const rows = Array.from(figure.closest('table').querySelectorAll('tr'));
    let row = rows.indexOf(figure.closest('tr'));
    let column = figure.closest('td').cellIndex;
    for (row += down, column += right; rows[row] && column > 0 && column < rows[row].cells.length; row += down, column += right) {
      const next = rows[row].cells[column].querySelector('a.figure');
      if (next) return next;
    }
    return null;
  }

  document.addEventListener('focusin', ({target}) => {
    if (!target.matches?.('.ledger a.figure')) return;
    last = target.getAttribute('hx-get');
    rove();
  });

  document.addEventListener('keydown', (event) => {
    const figure = event.target.closest?.('.ledger a.figure');
    if (!figure || !steps[event.key] || event.ctrlKey || event.altKey || event.metaKey) return;
    event.preventDefault();
    beside(figure, steps[event.key])?.focus();
  });

  document.addEventListener('DOMContentLoaded', rove);
  document.addEventListener('htmx:after:swap', rove);

  document.addEventListener('keydown', (event) => {
    if (event.key !== 'Escape' || event.defaultPrevented || event.target.closest('form')) return;
    const close = panel()?.querySelector('a.close');
    if (!close) return;
    event.preventDefault();
    close.click();
  });
})();
