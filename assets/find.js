/* Finding an entry of a sheet by its name: a box that offers what the server finds
   for it, as a combobox. Ctrl+/ (⌘/ on a Mac) leads to it; a key without Ctrl would
   take that letter from those who speak their commands. Without this script the box
   is a form that answers with a page of links.

   Hooks in the markup: [data-find] holds the input and the listbox; an option's
   data-to is the id it leads to, its data-for the text it was found for. */
(() => {
  'use strict';

  const box = () => document.querySelector('[data-find]');
  const input = () => box()?.querySelector('input');
  const list = () => box()?.querySelector('[role=listbox]');
  const options = () => Array.from(list()?.querySelectorAll('[data-to]') ?? []);

  let from = null; // what had the focus before
  let chosen = -1;
  let entered = false; // Enter was pressed before the answer came

  document.addEventListener('DOMContentLoaded', () => {
    const field = input();
    if (!field) return;
    for (const [name, value] of Object.entries({role: 'combobox', 'aria-autocomplete': 'list', 'aria-controls': 'found', 'aria-expanded': 'false'})) {
      field.setAttribute(name, value);
    }
    if (/Mac|iP(hone|ad)/.test(navigator.platform)) box().querySelector('kbd').textContent = '⌘ /';
    // What is typed here is no edit of the sheet around it.
    for (const kind of ['input', 'change']) box().addEventListener(kind, (event) => event.stopPropagation());
    field.addEventListener('keydown', keys);
    field.addEventListener('focus', () => { if (field.value) ask(); });
    field.addEventListener('blur', close);
    box().addEventListener('mousedown', (event) => { if (event.target.closest('[role=listbox]')) event.preventDefault(); });
    box().addEventListener('click', (event) => go(event.target.closest('[data-to]')));
  });

  const ask = () => htmx.trigger(input(), 'ask');

  document.addEventListener('focusin', ({target}) => { if (target !== input() && target !== document.body) from = target; });

  document.addEventListener('keydown', (event) => {
    if (event.key !== '/' || !(event.ctrlKey || event.metaKey) || event.altKey || !input()) return;
    event.preventDefault();
    input().focus();
    input().select();
  });

  document.addEventListener('htmx:after:swap', ({detail: {ctx}}) => {
    if (!input() || ctx?.sourceElement !== input()) return;
    if (!input().value.trim() || document.activeElement !== input()) return close();
    list().hidden = false;
    input().setAttribute('aria-expanded', 'true');
    choose(0);
    if (entered && current()) go(options()[0]);
  });

  // Whether the list belongs to what stands in the box.
  const current = () => list().firstElementChild?.dataset.for === input().value;

  function choose(i) {
    const all = options();
    chosen = all.length ? (i + all.length) % all.length : -1;
    all.forEach((option, at) => option.setAttribute('aria-selected', String(at === chosen)));
    if (chosen < 0) {
      input().removeAttribute('aria-activedescendant');
      return;
    }
    input().setAttribute('aria-activedescendant', all[chosen].id);
    all[chosen].scrollIntoView({block: 'nearest'});
  }

  function close() {
    entered = false;
    chosen = -1;
    list().hidden = true;
    input().setAttribute('aria-expanded', 'false');
    input().removeAttribute('aria-activedescendant');
  }

  function go(option) {
    const place = option && document.getElementById(option.dataset.to);
    if (!place) return;
    input().value = '';
    close();
    place.dispatchEvent(new CustomEvent('bring', {bubbles: true, detail: {focus: true}}));
  }

  function keys(event) {
    if (event.ctrlKey || event.metaKey || event.altKey || event.isComposing) return;
    if (event.key === 'ArrowDown' || event.key === 'ArrowUp') {
      if (list().hidden) ask();
      else choose(chosen + (event.key === 'ArrowDown' ? 1 : -1));
    } else if (event.key === 'Enter') {
      if (!input().value.trim()) return event.preventDefault();
      if (!list().hidden && current()) go(options()[chosen]);
      else {
        entered = true;
        ask();
      }
    } else if (event.key === 'Escape') {
      if (list().hidden && !input().value) from?.focus();
      input().value = '';
      close();
    } else {
      entered = false;
      return;
    }
    event.preventDefault();
  }
})();
