// Verdict: the card with the leeway against what is asked, the measures of the
// run, and, once it has ended, how.

import { verdict } from '../core/verdict.js';
import { say, set } from '../dom.js';
import { part, sentence } from './why.js';

/** @typedef {import('../core/state.js').State} State */

export class Verdict {
  #card;
  #big;
  #words;
  #status;
  #reason;
  /** @type {Map<string, {label: Element, value: Element, asked: Element}>} */
  #rows = new Map();
  #said = '';

  /** @param {HTMLElement} card */
  constructor(card) {
    this.#card = card;
    this.#big = part(card, '.big');
    this.#words = part(card, '.of');
    this.#status = part(card, '.status');
    this.#reason = part(card, '.reason');
    for (const tr of card.querySelectorAll('tr[data-row]')) {
      const [label, value, asked] = tr.children;
      this.#rows.set(tr.getAttribute('data-row') ?? '', { label, value, asked });
    }
  }

  /** @param {State} state */
  draw({ hello, frame }) {
    if (!hello || !frame) return;
    const v = verdict(frame, hello.asked);
    set(this.#card, 'data-mark', v.mark);
    say(this.#big, v.leeway);
    say(this.#words, v.words);
    set(this.#status, 'data-tone', v.tone);
    say(this.#status, v.status);
    if (v.reason !== this.#said) {
      this.#said = v.reason;
      this.#reason.replaceChildren(...sentence(v.reason));
    }
    for (const r of v.rows) {
      const cells = this.#rows.get(r.key);
      if (!cells) continue;
      say(cells.label, r.label);
      say(cells.value, r.value);
      say(cells.asked, r.asked);
      set(cells.value, 'class', r.bad ? 'bad' : null);
    }
  }
}
