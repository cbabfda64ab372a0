// Why: the card that says which mode the robot is in, since when and because of
// what; and what would make it leave that mode: every exit with its conditions as
// gauges, each with its threshold, and the band within which it is not given up.

import { clock, fixed, numbersIn } from '../core/format.js';
import { groups, places } from '../core/gauge.js';
import { html, say, set, vary } from '../dom.js';

/** @typedef {import('../core/state.js').State} State */
/** @typedef {import('../core/protocol.js').Gauge} Gauge */
/** @typedef {import('../core/protocol.js').Exit} Exit */
/** @typedef {import('../core/protocol.js').Mode} Mode */
/** @typedef {import('../core/gauge.js').Group} Group */

const SIDES = new Map([[1, ', wall on the left'], [-1, ', wall on the right'], [0, '']]);

export class Why {
  #card;
  #name;
  #since;
  #why;
  #exits;
  #said = '';
  /** @type {Exit[] | null} */
  #drawn = null;
  #form = '';
  /** @type {GroupView[]} */
  #groups = [];

  /** @param {HTMLElement} card */
  constructor(card) {
    this.#card = card;
    this.#name = part(card, '.mode-name');
    this.#since = part(card, '.since');
    this.#why = part(card, '.because');
    this.#exits = part(card, '.exits');
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
      set(this.#why, 'title', frame.why);
    }
    if (frame.exits !== this.#drawn) {
      this.#drawn = frame.exits;
      this.#show(groups(frame.exits, hello.modes), hello.modes);
    }
  }

  /**
   * The same exits keep their elements.
   * @param {Group[]} all
   * @param {Mode[]} modes
   */
  #show(all, modes) {
    const form = JSON.stringify(all.map((g) => [g.to, g.name, g.when, g.all.length, g.one.length, g.hold]));
    if (form !== this.#form) {
      this.#form = form;
      this.#groups = all.map((g) => new GroupView(g, modes[g.to]));
      this.#exits.replaceChildren(...this.#groups.map((v) => v.root));
    }
    this.#groups.forEach((v, i) => v.show(all[i]));
  }
}

/** The exits to one mode. */
class GroupView {
  /** @type {GaugeView[]} */
  #gauges;
  #held = html('span', { class: 'held' });

  /**
   * @param {Group} g
   * @param {Mode | undefined} mode
   */
  constructor(g, mode) {
    const all = g.all.map(() => new GaugeView());
    const one = g.one.map(() => new GaugeView());
    this.#gauges = [...all, ...one];
    const title = html('p', { class: 'to' }, 'To ', html('b', {}, g.name), `, ${g.when}`, this.#held);
    this.root = html('div', { class: 'exit', 'data-to': g.name, 'data-look': mode?.look ?? 'other' }, title, ...all.map((v) => v.root));
    if (one.length > 0 && all.length > 0) this.root.append(html('p', { class: 'and' }, 'and one of these'));
    this.root.append(...one.map((v) => v.root));
  }

  /** @param {Group} g */
  show(g) {
    [...g.all, ...g.one].forEach((gauge, i) => this.#gauges[i].show(gauge));
    say(this.#held, g.hold > 0 ? `for ${fixed(Math.min(g.held, g.hold), 2)} of ${fixed(g.hold, 2)}\u00a0s` : '');
    set(this.#held, 'data-holding', g.hold > 0 && g.held > 0);
  }
}

class GaugeView {
  #label = html('span', { class: 'label' });
  #fill = html('i', { class: 'fill' });
  #band = html('i', { class: 'band' });
  #mark = html('i', { class: 'mark-at' });
  #value = html('span', { class: 'value' });
  root = html('div', { class: 'gauge' }, this.#label,
    html('span', { class: 'bar', 'aria-hidden': 'true' }, this.#band, this.#fill, this.#mark), this.#value);

  /** @param {Gauge} g */
  show(g) {
    const at = places(g);
    set(this.root, 'data-met', g.met);
    say(this.#label, plain(g.label));
    set(this.#label, 'title', g.label);
    say(this.#value, g.text);
    vary(this.#fill, 'width', `${at.fill}%`);
    vary(this.#mark, 'left', `${at.mark}%`);
    vary(this.#band, 'left', `${at.band}%`);
    vary(this.#band, 'width', `${at.width}%`);
  }
}

/**
 * A sentence with its numbers in the monospaced face.
 * @param {string} words
 */
export function sentence(words) {
  return numbersIn(words).map((p) => (p.number ? html('span', { class: 'n' }, p.text) : document.createTextNode(p.text)));
}

/** In a column of labels the article says nothing. @param {string} label */
const plain = (label) => label.replace(/^The /, '');

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
