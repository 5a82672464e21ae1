/* Brings an element in sight that sends itself a "bring" event: what it is folded into
   opens, it is scrolled to and marked for a moment, and takes the focus if the event's
   detail says so. */
(() => {
  'use strict';

  const flashTime = 1200; // ms, as long as the animation in the stylesheet

  document.addEventListener('bring', ({target, detail}) => {
    for (let around = target.closest('details'); around; around = around.parentElement.closest('details')) around.open = true;
    target.scrollIntoView({block: 'nearest'});
    const row = target.closest('.f') ?? target;
    row.classList.add('flash');
    setTimeout(() => row.classList.remove('flash'), flashTime);
    if (!detail?.focus) return;
    const input = target.matches('input, select, button') ? target : target.querySelector('input, select, button');
    input?.focus({preventScroll: true});
    if (input?.matches('input')) input.select();
  });
})();
