// Timeline: which part of the time is shown, and where on the screen a moment is.
// A look is a plain value; every function returns a new one. Times are seconds.

/**
 * What is shown. Without from, all of it.
 * @typedef {object} Look
 * @property {number | null} from s at the left edge; null: everything is shown
 * @property {number} span s from edge to edge, when not everything is
 */

/** What is on the screen: from here to there. @typedef {{from: number, to: number}} Shown */

/** @type {Look} */
export const ALL = { from: null, span: 0 };

/**
 * How long the tape is drawn when everything is shown: it grows in steps, so that
 * what is on it stands still most of the time.
 */
const EXTENTS = [20, 30, 45, 60, 90, 120, 180, 240, 300, 450, 600, 900, 1200, 1800, 2700, 3600, 5400, 7200];

/** The closest look, s. */
const CLOSEST = 0.5;
/** While it plays, now is kept within this share of what is shown. */
const LEAD = 0.8;

/** @param {number} length s of the tape */
export const extent = (length) => EXTENTS.find((e) => length <= e) ?? Math.ceil(length / 3600) * 3600;

/**
 * @param {Look} look
 * @param {number} length s of the tape
 * @returns {Shown}
 */
export function shown(look, length) {
  const all = extent(length);
  if (look.from === null || look.span >= all) return { from: 0, to: all };
  const from = Math.min(Math.max(look.from, 0), all - look.span);
  return { from, to: from + look.span };
}

/**
 * Zooms by factor so that the moment at the share of the width stays there.
 * @param {Look} look
 * @param {number} length
 * @param {number} share from 0 at the left to 1
 * @param {number} factor
 * @returns {Look}
 */
export function zoom(look, length, share, factor) {
  const { from, to } = shown(look, length);
  const span = Math.max((to - from) / factor, CLOSEST);
  if (span >= extent(length)) return ALL;
  const at = from + share * (to - from);
  return keep({ from: at - share * span, span }, length);
}

/**
 * Moves what is shown by a share of its width.
 * @param {Look} look
 * @param {number} length
 * @param {number} share
 * @returns {Look}
 */
export function pan(look, length, share) {
  return look.from === null ? look : keep({ ...look, from: look.from + share * look.span }, length);
}

/**
 * The look that has the moment in it: while it plays with some room ahead, else
 * just so.
 * @param {Look} look
 * @param {number} length
 * @param {number} now s
 * @param {boolean} playing
 * @returns {Look}
 */
export function follow(look, length, now, playing) {
  if (look.from === null) return look;
  const lead = playing ? LEAD : 1;
  if (now < look.from) return keep({ ...look, from: now }, length);
  if (now > look.from + lead * look.span) return keep({ ...look, from: now - lead * look.span }, length);
  return look;
}

/** @param {Look} look @param {number} length @returns {Look} */
function keep(look, length) {
  const { from } = shown(look, length);
  return look.from === from ? look : { ...look, from };
}

/**
 * The times at which the axis has marks, and how they are written: about one every
 * so many pixels.
 * @param {Shown} s
 * @param {number} width px
 * @param {number} [apart] px, at the least
 * @returns {{time: number, text: string}[]}
 */
export function ticks({ from, to }, width, apart = 84) {
  const least = ((to - from) * apart) / Math.max(width, 1);
  const step = STEPS.find((v) => v >= least) ?? Math.ceil(least / 3600) * 3600;
  const out = [];
  for (let i = Math.ceil(from / step - 1e-9); i * step <= to + 1e-9; i++) {
    const time = i * step;
    out.push({ time, text: label(time, step) });
  }
  return out;
}

const STEPS = [0.05, 0.1, 0.2, 0.5, 1, 2, 5, 10, 20, 30, 60, 120, 300, 600, 900, 1800, 3600];

/** @param {number} time @param {number} step */
function label(time, step) {
  const decimals = step >= 1 ? 0 : step >= 0.1 ? 1 : 2;
  const unit = 10 ** decimals;
  const all = Math.round(time * unit);
  const minutes = Math.floor(all / (60 * unit));
  return `${minutes}:${((all - minutes * 60 * unit) / unit).toFixed(decimals).padStart(decimals > 0 ? decimals + 3 : 2, '0')}`;
}
