// Shades: the shadows themselves, each a small hull with its heading, lined like
// its way: dotted the point, dashed the unicycle.

import { set, svg } from '../dom.js';

/** @typedef {import('../core/protocol.js').Hello} Hello */
/** @typedef {import('../core/protocol.js').Shadow} Shadow */

/** A shadow is drawn smaller than the hull that it stands for, so that the robot stays the one that is seen. */
const SMALLER = 0.62;

export class Shades {
  #hulls = ['point', 'unicycle'].map((name) => {
    const rim = svg('circle', { class: `shade-hull ${name}` });
    const nose = svg('path', { class: 'shade-nose' });
    return { rim, nose, group: svg('g', {}, rim, nose) };
  });
  layer = svg('g', { 'aria-hidden': 'true' }, ...this.#hulls.map((h) => h.group));
  #size = 0;

  /**
   * @param {Hello} hello
   * @param {Shadow[]} shadows
   */
  draw(hello, shadows) {
    const r = Math.round(hello.hull * SMALLER * 1e4) / 1e4;
    if (r !== this.#size) {
      this.#size = r;
      for (const { rim, nose } of this.#hulls) {
        set(rim, 'r', r);
        set(nose, 'd', `M${r * 0.2} 0H${r}`);
      }
    }
    this.#hulls.forEach(({ group }, i) => {
      const shadow = shadows[i];
      set(group, 'display', shadow ? null : 'none');
      if (!shadow) return;
      const [x, y, turn] = shadow.pose;
      const [c, s] = [Math.cos(turn).toFixed(5), Math.sin(turn).toFixed(5)];
      set(group, 'transform', `matrix(${c} ${s} ${-s} ${c} ${x} ${y})`);
    });
  }
}
