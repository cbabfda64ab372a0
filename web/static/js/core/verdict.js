// Verdict: a run against what is asked of it, and robot and shadows side by side,
// as words and rows. The same words for the card on the bench and for whoever
// reads it out.

import { clock, count, fixed, metres, percent, seconds } from './format.js';

/** @typedef {import('./protocol.js').Frame} Frame */
/** @typedef {import('./protocol.js').Asked} Asked */
/** @typedef {import('./protocol.js').Measures} Measures */

/** What one model has of a measure. @typedef {{text: string, bad: boolean}} Cell */

/** Cells: point, unicycle, robot. @typedef {{key: string, cells: [Cell, Cell, Cell]}} Row */

/**
 * @typedef {object} Verdict
 * @property {string} leeway the headline number
 * @property {string} words beside it
 * @property {string} judgement
 * @property {'none' | 'good' | 'bad'} mark of the headline number
 * @property {string} status word, empty while it runs
 * @property {'done' | 'fail' | 'run'} tone of the status
 * @property {string} reason
 * @property {string} shortest about the shortest way, in words
 * @property {Row[]} rows
 */

/** @type {Cell} */
const NONE = { text: '–', bad: false };

/**
 * @param {Frame} f
 * @param {Asked} asked
 * @param {number | null} [apart] m between point and unicycle, at the most
 * @returns {Verdict}
 */
export function verdict(f, asked, apart = null) {
  const running = f.status === 'running';
  const arrived = f.status === 'arrived';
  const close = asked.leeway_m !== undefined && f.leeway !== null && f.leeway < asked.leeway_m;
  const late = asked.within_s !== undefined && lasted(f) > asked.within_s;
  const restless = asked.switches !== undefined && f.switches > asked.switches;
  return {
    leeway: metres(f.leeway),
    words: asked.leeway_m === undefined ? 'of leeway.' : `of leeway, where ${metres(asked.leeway_m)} is asked.`,
    judgement: judgement({ running, arrived, close, late, restless }),
    mark: f.leeway === null || asked.leeway_m === undefined ? 'none' : close ? 'bad' : 'good',
    status: running ? '' : f.status,
    tone: running ? 'run' : arrived ? 'done' : 'fail',
    reason: running ? '' : f.reason ?? '',
    shortest: shortest(f),
    rows: rows(f, asked, apart),
  };
}

/** How long the robot took or has taken; the clock may have gone on for the shadows. @param {Frame} f */
const lasted = (f) => f.verdict.models.find((m) => m.who === 0)?.time ?? f.time;

/** @param {Frame} f */
function shortest({ verdict: v }) {
  if (v.shortest !== null) return `The shortest way for this hull is ${metres(v.shortest)}.`;
  return v.shortest_why ?? '';
}

/**
 * @param {Frame} f
 * @param {Asked} asked
 * @param {number | null} apart
 * @returns {Row[]}
 */
function rows(f, asked, apart) {
  const { models, shortest: least } = f.verdict;
  const [robot, point, unicycle] = [0, 1, 2].map((who) => models.find((m) => m.who === who));
  /**
   * @param {string} key
   * @param {(m: Measures) => string} text
   * @param {(m: Measures) => boolean} [bad]
   * @returns {Row}
   */
  const row = (key, text, bad = () => false) => ({
    key,
    cells: /** @type {[Cell, Cell, Cell]} */ ([point, unicycle, robot].map((m) => (m ? { text: text(m), bad: bad(m) } : NONE))),
  });
  const only = (/** @type {Measures} */ m) => m.who === 0;
  const over = (/** @type {number | undefined} */ limit, /** @type {number} */ v) => limit !== undefined && v > limit;
  return [
    row('time', (m) => (m.status === 'arrived' ? seconds(m.time) : m.status === 'running' ? '…' : m.status),
      (m) => only(m) && (over(asked.within_s, m.time) || (m.status !== 'arrived' && m.status !== 'running'))),
    row('leeway', (m) => metres(m.leeway), (m) => only(m) && asked.leeway_m !== undefined && m.leeway !== null && m.leeway < asked.leeway_m),
    row('way', (m) => (least ? `${fixed(m.way / least, 2)}×` : metres(m.way))),
    row('switches', (m) => count(m.switches), (m) => only(m) && over(asked.switches, m.switches)),
    { key: 'farthest', cells: [NONE, cell(unicycle ? apart : null), cell(point ? point.largest : null)] },
    row('saturated', (m) => (only(m) ? percent(m.saturated) : '–')),
    row('lost', (m) => (only(m) ? metres(m.estimate_error) : '–')),
  ];
}

/** @param {number | null} v @returns {Cell} */
const cell = (v) => ({ text: metres(v), bad: false });

/** @param {{running: boolean, arrived: boolean, close: boolean, late: boolean, restless: boolean}} is */
function judgement(is) {
  const short = 'This run falls short.';
  if (is.close) return short;
  if (!is.running && !is.arrived) return `It did not arrive. ${short}`;
  if (is.late) return `Too late. ${short}`;
  if (is.restless) return `Too many switches. ${short}`;
  return is.running ? 'So far it holds.' : 'This run keeps what is asked.';
}

/**
 * What to read out when a run has ended; empty while it runs.
 * @param {Frame} f
 * @param {Asked} asked
 */
export function spoken(f, asked) {
  if (f.status === 'running') return '';
  const v = verdict(f, asked);
  const leeway = f.leeway === null ? '' : ` ${fixed(f.leeway, 2)} m ${v.words} ${v.judgement}`;
  return `The run ended at ${clock(lasted(f))}: ${f.status}. ${v.reason}${leeway}`.trim();
}

/**
 * The partings known up to a moment and beyond, in order.
 * @param {import('./protocol.js').Mark[]} marks
 */
export const partings = (marks) => marks.filter((m) => m.kind === 'parting').sort((a, b) => a.tick - b.tick);
