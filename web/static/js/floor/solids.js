// Solids: all that stands, as one path of walls and one of filled shapes, so
// that thousands of them are two elements. Those that have been moved since the
// last whole picture are drawn one by one, and shifted.

import { outline, standing } from '../core/shapes.js';
import { set, svg } from '../dom.js';

/** @typedef {import('../core/protocol.js').Hello} Hello */
/** @typedef {import('../core/things.js').Places} Places */

export class Solids {
  #fills = svg('path', { class: 'solid' });
  #walls = svg('path', { class: 'thin' });
  #moved = svg('g');
  /** @type {Map<number, SVGPathElement>} */
  #single = new Map();
  /** @type {Hello | null} */
  #hello = null;
  /** @type {Map<string, number>} */
  #index = new Map();

  layer = svg('g', { 'aria-hidden': 'true' }, this.#fills, this.#walls, this.#moved);

  /** @param {Places} places */
  draw(places) {
    const { hello } = places;
    let stale = false;
    if (hello !== this.#hello) {
      this.#hello = hello;
      this.#index = new Map(hello.solids.map((s, i) => [s.id, i]));
      this.#single.clear();
      this.#moved.replaceChildren();
      stale = true;
    }
    const ids = [...places.moved.keys()];
    if (places.held?.key.startsWith('solid ')) ids.push(places.held.key.slice('solid '.length));
    for (const id of ids) {
      const i = this.#index.get(id);
      if (i === undefined || this.#single.has(i)) continue;
      const s = hello.solids[i];
      const path = svg('path', { class: s.shape === 'wall' ? 'thin' : 'solid', d: outline(s) });
      this.#single.set(i, path);
      this.#moved.append(path);
      stale = true;
    }
    if (stale) {
      const { walls, fills } = standing(hello.solids, (i) => this.#single.has(i));
      set(this.#walls, 'd', walls);
      set(this.#fills, 'd', fills);
    }
    for (const [i, path] of this.#single) {
      const [dx, dy] = places.shift(i) ?? [0, 0];
      set(path, 'transform', `translate(${dx} ${dy})`);
    }
  }
}
