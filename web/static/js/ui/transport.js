// Transport: play, pause, one tick either way, restart, how fast, and shadows or
// not; with the clock of the run, the legend, and a hint at what a hand can do.

import { clock } from '../core/format.js';
import { html, say, set } from '../dom.js';
import { part } from './why.js';

/** @typedef {import('../core/state.js').State} State */
/** @typedef {import('../core/protocol.js').Command} Command */
/** @typedef {import('../core/protocol.js').Mode} Mode */

/** @typedef {'play' | 'tick' | 'back' | 'restart' | 'shadows'} Does */

export class Transport {
  #play;
  #clock;
  #length;
  #legend;
  #shadows;
  #hint;
  /** @type {HTMLInputElement[]} */
  #speeds;
  /** @type {Mode[] | null} */
  #modes = null;
  #playing = false;
  #on = true;
  #send;

  /**
   * @param {HTMLElement} root
   * @param {Element} legend
   * @param {(command: Command) => void} send
   */
  constructor(root, legend, send) {
    this.#send = send;
    this.#play = part(root, '[data-do=play]');
    this.#clock = part(root, '.clock');
    this.#length = part(root, '.length');
    this.#legend = legend;
    this.#shadows = part(root, '[data-do=shadows]');
    this.#hint = part(root, '.hint');
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

  /** @param {string} what one of Does */
  do(what) {
    if (what === 'play') this.#send({ kind: this.#playing ? 'pause' : 'play' });
    else if (what === 'shadows') this.#send({ kind: 'shadows', on: !this.#on });
    else if (what === 'tick' || what === 'back' || what === 'restart') this.#send({ kind: what });
  }

  /** @param {State} state */
  draw({ hello, frame, tape }) {
    if (!hello || !frame) return;
    this.#playing = frame.playing;
    this.#on = hello.shadows;
    set(this.#play, 'aria-label', frame.playing ? 'Pause' : 'Play');
    set(this.#play, 'data-playing', frame.playing);
    set(this.#shadows, 'aria-pressed', String(hello.shadows));
    const past = frame.tick < tape.length;
    say(this.#clock, clock(frame.time));
    say(this.#length, past ? `of ${clock(tape.length * hello.tick_s)}` : '');
    set(this.#hint, 'data-past', past && !frame.playing);
    const words = hint(past, frame.playing);
    say(this.#hint, words);
    set(this.#hint, 'title', words);
    for (const input of this.#speeds) {
      const on = Number(input.value) === frame.speed;
      if (input.checked !== on) input.checked = on;
    }
    if (hello.modes !== this.#modes) {
      this.#modes = hello.modes;
      for (const li of this.#legend.querySelectorAll('li:not(.shade)')) li.remove();
      this.#legend.prepend(...entries(hello.modes));
    }
    set(this.#legend, 'data-alone', !hello.shadows);
  }
}

/** @param {boolean} past @param {boolean} playing */
function hint(past, playing) {
  if (!past) return 'Drag the goal, an obstacle, or the line on the tape.';
  if (playing) return 'Playing what is known; a change starts another future.';
  return 'Looking back: play goes on from here; a change starts another future.';
}

/** @param {Mode[]} modes */
function entries(modes) {
  return modes
    .filter((m) => m.look !== 'done' && m.look !== 'fail')
    .map((m) => html('li', {}, html('i', { class: `swatch ${m.look}`, 'aria-hidden': 'true' }), m.name));
}

/**
 * What a single key does on the bench, or null: it is left alone while something
 * is being typed or chosen, and where the key has a meaning of its own.
 * @param {KeyboardEvent} event
 * @returns {Does | 'mark before' | 'mark after' | null}
 */
export function shortcut(event) {
  if (event.ctrlKey || event.metaKey || event.altKey || event.defaultPrevented) return null;
  const on = event.target instanceof Element ? event.target : null;
  // A radio button has arrows and Space for itself, and Space only while it is not chosen.
  const radio = on instanceof HTMLInputElement && on.type === 'radio';
  if (!radio && on?.closest('input, select, textarea')) return null;
  if (on?.closest('dialog[open]') || (radio && event.key === ' ' && !on.checked)) return null;
  switch (event.key) {
    case ' ':
      return on?.closest('button, a, summary') ? null : 'play';
    case '.':
      return 'tick';
    case ',':
      return 'back';
    case '[':
      return 'mark before';
    case ']':
      return 'mark after';
    case 'r':
    case 'R':
      return 'restart';
    case 's':
    case 'S':
      return 'shadows';
    default:
      return null;
  }
}
