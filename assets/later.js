/* <loss-later src="/designs/1/map" filled hx-morph-skip-children>…</loss-later>: a
   part of the page that is fetched on its own, so that the answer it belongs to need
   not wait. What stands in it is replaced by the answer of its address, again whenever
   the address changes; until then it stays, in :state(late): a morph would take an
   attribute of that meaning away. With filled what stands in it is that answer already.
   Without a script the element is what it holds. */
(() => {
  'use strict';

  class LossLater extends HTMLElement {
    static observedAttributes = ['src'];

    #request; // under way, or none
    #states = this.attachInternals().states;

    connectedCallback() { if (!this.hasAttribute('filled')) this.#fetch(); }

    disconnectedCallback() { this.#request?.abort(); }

    attributeChangedCallback(_, before) { if (before !== null && this.isConnected) this.#fetch(); }

    // The newest address wins: what is still under way for another is dropped.
    async #fetch() {
      this.#request?.abort();
      const request = this.#request = new AbortController();
      this.#states.add('late');
      try {
        const answer = await fetch(this.getAttribute('src'), {headers: {'HX-Request': 'true'}, signal: request.signal});
        const text = await answer.text();
        if (request !== this.#request) return;
        if (!answer.ok) throw new Error(answer.statusText);
        await htmx.swap({text, target: this, swap: 'innerMorph', sourceElement: this});
        this.#states.delete('late');
      } catch (error) {
        if (!request.signal.aborted) this.#fail();
      }
    }

    #fail() {
      const words = this.querySelector(':scope > .failed') ?? document.createElement('p');
      words.className = 'failed stale';
      words.setAttribute('role', 'status');
      words.textContent = 'This could not be fetched. Load the page again to see it as it is now.';
      this.prepend(words);
    }
  }

  customElements.define('loss-later', LossLater);
})();
