// Beams: what the ring sees. A beam that met something ends in an echo; one that
// did not is dotted. Four elements in all, whatever the number of beams.

import { set, svg } from '../dom.js';

/** @typedef {import('../core/protocol.js').Hello} Hello */
/** @typedef {import('../core/protocol.js').Frame} Frame */

/** With more beams than this only their echoes are drawn; lines would blacken the floor. */
const MOST_LINES = 72;

export class Beams {
  #miss = svg('path', { class: 'beam' });
  #hit = svg('path', { class: 'beam hit' });
  #rim = svg('path', { class: 'echo-rim' });
  #heart = svg('path', { class: 'echo-heart' });
  layer = svg('g', { 'aria-hidden': 'true' }, this.#miss, this.#hit);
  echoes = svg('g', { 'aria-hidden': 'true' }, this.#rim, this.#heart);

  /**
   * @param {Hello} hello
   * @param {Frame} frame
   * @param {readonly [number, number]} at the robot's true place
   */
  draw(hello, frame, [x, y]) {
    const n = Math.min(hello.bearings.length, frame.ranges.length);
    const lines = n <= MOST_LINES;
    let miss = '';
    let hit = '';
    let echo = '';
    for (let i = 0; i < n; i++) {
      const range = frame.ranges[i];
      if (!Number.isFinite(range)) continue;
      const angle = frame.pose[2] + hello.bearings[i];
      const [c, s] = [Math.cos(angle), Math.sin(angle)];
      const from = `${mm(x + c * hello.mount)} ${mm(y + s * hello.mount)}`;
      const to = `${mm(x + c * (hello.mount + range))} ${mm(y + s * (hello.mount + range))}`;
      if (frame.hits[i] === '1') {
        if (lines) hit += `M${from}L${to}`;
        echo += `M${to}h0`;
      } else if (lines) {
        miss += `M${from}L${to}`;
      }
    }
    set(this.#miss, 'd', miss);
    set(this.#hit, 'd', hit);
    set(this.#rim, 'd', echo);
    set(this.#heart, 'd', lines ? echo : '');
  }
}

/** @param {number} v */
const mm = (v) => Math.round(v * 1000) / 1000;
