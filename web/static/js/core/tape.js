// Tape: what is known of the run, of its whole length: where each model was ten
// times a second, in which mode, and the marks on it. It only grows at its end; a
// change made in the past cuts it, and then the server sends it whole. It is one
// object that grows, since it may hold tens of thousands of rows; version changes
// whenever it has.

import { upTo, Way, whole } from './way.js';

/** @typedef {import('./protocol.js').Row} Row */
/** @typedef {import('./protocol.js').Who} Who */
/** @typedef {import('./protocol.js').Pose} Pose */
/** @typedef {import('./protocol.js').Mark} Mark */
/** @typedef {import('./protocol.js').TapeWhole} TapeWhole */
/** @typedef {import('./protocol.js').TapeMore} TapeMore */

/** A stretch of one mode; it lasts to the next. @typedef {{tick: number, mode: number, side: number}} Stretch */

/** A future that was given up by a change: from this tick on, the ways of the models. @typedef {{tick: number, ways: string[]}} Old */

/** What stands where in a row. Pose, mode, side and gap of a model begin at its base. */
export const TICK = 0;
export const BASE = [1, 18, 25];
export const [X, Y, TURN, MODE, SIDE, GAP] = [0, 1, 2, 3, 4, 5];
/** Of a shadow, whether it has ended, counted from its base. */
export const ENDED = 6;
/** Of the robot, counted from the start of the row: where it believes itself, the velocity wanted, speed and turning, wheels, wheels as commanded. */
export const BELIEF = 7;
export const WANTED = 10;
export const [SPEED, TURNING] = [12, 13];
export const [LEFT, RIGHT, LEFT_COMMANDED, RIGHT_COMMANDED] = [14, 15, 16, 17];

/** The models in the order in which they are shown. @type {readonly Who[]} */
export const LANES = [1, 2, 0];
export const NAMES = ['robot', 'point', 'unicycle'];

export class Tape {
  /** Ticks between rows. */
  every = 1;
  /** The farthest tick that is known. */
  length = 0;
  /** @type {Row[]} */
  rows = [];
  /** By model. @type {[Stretch[], Stretch[], Stretch[]]} */
  lanes = [[], [], []];
  /** @type {Mark[]} */
  marks = [];
  /** By model. @type {[Way, Way, Way]} */
  ways = [new Way(), new Way(), new Way()];
  version = 0;
  #spans = 0;
  /** Between point and unicycle, up to each row. @type {number[]} */
  #farthest = [];

  /**
   * Starts anew.
   * @param {TapeWhole} t
   */
  reset(t) {
    this.every = t.every;
    this.length = t.length;
    this.rows = [];
    this.lanes = [[], [], []];
    this.marks = [];
    this.#spans = 0;
    this.#farthest = [];
    for (const way of this.ways) way.clear();
    this.version++;
    this.append({ from: 0, rows: t.rows, spans_from: 0, spans: t.spans, marks_from: 0, marks: t.marks }, t.length);
  }

  /**
   * Takes in what has come. What is there already is passed over. Returns false,
   * and changes nothing, when something in between is missing.
   * @param {TapeMore} more
   * @param {number} length
   */
  append(more, length) {
    if (more.from > this.rows.length || more.spans_from > this.#spans || more.marks_from > this.marks.length) return false;
    const before = this.rows.length + this.#spans + this.marks.length;
    for (let i = this.rows.length - more.from; i < more.rows.length; i++) this.#add(more.rows[i]);
    for (let i = this.#spans - more.spans_from; i < more.spans.length; i++) {
      const [who, tick, mode, side] = more.spans[i];
      this.lanes[who]?.push({ tick, mode, side });
      this.#spans++;
    }
    for (let i = this.marks.length - more.marks_from; i < more.marks.length; i++) this.marks.push(more.marks[i]);
    // A frame that only looks elsewhere adds nothing, and nothing is painted anew.
    const grown = this.rows.length + this.#spans + this.marks.length > before || length > this.length;
    this.length = Math.max(this.length, length);
    if (grown) this.version++;
    return true;
  }

  /** @param {Row} row */
  #add(row) {
    this.rows.push(row);
    for (const who of LANES) {
      const b = BASE[who];
      if (row.length <= b + GAP) continue;
      this.ways[who].add(row[TICK], row[b + X], row[b + Y], who === 0 ? row[b + MODE] : -1);
    }
    const [, p, u] = BASE;
    if (row.length <= u + ENDED) return;
    const apart = row[p + ENDED] || row[u + ENDED] ? 0 : Math.hypot(row[p + X] - row[u + X], row[p + Y] - row[u + Y]);
    this.#farthest.push(Math.max(this.#farthest.at(-1) ?? 0, apart));
  }

  /** Changes whenever more is on the tape than a longer stretch of what was. */
  get stamp() {
    return `${this.ways[0].epoch} ${this.#spans} ${this.marks.length}`;
  }

  /** Whether the tape has the shadows. */
  get shadows() {
    return this.rows.length > 0 && this.rows[0].length > BASE[2] + GAP;
  }

  /**
   * The number of the last row at or before the tick; −1 when there is none.
   * @param {number} tick
   */
  rowAt(tick) {
    return upTo(this.rows.length, (i) => this.rows[i][TICK] <= tick) - 1;
  }

  /**
   * Where a model was, between two rows in proportion.
   * @param {Who} who
   * @param {number} tick
   * @returns {Pose | null} null when the tape does not have it
   */
  poseAt(who, tick) {
    const i = Math.max(this.rowAt(tick), 0);
    const a = this.rows[i];
    const b = BASE[who];
    if (!a || a.length <= b + GAP) return null;
    return between(a, this.rows[i + 1] ?? a, tick, b);
  }

  /**
   * Where the robot believed itself to be.
   * @param {number} tick
   * @returns {Pose | null}
   */
  beliefAt(tick) {
    const i = Math.max(this.rowAt(tick), 0);
    const a = this.rows[i];
    return a ? between(a, this.rows[i + 1] ?? a, tick, BELIEF) : null;
  }

  /**
   * The stretch of a model's lane that holds at the tick.
   * @param {Who} who
   * @param {number} tick
   * @returns {Stretch | null}
   */
  stretchAt(who, tick) {
    const lane = this.lanes[who];
    return lane[upTo(lane.length, (i) => lane[i].tick <= tick) - 1] ?? null;
  }

  /**
   * The mark at which a model's lane ends: its latest end, unless a change has set
   * it going again since.
   * @param {Who} who
   * @returns {Mark | null}
   */
  endOf(who) {
    const last = lastOf(this.marks, (m) => m.kind === 'end' && m.who === who);
    const stretch = this.lanes[who].at(-1);
    return last && !(stretch && stretch.tick > last.tick) ? last : null;
  }

  /**
   * The ways beyond a tick, as a picture of a future that is given up.
   * @param {number} tick
   * @returns {Old}
   */
  beyond(tick) {
    const ways = LANES.map(() => new Way());
    for (const who of LANES) {
      const b = BASE[who];
      const from = this.poseAt(who, tick);
      if (from) ways[who].add(tick, from[0], from[1]);
      for (let i = this.rowAt(tick) + 1; i < this.rows.length; i++) {
        const row = this.rows[i];
        if (row.length > b + GAP) ways[who].add(row[TICK], row[b + X], row[b + Y]);
      }
    }
    return { tick, ways: ways.map((w) => w.chunks.map(whole).join('')) };
  }

  /**
   * Whether the tape that comes is this one cut short: it goes less far, and up to
   * where it goes it is the same.
   * @param {TapeWhole} next
   */
  isCutTo(next) {
    const last = next.rows.at(-1);
    return last !== undefined && next.length > 0 && next.length < this.length && same(last, this.rows[this.rowAt(last[TICK])]);
  }

  /**
   * Whether the tape that comes goes on from this one.
   * @param {TapeWhole} next
   */
  goesOnAs(next) {
    // A long tape may come with fewer rows than it came with before.
    const last = lastOf(this.rows, (row) => row[TICK] % next.every === 0);
    return last !== undefined && next.length >= this.length && same(last, next.rows[last[TICK] / next.every]);
  }

  /**
   * How far point and unicycle have been apart up to the tick, at the most, as long
   * as both were under way; null without shadows.
   * @param {number} tick
   * @returns {number | null}
   */
  farthest(tick) {
    return this.shadows ? this.#farthest[this.rowAt(tick)] ?? null : null;
  }
}

/**
 * @template T
 * @param {T[]} list
 * @param {(item: T) => boolean} fits
 * @returns {T | undefined}
 */
function lastOf(list, fits) {
  for (let i = list.length - 1; i >= 0; i--) if (fits(list[i])) return list[i];
  return undefined;
}

/**
 * The robot at one row is the same in both.
 * @param {Row} a
 * @param {Row | undefined} b
 */
const same = (a, b) => b !== undefined && a.slice(TICK, BASE[0] + MODE).every((v, i) => v === b[i]);

/**
 * @param {Row} a
 * @param {Row} b
 * @param {number} tick
 * @param {number} at where x, y and turn stand
 * @returns {Pose}
 */
function between(a, b, tick, at) {
  const span = b[TICK] - a[TICK];
  const t = span > 0 ? Math.min(Math.max((tick - a[TICK]) / span, 0), 1) : 0;
  const turn = b[at + 2] - a[at + 2];
  return [
    a[at] + t * (b[at] - a[at]),
    a[at + 1] + t * (b[at + 1] - a[at + 1]),
    a[at + 2] + t * Math.atan2(Math.sin(turn), Math.cos(turn)),
  ];
}
