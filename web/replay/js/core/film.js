// Film: the packed run, unpacked. Numbers of frames are columns: one array for each,
// as long as there are frames.

import { inflate } from './inflate.js';

/** @typedef {[number, number]} Point */
/** @typedef {{name: string, look: string}} Mode */
/** @typedef {'wall' | 'polygon' | 'disc'} Shape */
/** @typedef {{shape: Shape, points: Point[], radius?: number}} Solid */
/** @typedef {{radius?: number, half: Point, heading: number}} Mover */
/** @typedef {{tick: number, what: string, index: number, x: number, y: number}} Edit */
/** @typedef {{name: string, end: number, ending: string, good: boolean}} Model */
/** @typedef {{label: string, cells: {text: string, bad?: boolean}[]}} Row */
/** @typedef {{who: number, tick: number, mode: number, side: number}} Span */
/** @typedef {{who: number, tick: number, mode: number, text: string}} Why */
/** @typedef {{kind: string, who: number, tick: number, text: string}} Mark */
/** @typedef {{hull: Point, solid: Point, tick: number, text: string, more: string}} Pin */

/**
 * @typedef {object} Head
 * @property {string} name
 * @property {string} purpose
 * @property {string} asked
 * @property {string} big
 * @property {string} of
 * @property {string} words
 * @property {boolean} short
 * @property {string} ending
 * @property {string[] | null} failures
 * @property {string[] | null} ways
 * @property {string} brief
 * @property {{text: string, holds: boolean}[] | null} advice
 * @property {string} caution
 * @property {string} link
 * @property {string} seed
 * @property {string} hash
 * @property {string} version
 * @property {string} date
 * @property {number} tick_s
 * @property {number} length
 * @property {[number, number, number, number]} bounds
 * @property {[number, number, number]} start
 * @property {[number, number, number]} goal
 * @property {number} hull
 * @property {number} track
 * @property {number} wheel
 * @property {number} mount
 * @property {number} range_max
 * @property {number[] | null} bearings
 * @property {number} least
 * @property {number} top
 * @property {Mode[]} modes
 * @property {{shape: Shape, points: number, radius?: number}[] | null} solids how many points each has
 * @property {Mover[] | null} movers
 * @property {Edit[] | null} edits
 * @property {Model[]} models
 * @property {Row[]} table
 * @property {Span[]} spans
 * @property {Why[] | null} whys
 * @property {Mark[] | null} marks
 * @property {Pin | null} pin
 * @property {{name: string, quantum: number, count: number}[]} columns
 * @property {number} frames
 */

/** @typedef {{x: Float64Array, y: Float64Array, heading: Float64Array, gap: Float64Array}} Track */

/**
 * @typedef {object} Film
 * @property {Head} head
 * @property {Float64Array} ticks
 * @property {Solid[]} solids
 * @property {Track[]} tracks of robot, point and unicycle
 * @property {Float64Array[]} belief x, y, heading of the robot's
 * @property {Float64Array[]} movers x, y of each
 * @property {Float64Array[]} beams empty when they were left out
 * @property {Span[][]} spans of each model
 * @property {Why[][]} whys of each model
 * @property {Edit[]} edits
 * @property {Mark[]} marks
 */

/** The models, as they are counted in a film. */
export const ROBOT = 0;
export const POINT = 1;
export const UNICYCLE = 2;

/**
 * @param {string} text base64
 * @returns {Film}
 */
export function unpack(text) {
  const packed = Uint8Array.from(atob(text.trim()), (c) => c.charCodeAt(0));
  const data = inflate(packed);
  const read = reader(data);
  const length = read.count();
  const head = /** @type {Head} */ (JSON.parse(new TextDecoder().decode(data.subarray(read.at(), read.at() + length))));
  read.skip(length);

  /** @type {Map<string, Float64Array[]>} */
  const columns = new Map();
  for (const { name, quantum, count } of head.columns) {
    columns.set(name, Array.from({ length: count }, () => {
      const column = new Float64Array(head.frames);
      let last = 0;
      for (let i = 0; i < head.frames; i++) column[i] = (last += read.signed()) * quantum;
      return column;
    }));
  }
  const last = [0, 0];
  const solids = (head.solids ?? []).map((s) => ({
    ...s,
    points: Array.from({ length: s.points }, () => /** @type {Point} */ (last.map((_, k) => (last[k] += read.signed()) / 1000))),
  }));
  const one = (/** @type {string} */ name) => {
    const found = columns.get(name);
    if (!found) throw new Error(`the film has no ${name}`);
    return found[0];
  };
  const track = (/** @type {string} */ name) => ({ x: one(`${name}.x`), y: one(`${name}.y`), heading: one(`${name}.heading`), gap: one(`${name}.gap`) });
  const each = [ROBOT, POINT, UNICYCLE];
  return {
    head,
    ticks: one('tick'),
    solids,
    tracks: ['robot', 'point', 'unicycle'].map(track),
    belief: columns.get('belief') ?? [],
    movers: columns.get('movers') ?? [],
    beams: columns.get('beams') ?? [],
    spans: each.map((who) => head.spans.filter((s) => s.who === who)),
    whys: each.map((who) => (head.whys ?? []).filter((w) => w.who === who)),
    edits: head.edits ?? [],
    marks: head.marks ?? [],
  };
}

/**
 * Reads varints: seven bits a byte, the least significant first.
 * @param {Uint8Array} data
 */
function reader(data) {
  let at = 0;
  const count = () => {
    // Beyond 32 bits shifts fail; sums do not.
    let value = 0;
    for (let scale = 1; ; scale *= 128) {
      if (at >= data.length) throw new Error('the film ends too early');
      const byte = data[at++];
      value += (byte & 127) * scale;
      if (byte < 128) return value;
    }
  };
  return {
    at: () => at,
    skip: (/** @type {number} */ n) => void (at += n),
    count,
    /** Zigzag: 0, −1, 1, −2, 2, … */
    signed: () => {
      const n = count();
      return n % 2 ? -(n + 1) / 2 : n / 2;
    },
  };
}
