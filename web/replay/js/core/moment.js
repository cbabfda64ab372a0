// Moment: where everything is at a time, which need not be that of a frame. Times
// are ticks, whole or not.

import { ROBOT } from './film.js';

/** @typedef {import('./film.js').Film} Film */
/** @typedef {import('./film.js').Point} Point */

/** @typedef {{x: number, y: number, heading: number, gap: number, mode: number, side: number, ended: boolean}} Body */

/**
 * @typedef {object} Moment
 * @property {number} tick
 * @property {Body[]} models robot, point, unicycle
 * @property {[number, number, number] | null} belief x, y, heading of the robot's
 * @property {Point[]} movers
 * @property {number[] | null} ranges of the beams; null when they are not kept
 * @property {Point} goal
 * @property {Map<number, Point>} moved where the anchors of moved solids are
 */

/**
 * @param {Film} film
 * @param {number} tick
 * @returns {Moment}
 */
export function momentAt(film, tick) {
  const i = lastAtOrBefore(film.ticks, tick);
  const next = Math.min(i + 1, film.ticks.length - 1);
  const whole = next > i ? (tick - film.ticks[i]) / (film.ticks[next] - film.ticks[i]) : 0;
  const share = Math.min(Math.max(whole, 0), 1);

  // What a person carried off between two frames did not glide: until the edit it is
  // as it was, and from then on as it will be.
  const leap = (/** @type {string} */ what, /** @type {number} */ index) => {
    for (const e of film.edits) {
      if (e.tick >= film.ticks[next]) break;
      if (e.tick >= film.ticks[i] && e.what === what && (what === 'robot' || e.index === index)) return tick > e.tick ? 1 : 0;
    }
    return share;
  };
  const body = leap('robot', 0);
  const at = (/** @type {Float64Array} */ column, /** @type {number} */ f) => column[i] + (column[next] - column[i]) * f;

  /** @type {Point} */
  let goal = [film.head.goal[0], film.head.goal[1]];
  const moved = new Map();
  for (const e of film.edits) {
    if (e.tick >= tick) break; // due at the start of a tick, seen at its end
    if (e.what === 'goal') goal = [e.x, e.y];
    else if (e.what === 'solid') moved.set(e.index, [e.x, e.y]);
  }
  return {
    tick,
    models: film.tracks.map((t, who) => {
      const span = spanAt(film, who, tick);
      return {
        x: at(t.x, body),
        y: at(t.y, body),
        heading: t.heading[i] + turn(t.heading[i], t.heading[next]) * body,
        gap: at(t.gap, body),
        mode: span?.mode ?? 0,
        side: span?.side ?? 0,
        ended: tick >= film.head.models[who].end,
      };
    }),
    belief: film.belief.length < 3 ? null : [
      at(film.belief[0], body), at(film.belief[1], body), film.belief[2][i] + turn(film.belief[2][i], film.belief[2][next]) * body,
    ],
    movers: Array.from({ length: film.movers.length / 2 }, (_, k) => {
      const f = leap('mover', k);
      return /** @type {Point} */ ([at(film.movers[2 * k], f), at(film.movers[2 * k + 1], f)]);
    }),
    ranges: film.beams.length ? film.beams.map((b) => b[i]) : null, // a reading stays until the next
    goal,
    moved,
  };
}

/**
 * The mode that a model is in.
 * @param {Film} film
 * @param {number} who
 * @param {number} tick
 */
export function spanAt(film, who, tick) {
  const spans = film.spans[who];
  return spans[lastIndex(spans.length, (k) => spans[k].tick <= tick)];
}

/**
 * Why a model is in its mode, and since when; the text is empty where the film does
 * not say.
 * @param {Film} film
 * @param {number} who
 * @param {number} tick
 * @returns {{since: number, text: string}}
 */
export function whyAt(film, who, tick) {
  const spans = film.spans[who];
  let k = lastIndex(spans.length, (n) => spans[n].tick <= tick);
  while (k > 0 && spans[k - 1].mode === spans[k].mode) k--; // another side is no other mode
  if (k < 0) return { since: 0, text: '' };
  const whys = film.whys[who];
  const why = whys[lastIndex(whys.length, (n) => whys[n].tick <= tick)];
  if (why && why.mode === spans[k].mode && why.tick >= spans[k].tick) return { since: why.tick, text: why.text };
  return { since: spans[k].tick, text: k === 0 && spans[k].tick === 0 ? 'This is where the logic starts.' : '' };
}

/**
 * What has been said last, for as long as it takes to read it.
 * @param {Film} film
 * @param {number} tick
 * @param {number} lasting ticks
 */
export function captionAt(film, tick, lasting) {
  const marks = film.marks;
  const last = marks[lastIndex(marks.length, (k) => marks[k].tick <= tick)];
  if (!last || tick - last.tick > lasting) return null;
  // Of what happens at one time, what tells most comes first.
  const same = marks.filter((m) => m.tick === last.tick);
  return same.find((m) => m.kind === 'parting') ?? same.find((m) => m.kind === 'end' && m.who === ROBOT) ?? last;
}

/**
 * The way from one angle to another, the short way round.
 * @param {number} from
 * @param {number} to
 */
export function turn(from, to) {
  const d = (to - from) % (2 * Math.PI);
  return d > Math.PI ? d - 2 * Math.PI : d < -Math.PI ? d + 2 * Math.PI : d;
}

/**
 * @param {Float64Array} ticks
 * @param {number} tick
 */
export const lastAtOrBefore = (ticks, tick) => Math.max(0, lastIndex(ticks.length, (k) => ticks[k] <= tick));

/**
 * The last place, of n, up to which ok holds; −1: none.
 * @param {number} n
 * @param {(k: number) => boolean} ok
 */
export function lastIndex(n, ok) {
  let low = 0;
  let high = n;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (ok(middle)) low = middle + 1;
    else high = middle;
  }
  return low - 1;
}
