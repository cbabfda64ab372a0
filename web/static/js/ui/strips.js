// Strips: charts under the tape that open and close, on the tape's own time axis.

import { charts } from '../core/strips.js';
import { html, set } from '../dom.js';
import { Chart } from './chart.js';
import { Fan } from './fan.js';
import { part } from './why.js';

/** @typedef {import('../core/state.js').State} State */

/**
 * What the strips tell the bench, and ask it.
 * @typedef {object} Told
 * @property {() => string} session
 * @property {(tick: number, live: boolean) => void} seek
 * @property {() => void} redraw
 */

/** @typedef {{root: HTMLElement, form: string, parts: (Chart | Fan)[]}} Open */

export class Strips {
  #told;
  #panels;
  #shown;
  /** @type {Map<string, HTMLElement>} */
  #buttons = new Map();
  /** Those that are open, in the order of their buttons. @type {Map<string, Open | null>} */
  #open = new Map();

  /**
   * @param {HTMLElement} root
   * @param {() => {from: number, to: number}} shown what of the time the tape shows, s
   * @param {Told} told
   */
  constructor(root, shown, told) {
    this.#told = told;
    this.#shown = shown;
    this.#panels = part(root, '.strip-panels');
    for (const button of root.querySelectorAll('[data-strip]')) {
      if (!(button instanceof HTMLElement)) continue;
      const key = button.dataset.strip ?? '';
      this.#buttons.set(key, button);
      button.addEventListener('click', () => this.#toggle(key));
    }
    new ResizeObserver(() => this.#each((p) => p.resized())).observe(this.#panels);
    matchMedia('(prefers-color-scheme: dark)').addEventListener('change', () => this.#each((p) => p.repaint()));
  }

  /** @param {State} state as it is shown */
  draw(state) {
    const { hello } = state;
    if (!hello || this.#open.size === 0) return;
    for (const [key, button] of this.#buttons) {
      if (!this.#open.has(key)) continue;
      const specs = charts(key, hello);
      // Limits and units come with the scenario: another one, another chart.
      const form = JSON.stringify([key, specs, hello.motion, hello.wheel, hello.track]);
      let open = this.#open.get(key) ?? null;
      if (open?.form !== form) {
        open?.parts.forEach((p) => p.destroy());
        open?.root.remove();
        open = this.#begin(key, form, specs, button.textContent ?? '');
        this.#open.set(key, open);
        this.#place();
      }
      for (const p of open.parts) p.draw(state, this.#shown());
    }
  }

  /** @param {string} key */
  #toggle(key) {
    const open = this.#open.get(key);
    if (this.#open.delete(key)) {
      open?.parts.forEach((p) => p.destroy());
      open?.root.remove();
    } else {
      this.#open.set(key, null);
    }
    const button = this.#buttons.get(key);
    if (button) set(button, 'aria-pressed', String(this.#open.has(key)));
    this.#told.redraw();
  }

  /**
   * @param {string} key
   * @param {string} form
   * @param {import('../core/strips.js').Chart[]} specs
   * @param {string} name
   * @returns {Open}
   */
  #begin(key, form, specs, name) {
    const { session, seek, redraw } = this.#told;
    const narrow = matchMedia('(max-width: 899px)').matches;
    const room = narrow ? { left: 40, right: 4 } : { left: 76, right: 92 };
    const parts = key === 'beams' ? [new Fan(session, seek, redraw)] : specs.map((c) => new Chart(c, room, seek, redraw));
    const root = html('section', { class: 'strip-panel', 'data-panel': key, 'aria-label': name }, ...parts.map((p) => p.root));
    if (parts.length === 0) root.append(html('p', { class: 'soft' }, `${name}: this robot has none.`));
    return { root, form, parts };
  }

  /** Puts the panels into the order of their buttons. */
  #place() {
    const roots = [...this.#buttons.keys()].map((key) => this.#open.get(key)?.root);
    for (const root of roots) if (root) this.#panels.append(root);
  }

  /** @param {(p: Chart | Fan) => void} does */
  #each(does) {
    for (const open of this.#open.values()) open?.parts.forEach(does);
  }
}
