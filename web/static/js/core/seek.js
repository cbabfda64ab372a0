// Seek: looking at another moment. Until the server has answered with that very
// tick, what the tape itself knows of it is shown, so that the picture follows the
// hand in the same frame.

import { BASE, GAP } from './tape.js';

/** @typedef {import('./protocol.js').Frame} Frame */
/** @typedef {import('./protocol.js').Shadow} Shadow */
/** @typedef {import('./protocol.js').Who} Who */
/** @typedef {import('./state.js').State} State */

/**
 * @typedef {object} Seek
 * @property {number} tick
 * @property {boolean} live a hand holds on to it
 * @property {number} patience frames of other ticks that may still come first
 */

/** Frames that were under way when the seek was sent; beyond that, somebody else drives. */
const PATIENCE = 12;
/** What the beams saw is shown for this long beside its own moment, s. */
const BEAMS = 0.15;

/**
 * @param {number} tick
 * @param {number} length of the tape
 * @param {boolean} live
 * @returns {Seek}
 */
export function to(tick, length, live) {
  return { tick: Math.round(Math.min(Math.max(tick, 0), length)), live, patience: PATIENCE };
}

/**
 * The seek after a frame has come: none any more once it is answered.
 * @param {Seek | null} seek
 * @param {Frame} frame
 * @returns {Seek | null}
 */
export function answered(seek, frame) {
  if (!seek) return null;
  if (frame.tick === seek.tick) return seek.live ? seek : null;
  if (seek.live) return seek;
  return seek.patience > 1 ? { ...seek, patience: seek.patience - 1 } : null;
}

/**
 * The state as it is to be shown: with the exact frame when it is there, and else
 * with one made of what the tape knows.
 * @param {State} s
 * @returns {State}
 */
export function shown(s) {
  const { seek, frame, hello, tape } = s;
  if (!seek || !frame || !hello || frame.tick === seek.tick) return s;
  const pose = tape.poseAt(0, seek.tick);
  const belief = tape.beliefAt(seek.tick);
  const row = tape.rows[Math.max(tape.rowAt(seek.tick), 0)];
  if (!pose || !belief || !row) return s;
  const stretch = tape.stretchAt(0, seek.tick);
  const near = Math.abs(frame.tick - seek.tick) * hello.tick_s <= BEAMS;
  return {
    ...s,
    frame: {
      ...frame, tick: seek.tick, time: seek.tick * hello.tick_s, playing: false, at_head: seek.tick >= tape.length, pose, belief,
      mode: stretch?.mode ?? frame.mode, side: side(stretch?.side), since: stretch ? stretch.tick * hello.tick_s : frame.since,
      gap: row[BASE[0] + GAP] ?? null,
      ranges: near ? frame.ranges : [],
      shadows: frame.shadows.map((shadow, i) => {
        const who = /** @type {Who} */ (i + 1);
        const at = tape.stretchAt(who, seek.tick);
        return { ...shadow, pose: tape.poseAt(who, seek.tick) ?? shadow.pose, mode: at?.mode ?? shadow.mode, side: side(at?.side) };
      }),
    },
  };
}

/** @param {number | undefined} v @returns {-1 | 0 | 1} */
const side = (v) => (v === undefined || v === 0 ? 0 : v > 0 ? 1 : -1);
