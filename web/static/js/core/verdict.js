// Verdict: a run against what is asked of it, as words and rows. The same words
// for the card on the bench and for whoever reads it out.

import { clock, count, fixed, metres, percent, seconds } from './format.js';

/** @typedef {import('./protocol.js').Frame} Frame */
/** @typedef {import('./protocol.js').Asked} Asked */

/** @typedef {{key: string, label: string, value: string, asked: string, bad: boolean}} Row */

/**
 * @typedef {object} Verdict
 * @property {string} leeway the headline number
 * @property {string} words beside it
 * @property {'none' | 'good' | 'bad'} mark of the headline number
 * @property {string} status word, empty while it runs
 * @property {'done' | 'fail' | 'run'} tone of the status
 * @property {string} reason
 * @property {Row[]} rows
 */

/**
 * @param {Frame} f
 * @param {Asked} asked
 * @returns {Verdict}
 */
export function verdict(f, asked) {
  const running = f.status === 'running';
  const arrived = f.status === 'arrived';
  const close = asked.leeway_m !== undefined && f.leeway !== null && f.leeway < asked.leeway_m;
  const late = asked.within_s !== undefined && f.time > asked.within_s;
  const restless = asked.switches !== undefined && f.switches > asked.switches;
  return {
    leeway: metres(f.leeway),
    words: words(asked, { running, arrived, close, late, restless }),
    mark: f.leeway === null || asked.leeway_m === undefined ? 'none' : close ? 'bad' : 'good',
    status: running ? '' : f.status,
    tone: running ? 'run' : arrived ? 'done' : 'fail',
    reason: running ? '' : f.reason ?? '',
    rows: [
      row('time', arrived ? 'arrives after' : 'time', seconds(f.time), seconds(asked.within_s, plain(asked.within_s)), late),
      row('way', 'way', metres(f.way), '', false),
      row('switches', 'mode switches', count(f.switches), asked.switches === undefined ? '' : count(asked.switches), restless),
      row('contacts', 'contacts', count(f.contacts), '', f.contacts > 0),
      row('saturated', 'wheels at their limit', percent(f.saturated), '', false),
      row('lost', 'lost track by', metres(f.estimate_error), '', false),
    ],
  };
}

/**
 * @param {Asked} asked
 * @param {{running: boolean, arrived: boolean, close: boolean, late: boolean, restless: boolean}} is
 */
function words(asked, is) {
  const of = asked.leeway_m === undefined ? 'of leeway.' : `of leeway, where ${metres(asked.leeway_m)} is asked.`;
  if (is.close || is.late || is.restless || !(is.running || is.arrived)) return `${of} This run falls short.`;
  return `${of} ${is.running ? 'So far it holds.' : 'This run keeps what is asked.'}`;
}

/**
 * @param {string} key
 * @param {string} label
 * @param {string} value
 * @param {string} asked
 * @param {boolean} bad
 * @returns {Row}
 */
const row = (key, label, value, asked, bad) => ({ key, label, value, asked: asked === '–' ? '' : asked, bad });

/** Whole numbers are shown without decimals. @param {number | undefined} v */
const plain = (v) => (v !== undefined && Number.isInteger(v) ? 0 : 1);

/**
 * What to read out when a run has ended; empty while it runs.
 * @param {Frame} f
 * @param {Asked} asked
 */
export function spoken(f, asked) {
  if (f.status === 'running') return '';
  const v = verdict(f, asked);
  const leeway = f.leeway === null ? '' : ` ${fixed(f.leeway, 2)} m ${v.words}`;
  return `The run ended at ${clock(f.time)}: ${f.status}. ${v.reason}${leeway}`.trim();
}
