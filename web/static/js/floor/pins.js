// Pins: marks and words that keep their size on the screen: start, goal, and the
// closest place of the run with its number.

import { toScreen } from '../core/camera.js';
import { clock, metres } from '../core/format.js';
import { say, set, svg } from '../dom.js';

/** @typedef {import('../core/camera.js').Camera} Camera */
/** @typedef {import('../core/protocol.js').Hello} Hello */
/** @typedef {import('../core/protocol.js').Frame} Frame */
/** @typedef {import('../core/protocol.js').Point} Point */

/** Where the words of start and goal are: above the mark, px. */
const WORD = { up: 17, half: 22, height: 16 };
/** The leader of the closest place: how far out it goes before it turns level, px. */
const LEADER = 34;
export class Pins {
  #start = svg('g', { class: 'start-mark' }, svg('path', { d: 'M-8 0H8M0 -8V8' }), svg('path', { class: 'heading' }));
  #startWord = svg('text', { class: 'word', y: -WORD.up });
  #goalArea = svg('circle', { class: 'goal-area' });
  #goal = svg('g', { class: 'goal-mark' }, svg('circle', { class: 'goal-rim' }), svg('circle', { class: 'goal-dot', r: 4 }));
  #goalWord = svg('text', { class: 'word' });
  #beliefWord = svg('text', { class: 'word belief' });
  #circle = svg('circle', { class: 'pin-hull' });
  #leader = svg('path', { class: 'pin-leader' });
  #number = svg('tspan', { class: 'pin-number' });
  #when = svg('tspan');
  #text = svg('text', { class: 'pin-text' }, this.#number, this.#when);
  #closest = svg('g', {}, this.#circle, this.#leader, this.#text);

  /** Under the robot. */
  marks = svg('g', { 'aria-hidden': 'true' }, this.#goalArea, this.#start, this.#goal);
  /** Over everything. */
  words = svg('g', { 'aria-hidden': 'true' }, this.#startWord, this.#goalWord, this.#beliefWord);
  closest = svg('g', { 'aria-hidden': 'true' }, this.#closest);

  constructor() {
    say(this.#startWord, 'start');
    say(this.#goalWord, 'goal');
    say(this.#beliefWord, 'believes itself here');
  }

  /**
   * @param {Camera} c
   * @param {Hello} hello
   * @param {Frame} frame
   * @param {Point} start
   * @param {Point} goal
   */
  draw(c, hello, frame, start, goal) {
    const [sx, sy] = toScreen(c, start[0], start[1]);
    set(this.#start, 'transform', `translate(${px(sx)} ${px(sy)})`);
    const turn = hello.start[2];
    set(this.#start.lastElementChild ?? this.#start, 'd', `M${px(Math.cos(turn) * 8)} ${px(-Math.sin(turn) * 8)}L${px(Math.cos(turn) * 15)} ${px(-Math.sin(turn) * 15)}`);
    this.#word(this.#startWord, c, sx, sy, WORD.up);

    const [gx, gy] = toScreen(c, goal[0], goal[1]);
    const radius = Math.max(hello.goal[2] * c.scale, 9);
    set(this.#goal, 'transform', `translate(${px(gx)} ${px(gy)})`);
    set(this.#goal.firstElementChild ?? this.#goal, 'r', px(radius));
    set(this.#goalArea, 'cx', px(gx));
    set(this.#goalArea, 'cy', px(gy));
    set(this.#goalArea, 'r', px(radius));
    this.#word(this.#goalWord, c, gx, gy, Math.max(WORD.up, radius + 7));

    this.#believed(c, hello, frame);
    this.#pin(c, hello, frame);
  }

  /**
   * Says what the ghost of the robot is, once it is clear of the robot.
   * @param {Camera} c
   * @param {Hello} hello
   * @param {Frame} frame
   */
  #believed(c, hello, frame) {
    const [x, y] = toScreen(c, frame.belief[0], frame.belief[1]);
    const apart = Math.hypot(frame.belief[0] - frame.pose[0], frame.belief[1] - frame.pose[1]);
    const clear = apart > 2 * hello.hull && apart * c.scale > 30;
    set(this.#beliefWord, 'visibility', clear ? 'visible' : 'hidden');
    if (!clear) return;
    set(this.#beliefWord, 'x', px(x));
    set(this.#beliefWord, 'y', px(y + hello.hull * c.scale + 16));
  }

  /**
   * The word above the mark, or below it where there is no room above.
   * @param {Element} word
   * @param {Camera} c
   * @param {number} x
   * @param {number} y
   * @param {number} up
   */
  #word(word, c, x, y, up) {
    const inView = x > -20 && y > -20 && x < c.width + 20 && y < c.height + 20;
    set(word, 'visibility', inView ? 'visible' : 'hidden');
    const above = y - up > WORD.height;
    set(word, 'x', px(Math.min(Math.max(x, WORD.half), Math.max(c.width - WORD.half, WORD.half))));
    set(word, 'y', px(above ? y - up : y + up + WORD.height * 0.7));
  }

  /**
   * Whether a point of the screen is on the word of the start or the goal: a
   * handle for what lies under the robot.
   * @param {number} x
   * @param {number} y
   * @returns {'start' | 'goal' | null}
   */
  wordAt(x, y) {
    const on = (/** @type {Element} */ word) =>
      word.getAttribute('visibility') !== 'hidden' &&
      Math.abs(x - Number(word.getAttribute('x'))) < WORD.half && Math.abs(y + 5 - Number(word.getAttribute('y'))) < WORD.height / 2 + 2;
    return on(this.#startWord) ? 'start' : on(this.#goalWord) ? 'goal' : null;
  }

  /**
   * @param {Camera} c
   * @param {Hello} hello
   * @param {Frame} frame
   */
  #pin(c, hello, frame) {
    const at = frame.closest;
    if (!at || frame.leeway === null) {
      set(this.#closest, 'visibility', 'hidden');
      return;
    }
    const [hx, hy, wx, wy, time] = at;
    const [cx, cy] = toScreen(c, hx, hy);
    const [x, y] = toScreen(c, wx, wy);
    const inView = x > -4 && y > -4 && x < c.width + 4 && y < c.height + 4;
    set(this.#closest, 'visibility', inView ? 'visible' : 'hidden');
    if (!inView) return;
    const asked = hello.asked.leeway_m;
    const short = asked !== undefined && frame.leeway < asked;
    set(this.#closest, 'class', short ? 'pin short' : 'pin');
    set(this.#circle, 'cx', px(cx));
    set(this.#circle, 'cy', px(cy));
    set(this.#circle, 'r', px(Math.max(hello.hull * c.scale, 5)));

    const width = this.#write(metres(frame.leeway), ` closest, at ${clock(time, 0)}`);
    const right = x + LEADER + width < c.width - 8 ? 1 : -1;
    const up = y - LEADER > 26 ? -1 : 1;
    const [ex, ey] = [x + right * LEADER, y + up * LEADER];
    // The gap itself, from the hull to the solid, and from there to the words.
    const far = Math.hypot(x - cx, y - cy);
    const rim = far > 0 ? Math.min((hello.hull * c.scale) / far, 1) : 0;
    const [rx, ry] = [cx + (x - cx) * rim, cy + (y - cy) * rim];
    set(this.#leader, 'd', `M${px(rx)} ${px(ry)}L${px(x)} ${px(y)}L${px(ex)} ${px(ey)}h${px(right * width)}`);
    set(this.#text, 'x', px(ex + right * 3));
    set(this.#text, 'y', px(ey - 5));
    set(this.#text, 'text-anchor', right > 0 ? 'start' : 'end');
  }

  #written = '';
  #width = 0;

  /**
   * Writes the pin and returns how wide it is, px. It is measured only when it
   * says something else, since measuring makes the browser lay out the page.
   * @param {string} number
   * @param {string} when
   */
  #write(number, when) {
    if (number + when !== this.#written) {
      this.#written = number + when;
      say(this.#number, number);
      say(this.#when, when);
      this.#width = Math.round(this.#text.getComputedTextLength()) + 6;
    }
    return this.#width;
  }
}

/** Tenths of a pixel. @param {number} v */
const px = (v) => Math.round(v * 10) / 10;
