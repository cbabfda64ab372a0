// Transport: play, pause, one tick, restart, and how fast; with the clock of the
// run and the legend of its modes.

import { clock } from '../core/format.js';
import { html, say, set } from '../dom.js';
import { part } from './why.js';

/** @typedef {import('../core/state.js').State} State */
/** @typedef {import('../core/protocol.js').Command} Command */
/** @typedef {import('../core/protocol.js').Mode} Mode */

export class Transport {
  #play;
  #clock;
  #legend;
  /** @type {HTMLInputElement[]} */
  #speeds;
  /** @type {Mode[] | null} */
  #modes = null;
  #playing = false;
  #send;

  /**
   * @param {HTMLElement} root
   * @param {(command: Command) => void} send
   */
  constructor(root, send) {
    this.#send = send;
    this.#play = part(root, '[data-do=play]');
    this.#clock = part(root, '.clock');
    this.#legend = part(root, '.legend');
    this.#speeds = [...root.querySelectorAll('input[name=speed]')].filter((e) => e instanceof HTMLInputElement);
    root.addEventListener('click', (event) => {
      const button = event.target instanceof Element ? event.target.closest('[data-do]') : null;
      if (button) this.do(button.getAttribute('data-do') ?? '');
    });
    root.addEventListener('change', (event) => {
      if (event.target instanceof HTMLInputElement && event.target.name === 'speed') {
        send({ kind: 'speed', value: Number(event.target.value) });
      }
    });
  }

  /** @param {string} what play, tick or restart */
  do(what) {
    if (what === 'play') this.#send({ kind: this.#playing ? 'pause' : 'play' });
    else if (what === 'tick' || what === 'restart') this.#send({ kind: what });
  }

  /** @param {State} state */
  draw({ hello, frame }) {
    if (!hello || !frame) return;
    this.#playing = frame.playing;
    set(this.#play, 'aria-label', frame.playing ? 'Pause' : 'Play');
    set(this.#play, 'data-playing', frame.playing);
    say(this.#clock, clock(frame.time));
    for (const input of this.#speeds) {
      const on = Number(input.value) === frame.speed;
      if (input.checked !== on) input.checked = on;
    }
    if (hello.modes !== this.#modes) {
      this.#modes = hello.modes;
      this.#legend.replaceChildren(...legend(hello.modes));
    }
  }
}

/** @param {Mode[]} modes */
function legend(modes) {
  return modes
    .filter((m) => m.look !== 'done' && m.look !== 'fail')
    .map((m) => html('li', {}, html('i', { class: `swatch ${m.look}`, 'aria-hidden': 'true' }), m.name));
}

/**
 * What a single key does on the bench, or null: it is left alone while something
 * is being typed or chosen, and where the key has a meaning of its own.
 * @param {KeyboardEvent} event
 * @returns {'play' | 'tick' | 'restart' | null}
 */
export function shortcut(event) {
  if (event.ctrlKey || event.metaKey || event.altKey || event.defaultPrevented) return null;
  const on = event.target instanceof Element ? event.target : null;
  if (on?.closest('input, select, textarea, dialog[open]')) return null;
  switch (event.key) {
    case ' ':
      return on?.closest('button, a, summary') ? null : 'play';
    case '.':
      return 'tick';
    case 'r':
    case 'R':
      return 'restart';
    default:
      return null;
  }
}

