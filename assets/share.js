/* The link to a revision that was just made: [data-link] holds its address,
   [data-copy] is a hidden button for it, [data-copied] says what became of that. */
(() => {
  'use strict';

  const link = document.querySelector('[data-link]');
  if (!link) return;
  // It takes the focus by its own attribute, before or after this script runs.
  for (const moment of ['focus', 'click']) link.addEventListener(moment, () => link.select());
  link.select();

  // Off this machine a page without encryption has no clipboard.
  if (!navigator.clipboard) return;
  const copy = document.querySelector('[data-copy]');
  const say = (words) => { document.querySelector('[data-copied]').textContent = words; };
  copy.hidden = false;
  copy.addEventListener('click', async () => {
    try {
      await navigator.clipboard.writeText(link.value);
      say('Copied.');
    } catch {
      link.select();
      link.focus();
      say('The browser does not let this page copy: the link is selected, copy it by keys.');
    }
  });
})();
