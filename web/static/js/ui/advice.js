// Advice: what can be said of the numbers before anything moves: where the simple
// model is exact, which gain the delays allow, how far it brakes against how far it
// sees, what it can miss.

import { html, say, set } from '../dom.js';
import { part, sentence } from './why.js';

/** @typedef {import('../core/state.js').State} State */
/** @typedef {import('../core/protocol.js').Advice} Told */

const ABOUT = new Map([['exact', 'Exactness'], ['gain', 'Gain'], ['braking', 'Braking'], ['missed', 'What it can miss']]);

export class Advice {
  #root;
  #list;
  #short;
  /** @type {Told[] | null} */
  #told = null;
  #form = '';

  /**
   * @param {HTMLElement} root
   * @param {Element} short where the sum of it is said in few words
   */
  constructor(root, short) {
    this.#root = root;
    this.#short = short;
    this.#list = part(root, 'ul');
  }

  /** @param {State} state */
  draw({ hello }) {
    if (!hello || hello.advice === this.#told) return;
    this.#told = hello.advice;
    const form = JSON.stringify(hello.advice);
    if (form === this.#form) return;
    this.#form = form;
    this.#list.replaceChildren(...hello.advice.map(item));
    const broken = hello.advice.filter((a) => !a.holds).length;
    say(part(this.#root, '.sum'), sum(hello.advice.length, broken));
    set(this.#root, 'data-broken', broken > 0);
    say(this.#short, inShort(hello.advice));
    set(this.#short, 'data-broken', broken > 0);
  }
}

/** @param {number} n @param {number} broken */
function sum(n, broken) {
  if (n === 0) return 'This robot is the point itself: there is nothing to part from.';
  if (broken === 0) return 'These numbers keep to all of it.';
  return broken === 1 ? 'One of these does not hold.' : `${broken} of these do not hold.`;
}

/** @param {Told[]} advice */
function inShort(advice) {
  const broken = [...new Set(advice.filter((a) => !a.holds).map((a) => (ABOUT.get(a.about) ?? a.about).toLowerCase()))];
  if (advice.length === 0) return '';
  return broken.length === 0 ? 'The limits of the simple model hold' : `Past a limit of the simple model: ${broken.join(', ')}`;
}

/** @param {Told} a */
function item(a) {
  const head = html('strong', {}, ABOUT.get(a.about) ?? a.about);
  if (!a.holds) head.append(html('em', {}, ' does not hold'));
  return html('li', { 'data-about': a.about, ...(a.holds ? {} : { class: 'broken' }) }, head, ' ', ...sentence(a.text));
}
