// Fan: what the beams saw over time, as shades: a column for each pixel, a row for
// each beam, from the leftmost beam above to the rightmost below. Of the moments
// that fall into one pixel the nearest return is shown.

import { upTo } from './way.js';

/** @typedef {{ticks: number[], ranges: (number | null)[][]}} Seen */

/**
 * The beams from left to right: those on the left, from behind to the nose, come
 * first.
 * @param {number[]} bearings rad, positive to the left
 * @returns {number[]} numbers of beams
 */
export function order(bearings) {
  const around = (/** @type {number} */ a) => Math.atan2(Math.sin(a), Math.cos(a));
  return bearings.map((_, i) => i).sort((a, b) => around(bearings[b]) - around(bearings[a]));
}

/**
 * How near each beam's return was in each column: 1 at the sensor, 0 at its reach
 * or beyond, −1 where nothing is known.
 * @param {Seen} seen
 * @param {number[]} beams in the order of the rows
 * @param {number} reach m
 * @param {number} from tick at the left edge
 * @param {number} to tick at the right edge
 * @param {number} width columns
 * @returns {Float32Array} row by row
 */
export function shades(seen, beams, reach, from, to, width) {
  const out = new Float32Array(width * beams.length).fill(-1);
  const { ticks, ranges } = seen;
  const scale = width / Math.max(to - from, 1e-9);
  const apart = ticks.length > 1 ? ticks[1] - ticks[0] : 1;
  const first = Math.max(upTo(ticks.length, (i) => ticks[i] <= from) - 1, 0);
  for (let i = first; i < ticks.length && ticks[i] < to; i++) {
    const x0 = Math.max(Math.floor((ticks[i] - from) * scale), 0);
    const x1 = Math.min(Math.max(Math.floor((Math.min(ticks[i + 1] ?? Infinity, ticks[i] + apart) - from) * scale), x0 + 1), width);
    for (let k = 0; k < beams.length; k++) {
      const range = ranges[i][beams[k]];
      const near = range === null || range === undefined ? 0 : Math.min(Math.max(1 - range / reach, 0), 1);
      for (let x = x0; x < x1; x++) out[k * width + x] = Math.max(out[k * width + x], near);
    }
  }
  return out;
}
