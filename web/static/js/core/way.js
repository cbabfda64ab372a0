// Way: where one model has been, cut into chunks of one mode each. Points only
// ever come at the end, so a picture of it need only touch the last chunk: every
// other one is final. A chunk can be cut at any tick, so that a way can be shown
// as far as a moment in the past.

/** @typedef {import('./protocol.js').Point} Point */

/**
 * @typedef {object} Chunk
 * @property {number} mode index of the mode; −1 where modes are not told apart
 * @property {number[]} ticks of its points
 * @property {string[]} points "x y", in metres
 */

/** Points of one chunk; a longer stretch of one mode is continued in another. */
const CHUNK = 192;
/** Points closer than this to the last one drawn are left out, m. */
const FINEST = 0.004;
/** A hull that goes farther than this from one point to the next was carried, m. */
const CARRIED = 1.5;

export class Way {
  /** @type {Chunk[]} */
  chunks = [];
  /** Changes whenever the way starts anew. */
  epoch = 0;
  #x = NaN;
  #y = NaN;
  #tick = 0;

  clear() {
    this.chunks = [];
    this.epoch++;
    this.#x = NaN;
    this.#y = NaN;
  }

  /**
   * @param {number} tick after those before
   * @param {number} x
   * @param {number} y
   * @param {number} [mode]
   */
  add(tick, x, y, mode = -1) {
    const moved = Math.hypot(x - this.#x, y - this.#y);
    const last = this.chunks.at(-1);
    if (last && last.mode === mode && moved < FINEST) return;
    const point = coordinates(x, y);
    if (!last || moved > CARRIED) {
      this.chunks.push({ mode, ticks: [tick], points: [point] });
    } else if (last.mode !== mode || last.points.length >= CHUNK) {
      this.chunks.push({ mode, ticks: [this.#tick, tick], points: [coordinates(this.#x, this.#y), point] });
    } else {
      last.ticks.push(tick);
      last.points.push(point);
    }
    this.#x = x;
    this.#y = y;
    this.#tick = tick;
  }

  /**
   * The number of the last chunk that begins at or before the tick; −1 when there
   * is none.
   * @param {number} tick
   */
  chunkAt(tick) {
    return upTo(this.chunks.length, (i) => this.chunks[i].ticks[0] <= tick) - 1;
  }
}

/** @param {Chunk} c */
export const whole = (c) => `M${c.points.join('L')}`;

/**
 * A chunk in two: what was driven up to the tick, ending where the model then
 * was, and what comes after.
 * @param {Chunk} c
 * @param {number} tick
 * @param {Point} at where the model was at that tick
 * @returns {[string, string]} path data; empty where there is nothing
 */
export function cut(c, tick, at) {
  const n = upTo(c.ticks.length, (i) => c.ticks[i] <= tick);
  const here = coordinates(at[0], at[1]);
  const [lx, ly] = n > 0 ? c.points[n - 1].split(' ').map(Number) : [NaN, NaN];
  const away = Math.hypot(at[0] - lx, at[1] - ly);
  const head = c.points.slice(0, n);
  // A hull under a hand, or carried, is not joined to where it was.
  if (away >= FINEST && away < CARRIED) head.push(here);
  const rest = c.points.slice(n);
  if (rest.length > 0) rest.unshift(here);
  return [head.length > 0 ? `M${head.join('L')}` : '', rest.length > 0 ? `M${rest.join('L')}` : ''];
}

/**
 * How many of the first n numbers pass a test that holds up to some place and not
 * beyond.
 * @param {number} n
 * @param {(i: number) => boolean} holds
 */
export function upTo(n, holds) {
  let low = 0;
  let high = n;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (holds(middle)) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** Millimetres are finer than a pixel at the closest look. @param {number} x @param {number} y */
const coordinates = (x, y) => `${mm(x)} ${mm(y)}`;
/** @param {number} v */
const mm = (v) => Math.round(v * 1000) / 1000;
