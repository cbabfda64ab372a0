// Movers: what goes its own way across the floor, its route faint below it.

import { moverOutline, route } from '../core/shapes.js';
import { set, svg } from '../dom.js';

/** @typedef {import('../core/protocol.js').Hello} Hello */
/** @typedef {import('../core/things.js').Places} Places */

export class Movers {
  routes = svg('g', { 'aria-hidden': 'true' });
  layer = svg('g', { 'aria-hidden': 'true' });
  /** @type {Hello | null} */
  #hello = null;
  /** @type {{shape: SVGPathElement, route: SVGPathElement}[]} */
  #drawn = [];

  /** @param {Places} places */
  draw(places) {
    const { hello } = places;
    if (hello !== this.#hello) {
      this.#hello = hello;
      this.#drawn = hello.movers.map((m) => ({
        shape: svg('path', { class: 'mover', d: moverOutline(m) }),
        route: svg('path', { class: 'route', d: route(m) }),
      }));
      this.layer.replaceChildren(...this.#drawn.map((d) => d.shape));
      this.routes.replaceChildren(...this.#drawn.map((d) => d.route));
    }
    this.#drawn.forEach((d, i) => {
      const { at, shift } = places.mover(i);
      set(d.shape, 'transform', `translate(${at[0]} ${at[1]})`);
      set(d.route, 'transform', `translate(${shift[0]} ${shift[1]})`);
    });
  }
}
