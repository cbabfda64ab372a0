// Ground: the sheet of the floor, its grid, and the scale bar. They change with
// the camera alone.

import { niceLength, toScreen } from '../core/camera.js';
import { metres } from '../core/format.js';
import { say, set, svg } from '../dom.js';

/** @typedef {import('../core/camera.js').Camera} Camera */

/** Grid lines are at least this far apart, px. */
const GRID = 42;
/** The scale bar is at least this long, px. */
const BAR = 56;

export class Ground {
  #sheet = svg('rect', { class: 'sheet' });
  #grid = svg('path', { class: 'grid' });
  #edge = svg('rect', { class: 'edge' });
  #bar = svg('path', { class: 'scale' });
  #length = svg('text', { class: 'scale-text' });

  under = svg('g', { 'aria-hidden': 'true' }, this.#sheet, this.#grid, this.#edge);
  over = svg('g', { 'aria-hidden': 'true' }, this.#bar, this.#length);

  /**
   * @param {Camera} c
   * @param {[number, number, number, number]} bounds
   */
  draw(c, [x0, y0, x1, y1]) {
    const [left, top] = toScreen(c, x0, y1).map(Math.round);
    const [right, bottom] = toScreen(c, x1, y0).map(Math.round);
    for (const rect of [this.#sheet, this.#edge]) {
      set(rect, 'x', left);
      set(rect, 'y', top);
      set(rect, 'width', right - left);
      set(rect, 'height', bottom - top);
    }
    // Only what is in view: a close look at a large floor has few lines.
    const [l, r] = [Math.max(left, 0), Math.min(right, c.width)];
    const [t, b] = [Math.max(top, 0), Math.min(bottom, c.height)];
    const step = niceLength(c.scale, GRID);
    let d = '';
    for (let i = Math.ceil(x0 / step); i * step <= x1; i++) {
      const x = Math.round(toScreen(c, i * step, 0)[0]) + 0.5;
      if (x > l + 1 && x < r - 1) d += `M${x} ${t}V${b}`;
    }
    for (let i = Math.ceil(y0 / step); i * step <= y1; i++) {
      const y = Math.round(toScreen(c, 0, i * step)[1]) + 0.5;
      if (y > t + 1 && y < b - 1) d += `M${l} ${y}H${r}`;
    }
    set(this.#grid, 'd', d);

    const length = niceLength(c.scale, BAR);
    const px = length * c.scale;
    const [x, y] = [14, c.height - 10];
    set(this.#bar, 'd', `M${x} ${y - 5}v5h${px}v-5`);
    set(this.#length, 'x', x + px + 8);
    set(this.#length, 'y', y + 1);
    say(this.#length, metres(length, length < 0.1 ? 2 : length < 1 ? 1 : 0));
  }
}
