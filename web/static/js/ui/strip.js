// Strip: short notices over the page. They take no room in the layout and are
// read out politely; a new one takes the place of the old.

import { say, set } from '../dom.js';

/** A notice is shown for this long, ms, and a problem for longer. */
const NOTICE = 6000;
const PROBLEM = 12000;

export class Strip {
  #shown;
  #words;
  #heard;
  #timer = 0;
  #hush = 0;

  /**
   * @param {HTMLElement} shown
   * @param {HTMLElement} words inside it
   * @param {HTMLElement} heard a live region that is never seen
   */
  constructor(shown, words, heard) {
    this.#shown = shown;
    this.#words = words;
    this.#heard = heard;
    shown.querySelector('button')?.addEventListener('click', () => this.#hide());
    // Nothing disappears from under a hand.
    shown.addEventListener('pointerenter', () => clearTimeout(this.#timer));
    shown.addEventListener('pointerleave', () => this.#hideIn(NOTICE));
  }

  /** @param {string} text @param {boolean} [problem] */
  show(text, problem = false) {
    say(this.#words, text);
    set(this.#shown, 'data-problem', problem);
    set(this.#shown, 'data-shown', true);
    this.#hideIn(problem ? PROBLEM : NOTICE);
    this.announce(text);
  }

  /**
   * Only read out. Of many in a row, as when a key is held down, the last.
   * @param {string} text
   */
  announce(text) {
    clearTimeout(this.#hush);
    this.#hush = window.setTimeout(() => say(this.#heard, text), 150);
  }

  /** @param {number} ms */
  #hideIn(ms) {
    clearTimeout(this.#timer);
    this.#timer = window.setTimeout(() => this.#hide(), ms);
  }

  #hide() {
    set(this.#shown, 'data-shown', null);
  }
}
