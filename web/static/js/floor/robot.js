// Robot: hull, wheels and a nose in the colour of the mode, where it truly is;
// and, once the two have drifted apart, a ghost where it believes itself to be.

import { line, ring } from '../core/shapes.js';
import { set, svg } from '../dom.js';

/** @typedef {import('../core/protocol.js').Hello} Hello */
/** @typedef {import('../core/protocol.js').Frame} Frame */

/** The ghost shows beyond this drift: 2 cm, or 2 degrees. */
const DRIFT = 0.02;
const TURN = (2 * Math.PI) / 180;

export class Robot {
  #hull = svg('circle', { class: 'hull' });
  #wheels = svg('path', { class: 'wheel' });
  #nose = svg('path', { class: 'nose' });
  #body = svg('g', {}, this.#hull, this.#wheels, this.#nose);
  #rim = svg('path', { class: 'ghost' });
  #tip = svg('path', { class: 'ghost-nose' });
  #ghost = svg('g', {}, this.#rim, this.#tip);
  #between = svg('path', { class: 'drift' });
  layer = svg('g', { 'aria-hidden': 'true' }, this.#body);
  belief = svg('g', { 'aria-hidden': 'true' }, this.#between, this.#ghost);
  /** @type {Hello | null} */
  #hello = null;

  /**
   * @param {Hello} hello
   * @param {Frame} frame
   * @param {readonly [number, number]} at the robot's place, which a hand may be moving
   */
  draw(hello, frame, at) {
    if (hello !== this.#hello) {
      this.#hello = hello;
      this.#shape(hello);
    }
    const look = hello.modes[frame.mode]?.look ?? 'other';
    set(this.#body, 'transform', pose(at[0], at[1], frame.pose[2]));
    set(this.#nose, 'class', `nose ${look}`);

    const [bx, by, turn] = frame.belief;
    const apart = Math.hypot(bx - frame.pose[0], by - frame.pose[1]);
    const turned = Math.abs(wrap(turn - frame.pose[2]));
    const held = at[0] !== frame.pose[0] || at[1] !== frame.pose[1];
    const shown = !held && (apart > DRIFT || turned > TURN);
    set(this.belief, 'visibility', shown ? 'visible' : 'hidden');
    if (!shown) return;
    set(this.#ghost, 'transform', pose(bx, by, turn));
    set(this.#between, 'd', line([[at[0], at[1]], [bx, by]]));
  }

  /** @param {Hello} hello */
  #shape(hello) {
    const r = hello.hull;
    set(this.#hull, 'r', r);
    const half = hello.track / 2;
    const [a, b] = [Math.max(hello.wheel, r * 0.2), Math.max(r * 0.09, 0.01)];
    const wheel = (/** @type {number} */ y) => line([[-a, y - b], [a, y - b], [a, y + b], [-a, y + b]]) + 'Z';
    set(this.#wheels, 'd', hello.motion === 'two_wheels' ? wheel(half) + wheel(-half) : '');
    const tip = line([[r * 0.82, 0], [r * 0.34, r * 0.3], [r * 0.34, -r * 0.3]]) + 'Z';
    set(this.#nose, 'd', tip);
    set(this.#rim, 'd', ring(0, 0, r));
    set(this.#tip, 'd', line([[r * 0.34, r * 0.3], [r * 0.82, 0], [r * 0.34, -r * 0.3]]));
  }
}

/** @param {number} x @param {number} y @param {number} angle */
function pose(x, y, angle) {
  const [c, s] = [Math.cos(angle).toFixed(5), Math.sin(angle).toFixed(5)];
  return `matrix(${c} ${s} ${-s} ${c} ${x} ${y})`;
}

/** @param {number} a */
const wrap = (a) => Math.atan2(Math.sin(a), Math.cos(a));
