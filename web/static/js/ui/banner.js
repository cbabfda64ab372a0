// Banner: says over the floor that the connection is not there, what happens
// about it, and offers to hurry it.

import { say, set } from '../dom.js';
import { part } from './why.js';

/** @typedef {import('../core/state.js').State} State */

export class Banner {
  #root;
  #words;
  #button;
  #timer = 0;

  /**
   * @param {HTMLElement} root
   * @param {() => void} retry
   */
  constructor(root, retry) {
    this.#root = root;
    this.#words = part(root, '.words');
    this.#button = part(root, 'button');
    this.#button.addEventListener('click', retry);
  }

  /** @param {State} state */
  draw(state) {
    clearTimeout(this.#timer);
    const { link } = state;
    // The first connection takes a blink; a banner for it would only flash.
    const shown = link !== 'live' && !(link === 'connecting' && state.retryAt === 0);
    set(this.#root, 'hidden', !shown);
    if (!shown) return;
    say(this.#words, words(state));
    set(this.#button, 'hidden', link === 'connecting' || link === 'gone');
    say(this.#button, link === 'lost' ? 'Try now' : 'Take it up again');
    if (link === 'lost') this.#timer = window.setTimeout(() => this.draw(state), 1000);
  }
}

/** @param {State} state */
function words({ link, linkText, retryAt, hello }) {
  switch (link) {
    case 'lost': {
      const s = Math.ceil((retryAt - Date.now()) / 1000);
      return `The connection to the server is lost. ${s > 1 ? `Trying again in ${s} s.` : 'Trying again.'}`;
    }
    case 'gone':
      return hello ? 'The server knows this run no more. Handing it over again …' : 'The server knows this run no more.';
    case 'ended':
      return linkText || 'The server has put this run away.';
    default:
      return 'Connecting …';
  }
}
