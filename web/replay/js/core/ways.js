// Ways: where the models went, as pieces that can be drawn up to any time. A piece
// keeps the tick of each of its corners.

import { lastIndex, momentAt } from './moment.js';

/** @typedef {import('./film.js').Film} Film */

/**
 * @typedef {object} Piece
 * @property {number} from tick
 * @property {number} to tick
 * @property {number} mode
 * @property {number[]} ticks of the corners
 * @property {number[]} xs
 * @property {number[]} ys
 */

/** How far, in metres, a drawn way may be from what was recorded. */
const HAIR = 0.004;

/**
 * The way of a model: a piece for each of its modes, and a new one wherever a person
 * carried it; in one mode for all when whole is set.
 * @param {Film} film
 * @param {number} who
 * @param {boolean} whole
 * @returns {Piece[]}
 */
export function piecesOf(film, who, whole) {
  const end = film.head.models[who].end;
  const cuts = film.spans[who].map((s) => ({ tick: s.tick, mode: s.mode, carried: false }));
  for (const e of film.edits) if (e.what === 'robot') cuts.push({ tick: e.tick, mode: -1, carried: true });
  cuts.sort((a, b) => a.tick - b.tick);
  /** @type {Piece[]} */
  const pieces = [];
  let mode = 0;
  for (let k = 0; k < cuts.length; k++) {
    const cut = cuts[k];
    const changed = cut.mode >= 0 && cut.mode !== mode;
    if (cut.mode >= 0) mode = cut.mode;
    if (k > 0 && !cut.carried && (whole || !changed)) continue;
    if (pieces.length) pieces[pieces.length - 1].to = Math.min(cut.tick, end);
    if (cut.tick > end) break;
    // A hair after it was carried it is where it was put.
    pieces.push({ from: cut.carried ? cut.tick + 1e-6 : cut.tick, to: end, mode, ticks: [], xs: [], ys: [] });
  }
  for (const piece of pieces) fill(film, who, piece);
  return pieces;
}

/**
 * @param {Film} film
 * @param {number} who
 * @param {Piece} piece
 */
function fill(film, who, piece) {
  const track = film.tracks[who];
  const first = lastIndex(film.ticks.length, (k) => film.ticks[k] <= piece.from) + 1;
  const last = lastIndex(film.ticks.length, (k) => film.ticks[k] < piece.to);
  const between = Math.max(last - first + 1, 0);
  const start = momentAt(film, piece.from).models[who];
  const end = momentAt(film, piece.to).models[who];
  const at = (/** @type {number} */ k) => (k === 0 ? start : k > between ? end : { x: track.x[first + k - 1], y: track.y[first + k - 1] });
  for (const k of thinned(between + 2, at)) {
    piece.ticks.push(k === 0 ? piece.from : k > between ? piece.to : film.ticks[first + k - 1]);
    piece.xs.push(at(k).x);
    piece.ys.push(at(k).y);
  }
}

/**
 * The corners that are needed for all others to lie within a hair of the way between
 * them (Ramer 1972; Douglas & Peucker 1973).
 * @param {number} n
 * @param {(k: number) => {x: number, y: number}} at
 */
export function thinned(n, at) {
  const keep = new Uint8Array(n);
  if (n === 0) return [];
  keep[0] = keep[n - 1] = 1;
  const open = [[0, n - 1]];
  for (let pair = open.pop(); pair; pair = open.pop()) {
    const [a, b] = pair;
    const [p, q] = [at(a), at(b)];
    let far = HAIR;
    let worst = -1;
    for (let k = a + 1; k < b; k++) {
      const d = distance(at(k), p, q);
      if (d > far) [far, worst] = [d, k];
    }
    if (worst < 0) continue;
    keep[worst] = 1;
    open.push([a, worst], [worst, b]);
  }
  /** @type {number[]} */
  const kept = [];
  keep.forEach((yes, k) => {
    if (yes) kept.push(k);
  });
  return kept;
}

/** @typedef {{x: number, y: number}} At */

/** @param {At} p @param {At} a @param {At} b */
function distance(p, a, b) {
  const [dx, dy] = [b.x - a.x, b.y - a.y];
  const l = dx * dx + dy * dy;
  const t = l > 0 ? Math.min(Math.max(((p.x - a.x) * dx + (p.y - a.y) * dy) / l, 0), 1) : 0;
  return Math.hypot(p.x - a.x - t * dx, p.y - a.y - t * dy);
}

/**
 * Path data of a piece up to a time, which ends where the model then is.
 * @param {Piece} piece
 * @param {number} tick
 * @param {{x: number, y: number}} now
 */
export function pathTo(piece, tick, now) {
  if (tick < piece.from) return '';
  let d = '';
  let k = 0;
  for (; k < piece.ticks.length && piece.ticks[k] <= tick; k++) d += `${k ? 'L' : 'M'}${corner(piece.xs[k])} ${corner(piece.ys[k])}`;
  if (tick < piece.to && k > 0) d += `L${corner(now.x)} ${corner(now.y)}`;
  return d;
}

/** @param {number} v */
const corner = (v) => String(Math.round(v * 1000) / 1000);
