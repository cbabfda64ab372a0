// Marks: what happened, as small signs on the tape that lead there. They share one
// stop of the Tab key; arrow keys go from one to the next.

import { bunches, kindOf, leadsTo, wordsOf } from '../core/marks.js';
import { html, say, set, svg, vary } from '../dom.js';

/** @typedef {import('../core/protocol.js').Mark} Mark */
/** @typedef {import('../core/marks.js').Bunch} Bunch */

/** Signs closer than this lie in one, px. */
const APART = 18;

/** Signs in a box of 12 by 12. */
const SIGNS = new Map([
  ['contact', 'M6 1L11 6L6 11L1 6Z'],
  ['parting', 'M6 11V6.5M6 6.5L2 1.5M6 6.5L10 1.5'],
  ['chatter', 'M1 8L3.5 3L6 8L8.5 3L11 8'],
  ['ceiling', 'M1.5 2H10.5M6 11V4.5M3.4 7L6 4.4L8.6 7'],
]);

export class Marks {
  #root;
  #tip;
  #width = 0;
  /** @type {Bunch[]} */
  #bunches = [];
  /** @type {HTMLButtonElement[]} */
  #buttons = [];
  #now = () => 0;

  /**
   * @param {HTMLElement} root
   * @param {HTMLElement} tip where the words of the sign are shown that is pointed at or has the focus
   * @param {(tick: number) => void} seek
   */
  constructor(root, tip, seek) {
    this.#root = root;
    this.#tip = tip;
    for (const on of ['pointerover', 'focusin']) root.addEventListener(on, (event) => this.#explain(this.#of(event.target)));
    for (const off of ['pointerout', 'focusout']) root.addEventListener(off, () => this.#explain(-1));
    root.addEventListener('click', (event) => {
      const i = this.#of(event.target);
      if (i >= 0) seek(leadsTo(this.#bunches[i], this.#now()));
    });
    root.addEventListener('keydown', (event) => {
      const i = this.#of(event.target);
      const by = event.key === 'ArrowRight' ? 1 : event.key === 'ArrowLeft' ? -1 : 0;
      if (i < 0 || by === 0) return;
      event.preventDefault();
      this.#stop(Math.min(Math.max(i + by, 0), this.#bunches.length - 1))?.focus();
    });
  }

  /**
   * @param {Mark[]} marks
   * @param {(tick: number) => number} x
   * @param {number} width
   * @param {() => number} now tick
   */
  draw(marks, x, width, now) {
    this.#now = now;
    this.#width = width;
    this.#bunches = bunches(marks, x, width, APART);
    while (this.#buttons.length < this.#bunches.length) this.#buttons.push(begin());
    this.#bunches.forEach((b, i) => {
      const button = this.#buttons[i];
      const kind = kindOf(b);
      const words = wordsOf(b);
      set(button, 'data-kind', kind);
      set(button, 'aria-label', words);
      set(button, 'data-many', b.marks.length > 1);
      const sign = button.querySelector('path');
      if (sign) set(sign, 'd', SIGNS.get(kind) ?? '');
      vary(button, 'transform', `translateX(${Math.round(b.x)}px)`);
    });
    const shown = this.#buttons.slice(0, this.#bunches.length);
    if (this.#root.children.length !== shown.length) this.#root.replaceChildren(...shown);
    if (!shown.some((b) => b.tabIndex === 0)) this.#stop(0);
  }

  /** @param {number} i */
  #explain(i) {
    set(this.#tip, 'hidden', i < 0);
    if (i < 0) return;
    const b = this.#bunches[i];
    say(this.#tip, wordsOf(b));
    // Under the sign, as far as there is room beside it.
    const half = this.#tip.offsetWidth / 2;
    vary(this.#tip, 'transform', `translateX(${Math.round(Math.min(Math.max(b.x - half, 0), this.#width - 2 * half))}px)`);
  }

  /** The sign at which the Tab key stops. @param {number} i */
  #stop(i) {
    this.#buttons.forEach((b, k) => {
      b.tabIndex = k === i ? 0 : -1;
    });
    return this.#buttons[i];
  }

  /** @param {EventTarget | null} target */
  #of(target) {
    const button = target instanceof Element ? target.closest('button') : null;
    return button ? this.#buttons.indexOf(button) : -1;
  }
}

function begin() {
  const button = html('button', { type: 'button', class: 'mark-sign' }, svg('svg', { viewBox: '0 0 12 12', 'aria-hidden': 'true' }, svg('path')));
  button.tabIndex = -1;
  return button;
}
