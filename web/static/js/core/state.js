// State: everything the bench knows, and what each message, each change of the
// connection and each hand does to it. A state is a value; step returns the next
// one together with what there is to do. The tape alone is one object that
// grows, since it may hold tens of thousands of rows.

import * as seeking from './seek.js';
import { Tape } from './tape.js';
import { keyOf, thingsOf } from './things.js';

/** @typedef {import('./protocol.js').Hello} Hello */
/** @typedef {import('./protocol.js').Frame} Frame */
/** @typedef {import('./protocol.js').Message} Message */
/** @typedef {import('./protocol.js').Point} Point */
/** @typedef {import('./things.js').Thing} Thing */
/** @typedef {import('./things.js').Held} Held */

/**
 * The connection: being made, there, lost (another try comes), gone (the server
 * knows the session no more), ended (by the server, after a time without use).
 * @typedef {'connecting' | 'live' | 'lost' | 'gone' | 'ended'} Link
 */

/**
 * @typedef {object} State
 * @property {Link} link
 * @property {string} linkText what the server said about it
 * @property {number} retryAt ms of the clock at which the next try comes
 * @property {Hello | null} hello
 * @property {Frame | null} frame
 * @property {Thing[]} things
 * @property {Tape} tape
 * @property {import('./tape.js').Old | null} old the future that the latest change gave up
 * @property {seeking.Seek | null} seek the moment that is being looked for
 * @property {Held | null} held
 * @property {Point | null} taken centre of the held mover when it was taken
 * @property {boolean} resyncing a whole picture has been asked for
 * @property {{about: string, text: string, serial: number} | null} problem the latest
 * @property {{text: string, serial: number} | null} notice the latest
 */

/**
 * @typedef {{type: 'message', message: Message}
 *   | {type: 'link', link: Link, retryAt?: number}
 *   | {type: 'hold', key: string, anchor: Point}
 *   | {type: 'release'}
 *   | {type: 'let go'}
 *   | {type: 'seek', tick: number, live: boolean}
 *   | {type: 'say', text: string}} Event
 */

/** @typedef {'resync'} Effect */

/** @returns {State} */
export function initial() {
  return {
    link: 'connecting', linkText: '', retryAt: 0,
    hello: null, frame: null, things: [], tape: new Tape(), old: null, seek: null,
    held: null, taken: null, resyncing: false, problem: null, notice: null,
  };
}

/**
 * @param {State} s
 * @param {Event} e
 * @returns {{state: State, effects: Effect[]}}
 */
export function step(s, e) {
  switch (e.type) {
    case 'message':
      return message(s, e.message);
    case 'link':
      return only({ ...s, link: e.link, retryAt: e.retryAt ?? 0, linkText: '', resyncing: false, seek: null });
    case 'hold':
      return only({ ...s, held: { key: e.key, anchor: e.anchor, live: true }, taken: takenFor(s, e.key) });
    case 'release':
      return only(s.held ? { ...s, held: { ...s.held, live: false } } : s);
    case 'let go':
      return only({ ...s, held: null, taken: null });
    case 'seek':
      return only(s.hello ? { ...s, seek: seeking.to(e.tick, s.tape.length, e.live) } : s);
    case 'say':
      return only({ ...s, notice: next(s.notice, { text: e.text }) });
  }
}

/**
 * @param {State} s
 * @param {Message} m
 */
function message(s, m) {
  switch (m.kind) {
    case 'hello': {
      const old = givenUp(s, m);
      s.tape.reset(m.tape);
      // What the hand still holds stays in the hand; what it let go of is where
      // the server says.
      const held = s.held?.live ? s.held : null;
      const taken = held ? s.taken : null;
      return only({ ...s, link: 'live', hello: m, frame: m.frame, things: thingsOf(m), held, taken, old, seek: null, resyncing: false });
    }
    case 'frame': {
      if (!s.hello) return only(s);
      const seek = seeking.answered(s.seek, m);
      if (!s.tape.append(m.tape, m.length) && !s.resyncing) {
        return { state: { ...s, frame: m, seek, resyncing: true }, effects: /** @type {Effect[]} */ (['resync']) };
      }
      return only({ ...s, frame: m, seek });
    }
    case 'problem': {
      // A place that cannot be: the thing goes back to where it was.
      const refused = m.about === 'drag';
      const problem = next(s.problem, { about: m.about, text: m.text });
      return only({ ...s, problem, held: refused ? null : s.held, taken: refused ? null : s.taken });
    }
    case 'notice':
      return only({ ...s, notice: next(s.notice, { text: m.text }) });
    case 'ended':
      return only({ ...s, link: 'ended', linkText: m.text });
  }
}

/**
 * The future that a change has given up is kept until the next change: that is a
 * message with a whole picture which was not asked for, and which is not the end
 * of the same drag.
 * @param {State} s
 * @param {Hello} m
 */
function givenUp(s, m) {
  if (s.frame && s.hello?.session === m.session && s.tape.isCutTo(m.tape)) return s.tape.beyond(m.tape.length);
  if (!s.old || !s.tape.goesOnAs(m.tape)) return null;
  return s.resyncing || s.held || m.frame.tick === s.old.tick ? s.old : null;
}

/**
 * Where the centre of a mover is when a hand takes it; null for all else.
 * @param {State} s
 * @param {string} key
 * @returns {Point | null}
 */
function takenFor(s, key) {
  if (s.held?.key === key && s.held.live) return s.taken;
  const index = s.hello?.movers.findIndex((m) => keyOf('mover', m.id) === key) ?? -1;
  return index >= 0 ? s.frame?.movers[index] ?? null : null;
}

/**
 * Numbers what is said, so that the same words twice are two sayings.
 * @template T
 * @param {{serial: number} | null} before
 * @param {T} said
 * @returns {T & {serial: number}}
 */
const next = (before, said) => ({ ...said, serial: (before?.serial ?? 0) + 1 });

/** @param {State} state @returns {{state: State, effects: Effect[]}} */
const only = (state) => ({ state, effects: [] });
