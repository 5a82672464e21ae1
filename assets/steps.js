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

  // What was typed and not taken yet, by the entry's name: its text and the caret.
  const untaken = new Map();

  document.addEventListener('input', ({target}) => {
    if (entry(target)) untaken.set(target.name, {text: target.value, caret: target.selectionStart});
  }, true);

  // An answer that replaces entries leaves open what was open, where it stood, and what
  // was typed since it was asked for.
  let open = [];
  let scrolled = 0;

  document.addEventListener('htmx:before:response', ({detail: {ctx}}) => {
    open = Array.from(document.querySelectorAll('details[id][open]'), (details) => details.id);
    if (!fields()) return;
    if (ctx.response.status === 200 || ctx.response.status === 422) {
      for (const [name, {text}] of untaken) {
        if (ctx.request.body?.get?.(name) === text) untaken.delete(name);
      }
    }
    scrolled = document.querySelector('.inputs').scrollTop;
  });

  // Right behind the swap, before another key can be pressed.
  document.addEventListener('htmx:before:settle', ({target}) => {
    for (const id of open) {
      const details = document.getElementById(id);
      if (details && target.contains(details)) details.open = true;
    }
    if (target !== fields()) return;
    for (const [name, {text, caret}] of untaken) {
      const input = named(name);
      if (!input) untaken.delete(name);
      else if (input.value !== text) {
        input.value = text;
        if (caret !== null && input === document.activeElement) input.setSelectionRange(caret, caret);
      }
    }
    document.querySelector('.inputs').scrollTop = scrolled;
  });

  document.addEventListener('htmx:after:swap', ({detail: {ctx}}) => {
    if (fields() && ctx?.sourceElement?.matches?.('#undo, #redo')) show(document.getElementById(document.getElementById('said').dataset.to));
  });

  // The entry takes the focus from the entry in which the keys were pressed, or from
  // nothing. A button that was pressed keeps it, to be pressed again, and so does
  // whatever one has gone on to since.
  let origin = '';
  function show(changed) {
    const {activeElement} = document;
    const focus = activeElement === document.body || fields().contains(activeElement) && activeElement.id === origin && !untaken.has(activeElement.name);
    origin = changed?.id ?? ''; // the next of several presses goes on from here
    changed?.dispatchEvent(new CustomEvent('bring', {bubbles: true, detail: {focus}}));
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
    origin = document.activeElement.id;
    press.click();
  });
})();
