// Trail: the way driven, in the colour of each mode and, for those who cannot
// tell the colours apart, with a mark along the middle of the line: none for
// goal-seeking, dashes for wall-following, dots for obstacle avoidance. A redraw
// touches the last chunk alone.

import { set, svg } from '../dom.js';

/** @typedef {import('../core/trail.js').Trail} Way */
/** @typedef {import('../core/protocol.js').Mode} Mode */

export class Trail {
  #lines = svg('g', { class: 'trail' });
  #marks = svg('g', { class: 'trail-marks' });
  layer = svg('g', { 'aria-hidden': 'true' }, this.#lines, this.#marks);
  #epoch = -1;
  /** @type {{line: SVGPathElement, mark: SVGPathElement | null}[]} */
  #drawn = [];

  /**
   * @param {Way} trail
   * @param {Mode[]} modes
   */
  draw(trail, modes) {
    if (trail.epoch !== this.#epoch) {
      this.#epoch = trail.epoch;
      this.#lines.replaceChildren();
      this.#marks.replaceChildren();
      this.#drawn = [];
    }
    for (let i = Math.max(this.#drawn.length - 1, 0); i < trail.chunks.length; i++) {
      const chunk = trail.chunks[i];
      if (i >= this.#drawn.length) this.#drawn.push(this.#begin(modes[chunk.mode]?.look ?? 'other'));
      const { line, mark } = this.#drawn[i];
      set(line, 'd', chunk.d);
      if (mark) set(mark, 'd', chunk.d);
    }
  }

  /** @param {string} look */
  #begin(look) {
    const line = svg('path', { class: `way ${look}` });
    this.#lines.append(line);
    if (look !== 'wall' && look !== 'avoid') return { line, mark: null };
    const mark = svg('path', { class: `tick ${look}` });
    this.#marks.append(mark);
    return { line, mark };
  }
}
