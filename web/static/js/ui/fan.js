// Fan: the beams over time, a strip of shades: dark where something was near. What
// the beams saw is not on the tape; it is asked for when the strip is open, and
// from then on only what is new.

import { order, shades } from '../core/fan.js';
import { html, say, vary } from '../dom.js';
import { colour } from './paint.js';

/** @typedef {import('../core/state.js').State} State */
/** @typedef {import('../core/fan.js').Seen} Seen */

/** While it plays, what is new is asked for this often, ms. */
const OFTEN = 1000;

export class Fan {
  #session;
  #seek;
  #redraw;
  #canvas = html('canvas', { 'aria-hidden': 'true' });
  #now = html('div', { class: 'now' });
  #plot = html('div', { class: 'fan-plot' }, this.#canvas, this.#now);
  #reach = html('b', { class: 'n' });
  root;
  /** @type {Seen} */
  #seen = { ticks: [], ranges: [] };
  #epoch = -1;
  #asking = false;
  #asked = 0;
  #painted = '';
  #fresh = 0;
  /** @type {State | null} */
  #state = null;
  #shown = { from: 0, to: 1 };

  /**
   * @param {() => string} session
   * @param {(tick: number, live: boolean) => void} seek
   * @param {() => void} redraw
   */
  constructor(session, seek, redraw) {
    this.#session = session;
    this.#seek = seek;
    this.#redraw = redraw;
    const sides = html('div', { class: 'fan-sides', 'aria-hidden': 'true' }, ...['left', 'nose', 'right'].map((w) => html('span', {}, w)));
    this.root = html('div', { class: 'chart' },
      html('p', { class: 'chart-head' }, html('span', { class: 'chart-title' }, 'beams'),
        html('span', { class: 'key' }, html('i', { class: 'key-shade', 'aria-hidden': 'true' }), 'dark: near; light: ', this.#reach, ' and beyond')),
      html('div', { class: 'fan' }, sides, this.#plot));
    this.#listen();
  }

  /**
   * @param {State} state as it is shown
   * @param {{from: number, to: number}} shown s
   */
  draw(state, shown) {
    this.#state = state;
    this.#shown = shown;
    const { hello, frame, tape } = state;
    if (!hello || !frame) return;
    if (tape.ways[0].epoch !== this.#epoch) {
      this.#epoch = tape.ways[0].epoch;
      this.#seen = { ticks: [], ranges: [] };
      this.#asked = 0;
    }
    this.#ask(tape.length, tape.every);
    const width = Math.floor(this.#plot.clientWidth);
    if (width === 0) return;
    const key = `${this.#epoch} ${this.#seen.ticks.length} ${shown.from} ${shown.to} ${width} ${this.#fresh} ${hello.bearings.length}`;
    if (key !== this.#painted) {
      this.#painted = key;
      this.#paint(hello, shown, width);
      say(this.#reach, `${hello.range_max.toFixed(2)} m`);
    }
    const x = ((frame.time - shown.from) / (shown.to - shown.from)) * width;
    vary(this.#now, 'transform', `translateX(${Math.round(Math.min(Math.max(x, -9), width + 9) * 2) / 2}px)`);
  }

  resized() {
    this.#redraw();
  }

  repaint() {
    this.#fresh++;
    this.#redraw();
  }

  destroy() {
    this.#asking = true;
  }

  /**
   * @param {number} length
   * @param {number} every
   */
  async #ask(length, every) {
    const from = (this.#seen.ticks.at(-1) ?? -1) + 1;
    const now = performance.now();
    if (this.#asking || from + every > length + 1 || now - this.#asked < OFTEN) return;
    this.#asking = true;
    this.#asked = now;
    const epoch = this.#epoch;
    const more = await fetchBeams(this.#session(), from);
    this.#asking = false;
    if (!more || epoch !== this.#epoch) return;
    this.#seen = { ticks: [...this.#seen.ticks, ...more.ticks], ranges: [...this.#seen.ranges, ...more.ranges] };
    this.#redraw();
  }

  /**
   * @param {import('../core/protocol.js').Hello} hello
   * @param {{from: number, to: number}} shown
   * @param {number} width
   */
  #paint(hello, shown, width) {
    const beams = order(hello.bearings);
    const pen = this.#canvas.getContext('2d');
    if (!pen || beams.length === 0) return;
    // One pixel a beam; the page stretches the picture, without smoothing it.
    this.#canvas.width = width;
    this.#canvas.height = beams.length;
    const near = shades(this.#seen, beams, hello.range_max, shown.from / hello.tick_s, shown.to / hello.tick_s, width);
    const picture = pen.createImageData(width, beams.length);
    const [far, dark] = [bytes(colour('--track')), bytes(colour('--ink'))];
    for (let i = 0; i < near.length; i++) {
      if (near[i] < 0) continue;
      for (let c = 0; c < 3; c++) picture.data[4 * i + c] = far[c] + near[i] * (dark[c] - far[c]);
      picture.data[4 * i + 3] = 255;
    }
    pen.putImageData(picture, 0, 0);
  }

  #listen() {
    let down = false;
    const seek = (/** @type {PointerEvent} */ event, /** @type {boolean} */ live) => {
      const hello = this.#state?.hello;
      const box = this.#plot.getBoundingClientRect();
      if (!hello || box.width === 0) return;
      const { from, to } = this.#shown;
      this.#seek(Math.round((from + ((event.clientX - box.left) / box.width) * (to - from)) / hello.tick_s), live);
    };
    this.#plot.addEventListener('pointerdown', (event) => {
      if (event.button !== 0) return;
      down = true;
      this.#plot.setPointerCapture(event.pointerId);
      seek(event, true);
    });
    this.#plot.addEventListener('pointermove', (event) => down && seek(event, true));
    const up = (/** @type {PointerEvent} */ event) => {
      if (down) seek(event, false);
      down = false;
    };
    this.#plot.addEventListener('pointerup', up);
    this.#plot.addEventListener('pointercancel', up);
  }
}

/**
 * Red, green and blue of a colour, whatever it is written in.
 * @param {string} value
 */
function bytes(value) {
  const pen = document.createElement('canvas').getContext('2d', { willReadFrequently: true });
  if (!pen) return [0, 0, 0];
  pen.fillStyle = value;
  pen.fillRect(0, 0, 1, 1);
  return pen.getImageData(0, 0, 1, 1).data;
}

/**
 * @param {string} session
 * @param {number} from tick
 * @returns {Promise<Seen | null>}
 */
async function fetchBeams(session, from) {
  try {
    const answer = await fetch(`/api/sessions/${encodeURIComponent(session)}/beams?from=${from}`, { cache: 'no-store' });
    if (!answer.ok) return null;
    const { ticks, ranges } = await answer.json();
    return { ticks: ticks ?? [], ranges: ranges ?? [] };
  } catch {
    return null;
  }
}
