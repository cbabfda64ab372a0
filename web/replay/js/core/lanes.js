// Lanes: the layout of the tape in pixels, for any width.

import { clock } from '../../../static/js/core/format.js';
import { POINT, ROBOT, UNICYCLE } from './film.js';

/** @typedef {import('./film.js').Film} Film */

/** From the top: the simplest model first. */
export const ORDER = [POINT, UNICYCLE, ROBOT];

/**
 * @typedef {object} Layout
 * @property {number} width of the whole, px
 * @property {number} left where time begins
 * @property {number} right where the film ends
 * @property {number} marks height of the row of marks
 * @property {number} lane height of a lane
 * @property {number} step from lane to lane
 * @property {number} gaps where the strip begins
 * @property {number} strip its height
 * @property {number} height of the whole
 */

/**
 * @param {number} width
 * @returns {Layout}
 */
export function layout(width) {
  const narrow = width < 560;
  const lane = narrow ? 16 : 19;
  const step = lane + (narrow ? 4 : 5);
  const marks = 20;
  const gaps = marks + step * ORDER.length + 8;
  const strip = narrow ? 54 : 66;
  const left = narrow ? 58 : 84;
  const right = Math.max(left + 40, width - (narrow ? 14 : 124));
  return { width, left, right, marks, lane, step, gaps, strip, height: gaps + strip + 20 };
}

/**
 * @param {Layout} l
 * @param {Film} film
 * @param {number} tick
 */
export const xOf = (l, film, tick) => l.left + ((l.right - l.left) * tick) / Math.max(film.head.length, 1);

/**
 * @param {Layout} l
 * @param {Film} film
 * @param {number} x
 */
export function tickOf(l, film, x) {
  const share = Math.min(Math.max((x - l.left) / (l.right - l.left), 0), 1);
  return share * film.head.length;
}

/** @typedef {{x: number, width: number, look: string, name: string, word: string}} Block */

/** About the width of a letter in a lane, px. */
const LETTER = 6.6;

/**
 * The modes of a model as blocks in its lane. Blocks too thin to be seen by themselves
 * are drawn as wide as can be seen.
 * @param {Layout} l
 * @param {Film} film
 * @param {number} who
 * @returns {Block[]}
 */
export function blocks(l, film, who) {
  const { modes, models } = film.head;
  const spans = film.spans[who];
  return spans.map((s, k) => {
    const x = xOf(l, film, s.tick);
    const end = xOf(l, film, k + 1 < spans.length ? spans[k + 1].tick : models[who].end);
    const { name, look } = modes[s.mode];
    const side = look === 'wall' && s.side ? (s.side > 0 ? ', left' : ', right') : '';
    const width = Math.max(end - x - 0.8, 0.6);
    const word = [name + side, name].find((w) => w.length * LETTER + 12 < width) ?? '';
    return { x, width, look, name: name + side, word };
  });
}

/**
 * How near a model came to anything over time: path data with a corner a pixel, at the
 * nearest approach in it, which is what must not be lost.
 * @param {Layout} l
 * @param {Film} film
 * @param {number} who
 */
export function gapPath(l, film, who) {
  const gap = film.tracks[who].gap;
  const end = film.head.models[who].end;
  let d = '';
  let column = NaN;
  let least = Infinity;
  const put = () => {
    if (least < Infinity) d += `${d ? 'L' : 'M'}${column} ${round(gapY(l, film, least))}`;
  };
  for (let k = 0; k < film.ticks.length && film.ticks[k] <= end; k++) {
    const x = Math.round(xOf(l, film, film.ticks[k]));
    if (x !== column) {
      put();
      column = x;
      least = Infinity;
    }
    least = Math.min(least, gap[k]);
  }
  put();
  return d;
}

/**
 * The height of a gap in the strip; what is above its top is cut off.
 * @param {Layout} l
 * @param {Film} film
 * @param {number} gap m
 */
export function gapY(l, film, gap) {
  const share = Math.min(Math.max(gap / (film.head.top || 1), 0), 1);
  return l.gaps + l.strip * (1 - share);
}

/**
 * Times to write below, at round distances.
 * @param {Layout} l
 * @param {Film} film
 * @returns {{x: number, text: string}[]}
 */
export function axis(l, film) {
  const length = film.head.length * film.head.tick_s;
  const most = Math.max((l.right - l.left) / 58, 1);
  const step = [1, 2, 5, 10, 20, 30, 60, 120, 300, 600, 1200, 1800, 3600].find((s) => length / s <= most) ?? 7200;
  const times = [];
  for (let t = 0; t <= length; t += step) times.push({ x: xOf(l, film, t / film.head.tick_s), text: clock(t, 0) });
  return times;
}

/** @typedef {{x: number, at: number, text: string, tick: number}} Badge */

/**
 * Numbers of the partings above the lanes, beside each other where they would cover
 * each other; those that find no room are left out.
 * @param {Layout} l
 * @param {Film} film
 * @returns {Badge[]}
 */
export function badges(l, film) {
  let free = 0;
  return film.marks.filter((m) => m.kind === 'parting').flatMap((m, k) => {
    const at = xOf(l, film, m.tick);
    const x = Math.max(at, free);
    if (x - at > 60 || x > l.right + 8) return [];
    free = x + 18;
    return [{ x, at, text: String(k + 1), tick: m.tick }];
  });
}

/** @param {number} v */
const round = (v) => Math.round(v * 10) / 10;
