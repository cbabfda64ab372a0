// Strips: what the strips under the tape show, as columns of numbers. A chart has
// one unit; its lines are read from the rows of the tape.

import { BASE, BELIEF, ENDED, GAP, LEFT, LEFT_COMMANDED, RIGHT, RIGHT_COMMANDED, SPEED, TICK, TURNING, X, Y } from './tape.js';

/** @typedef {import('./protocol.js').Row} Row */
/** @typedef {import('./protocol.js').Hello} Hello */
/** @typedef {import('./tape.js').Tape} Tape */

/** How a line is drawn. @typedef {'actual' | 'commanded' | 'second' | 'second commanded' | 'point' | 'unicycle'} Style */

/** @typedef {{label: string, style: Style, of: (row: Row) => number | null}} Line */

/** A line straight across that should not be passed. @typedef {{label: string, at: number}} Limit */

/**
 * @typedef {object} Chart
 * @property {string} title
 * @property {string} unit
 * @property {number} decimals
 * @property {Line[]} lines
 * @property {Limit[]} limits
 * @property {number} least what the scale has at the least, above and below where there is anything below
 */

/**
 * @param {string} strip
 * @param {Hello} hello
 * @returns {Chart[]}
 */
export function charts(strip, hello) {
  const wheels = hello.motion === 'two_wheels';
  const { wheel, track, wheel_max: most, ceiling } = hello;
  switch (strip) {
    case 'speed':
      return [
        chart('speed', 'm/s', 2, [
          ...(wheels ? [line('commanded', 'commanded', (r) => (wheel * (r[LEFT_COMMANDED] + r[RIGHT_COMMANDED])) / 2)] : []),
          line('actual', 'actual', (r) => r[SPEED]),
        ], ceiling === null ? [] : [{ label: 'ceiling', at: ceiling }], 0.1),
        chart('turning', 'rad/s', 2, [
          ...(wheels && track > 0 ? [line('commanded', 'commanded', (r) => (wheel * (r[RIGHT_COMMANDED] - r[LEFT_COMMANDED])) / track)] : []),
          line('actual', 'actual', (r) => r[TURNING]),
        ], [], 0.5),
      ];
    case 'wheels':
      if (!wheels) return [];
      return [chart('wheels', 'rad/s', 1, [
        line('left commanded', 'commanded', (r) => r[LEFT_COMMANDED]),
        line('right commanded', 'second commanded', (r) => r[RIGHT_COMMANDED]),
        line('left', 'actual', (r) => r[LEFT]),
        line('right', 'second', (r) => r[RIGHT]),
      ], most === null ? [] : [{ label: 'limit', at: most }, { label: '', at: -most }], 1)];
    case 'estimate':
      return [chart('estimate error', 'm', 3, [
        line('off by', 'actual', (r) => Math.hypot(r[BELIEF] - r[BASE[0] + X], r[BELIEF + 1] - r[BASE[0] + Y])),
      ], [], 0.05)];
    case 'deviation':
      return [chart('robot from', 'm', 2, [line('point', 'point', apart(1)), line('unicycle', 'unicycle', apart(2))], [], 0.2)];
    default:
      return [];
  }
}

/**
 * @param {string} title
 * @param {string} unit
 * @param {number} decimals
 * @param {Line[]} lines
 * @param {Limit[]} limits
 * @param {number} least
 * @returns {Chart}
 */
const chart = (title, unit, decimals, lines, limits, least) => ({ title, unit, decimals, lines, limits, least });

/** @param {string} label @param {Style} style @param {(row: Row) => number | null} of @returns {Line} */
const line = (label, style, of) => ({ label, style, of });

/**
 * How far the robot is from a shadow at the same time, while the shadow is under way.
 * @param {1 | 2} who
 * @returns {(row: Row) => number | null}
 */
const apart = (who) => (r) => {
  const b = BASE[who];
  if (r.length <= b + GAP || r[b + ENDED]) return null;
  return Math.hypot(r[BASE[0] + X] - r[b + X], r[BASE[0] + Y] - r[b + Y]);
};

/**
 * The columns of a chart: times in seconds, then each line, up to the robot's end.
 * @param {Chart} c
 * @param {Tape} tape
 * @param {number} dt s a tick
 * @returns {(number | null)[][]}
 */
export function columns(c, tape, dt) {
  const end = tape.endOf(0)?.tick ?? Infinity;
  const rows = tape.rows.filter((r) => r[TICK] <= end);
  return [rows.map((r) => r[TICK] * dt), ...c.lines.map((l) => rows.map((r) => l.of(r)))];
}

/**
 * The scale of a chart: everything on it, its limits too where they are near enough
 * that showing them does not flatten the lines, and a little room.
 * @param {Chart} c
 * @param {number | null} low
 * @param {number | null} high
 * @returns {[number, number]}
 */
export function scale(c, low, high) {
  let top = Math.max(high ?? 0, c.least);
  let bottom = Math.min(low ?? 0, 0);
  for (const { at } of c.limits) {
    if (at > 0 && at < 3 * top) top = Math.max(top, at);
    if (at < 0 && bottom < 0 && at > 3 * bottom) bottom = Math.min(bottom, at);
  }
  const room = 0.06 * (top - bottom);
  return [bottom < 0 ? bottom - room : 0, top + room];
}

/**
 * What the lines of a chart are at a moment, in words; nothing where a line has
 * nothing.
 * @param {Chart} c
 * @param {Row | undefined} row
 * @returns {(string | null)[]}
 */
export function values(c, row) {
  return c.lines.map((l) => {
    const v = row ? l.of(row) : null;
    return v === null ? null : `${Math.abs(v) < 0.5 * 10 ** -c.decimals ? (0).toFixed(c.decimals) : v.toFixed(c.decimals).replace('-', '−')}`;
  });
}
