// Why: the card that says which mode the robot is in, since when, and because of
// what.

import { clock, numbersIn } from '../core/format.js';
import { html, say, set } from '../dom.js';

/** @typedef {import('../core/state.js').State} State */

const SIDES = new Map([[1, ', wall on the left'], [-1, ', wall on the right'], [0, '']]);

export class Why {
  #card;
  #name;
  #since;
  #why;
  #said = '';

  /** @param {HTMLElement} card */
  constructor(card) {
    this.#card = card;
    this.#name = part(card, '.mode-name');
    this.#since = part(card, '.since');
    this.#why = part(card, '.because');
  }

  /** @param {State} state */
  draw({ hello, frame }) {
    if (!hello || !frame) return;
    const mode = hello.modes[frame.mode];
    if (!mode) return;
    set(this.#card, 'data-look', mode.look);
    const side = mode.look === 'wall' ? SIDES.get(frame.side) ?? '' : '';
    say(this.#name, capital(mode.name) + side);
    say(this.#since, `Since ${clock(frame.since)}.`);
    if (frame.why !== this.#said) {
      this.#said = frame.why;
      this.#why.replaceChildren(...sentence(frame.why));
    }
  }
}

/**
 * A sentence with its numbers in the monospaced face.
 * @param {string} words
 */
export function sentence(words) {
  return numbersIn(words).map((p) => (p.number ? html('span', { class: 'n' }, p.text) : document.createTextNode(p.text)));
}

/** @param {string} s */
const capital = (s) => s.charAt(0).toUpperCase() + s.slice(1);

/**
 * @param {Element} within
 * @param {string} selector
 */
export function part(within, selector) {
  const found = within.querySelector(selector);
  if (!found) throw new Error(`the page has no ${selector}`);
  return found;
}
