/* Undo and redo of a sheet's edits by keys, and what they changed brought in sight.
   Without this script the same two buttons send the form, and the address leads to
   the entry.

   Which undo Ctrl+Z is: the browser's own in an entry whose text the server has not
   taken yet, and in every input that is no entry; the sheet's everywhere else.

   Hooks in the markup: the entries lie in #fields; #undo and #redo are the buttons;
   #said tells what was done, and its data-to names the element that it changed. */
(() => {
  'use strict';

  const fields = () => document.getElementById('fields');
  const entry = (element) => element?.matches?.('#fields :is(input, select)[name]');
  const named = (name) => Array.from(fields()?.querySelectorAll('[name]') ?? []).find((input) => input.name === name);

  // What was typed and not taken yet, by the entry's name.
  const untaken = new Map();

  document.addEventListener('input', ({target}) => {
    if (entry(target)) untaken.set(target.name, target.value);
  }, true);

  // An answer that replaces the entries leaves open what was open, where it stood.
  let open = [];
  let scrolled = 0;

  document.addEventListener('htmx:before:response', ({detail: {ctx}}) => {
    if (!fields()) return;
    if (ctx.response.status === 200 || ctx.response.status === 422) {
      for (const [name, text] of untaken) {
        if (ctx.request.body?.get?.(name) === text) untaken.delete(name);
      }
    }
    open = Array.from(fields().querySelectorAll('details[open]'), (details) => details.id);
    scrolled = document.querySelector('.inputs').scrollTop;
  });

  document.addEventListener('htmx:after:swap', ({detail: {ctx}}) => {
    if (!fields()) return;
    for (const id of open) document.getElementById(id)?.toggleAttribute('open', true);
    for (const [name, text] of untaken) {
      const input = named(name);
      if (!input) untaken.delete(name);
      else if (input.value !== text) input.value = text;
    }
    document.querySelector('.inputs').scrollTop = scrolled;
    if (ctx?.sourceElement?.matches?.('#undo, #redo')) show(document.getElementById(document.getElementById('said').dataset.to));
  });

  // The entry takes the focus from another entry, or from nothing; a button that was
  // pressed keeps it, to be pressed again.
  function show(changed) {
    if (!changed) return;
    for (let around = changed.closest('details'); around; around = around.parentElement.closest('details')) around.open = true;
    changed.scrollIntoView({block: 'nearest'});
    flash(changed.closest('.f') ?? changed);
    if (document.activeElement !== document.body && !fields().contains(document.activeElement)) return;
    const input = changed.matches('input, select') ? changed : changed.querySelector('input, select, button');
    input?.focus({preventScroll: true});
  }

  function flash(row) {
    row.classList.add('flash');
    setTimeout(() => row.classList.remove('flash'), 1200);
  }

  function button(event) {
    if (event.defaultPrevented || event.isComposing || event.altKey || !(event.ctrlKey || event.metaKey)) return null;
    const key = event.key.toLowerCase();
    if (key === 'z') return document.getElementById(event.shiftKey ? 'redo' : 'undo');
    if (key === 'y' && event.ctrlKey && !event.shiftKey) return document.getElementById('redo');
    return null;
  }

  const writing = (element) => element.matches?.('textarea, input:not([type=checkbox], [type=radio], [type=file])');

  document.addEventListener('keydown', (event) => {
    const press = button(event);
    if (!press || writing(event.target) && (!entry(event.target) || untaken.has(event.target.name))) return;
    event.preventDefault();
    press.click();
  });
})();
