// Lanes: the modes of one model over time as boxes of pixels. However many
// stretches there are, there are no more boxes than pixels: where several fall
// into one pixel it has the mode that takes most of it.

import { upTo } from './way.js';

/** @typedef {import('./tape.js').Stretch} Stretch */

/** @typedef {{x0: number, x1: number, mode: number, side: number}} Box */

/**
 * @param {Stretch[]} lane in order
 * @param {number} end tick at which the lane ends
 * @param {number} from tick at the left edge
 * @param {number} to tick at the right edge
 * @param {number} width px
 * @returns {Box[]}
 */
export function boxes(lane, end, from, to, width) {
  const scale = width / Math.max(to - from, 1e-9);
  const stop = Math.min(end, to);
  const first = Math.max(upTo(lane.length, (i) => lane[i].tick <= from) - 1, 0);
  const last = upTo(lane.length, (i) => lane[i].tick < stop);
  /** @type {Box[]} */
  const out = [];
  if (last - first > width / 2) return dense(lane, first, last, stop, from, scale, width);
  for (let i = first; i < last; i++) {
    const x0 = (Math.max(lane[i].tick, from) - from) * scale;
    const x1 = (Math.min(lane[i + 1]?.tick ?? stop, stop) - from) * scale;
    if (x1 > x0) out.push({ x0, x1, mode: lane[i].mode, side: lane[i].side });
  }
  return out;
}

/**
 * @param {Stretch[]} lane
 * @param {number} first
 * @param {number} last
 * @param {number} stop
 * @param {number} from
 * @param {number} scale
 * @param {number} width
 */
function dense(lane, first, last, stop, from, scale, width) {
  /** @type {Box[]} */
  const out = [];
  /** What each mode has of a pixel, in ticks. @type {Map<number, number>} */
  const shares = new Map();
  let i = first;
  const columns = Math.min(Math.ceil((stop - from) * scale), Math.ceil(width));
  for (let x = 0; x < columns; x++) {
    const [a, b] = [from + x / scale, Math.min(from + (x + 1) / scale, stop)];
    let best = null;
    let most = 0;
    shares.clear();
    for (; i < last && lane[i].tick < b; i++) {
      const next = lane[i + 1]?.tick ?? stop;
      const share = (shares.get(lane[i].mode) ?? 0) + Math.min(next, b) - Math.max(lane[i].tick, a);
      shares.set(lane[i].mode, share);
      if (share > most) {
        most = share;
        best = lane[i];
      }
      if (next >= b) break;
    }
    if (!best) continue;
    const before = out.at(-1);
    if (before && before.mode === best.mode && before.x1 === x) before.x1 = x + 1;
    else out.push({ x0: x, x1: x + 1, mode: best.mode, side: best.side });
  }
  return out;
}
