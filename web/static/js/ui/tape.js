// Tape: the run over time. A lane of modes for each model, the marks, the leeway,
// and the line that says which moment is shown, which a hand or keys can move. The
// lanes are painted on a canvas, anew only when something on them has changed;
// what lies beyond now is veiled, which costs nothing while the line moves.

import { clock, fixed, metres } from '../core/format.js';
import * as timeline from '../core/timeline.js';
import { LANES, NAMES } from '../core/tape.js';
import { html, say, set, vary } from '../dom.js';
import { Marks } from './marks.js';
import { height, Paint } from './paint.js';
import { part } from './why.js';

/** @typedef {import('../core/state.js').State} State */
/** @typedef {import('../core/protocol.js').Who} Who */

/** What a step by key is, s. */
const STEP = 0.1;
const FAR = 1;
/** Room that a badge needs beside the end of its lane, px. */
const BADGE = 92;

/**
 * What the tape tells the bench.
 * @typedef {object} Told
 * @property {(tick: number, live: boolean) => void} seek
 * @property {() => void} redraw
 */

export class TapeView {
  #root;
  #told;
  #plot;
  #ahead;
  #now;
  #hover;
  #hoverTime;
  #badges;
  #asked;
  #marks;
  #paint;
  /** @type {timeline.Look} */
  #look = timeline.ALL;
  /** @type {timeline.Shown} */
  #shown = { from: 0, to: 1 };
  #width = 0;
  /** Of the plot and what is free to its right. */
  #room = 0;
  #painted = '';
  #fresh = 0;
  /** @type {State | null} */
  #state = null;
  #held = false;
  /** Where keys and hands have led to since the last redraw. @type {number | null} */
  #led = null;
  /** Status of models where the tape has seen their end. @type {Map<string, string>} */
  #endings = new Map();
  /** @type {HTMLElement[]} */
  #badge = [];

  /**
   * @param {HTMLElement} root
   * @param {Told} told
   */
  constructor(root, told) {
    this.#root = root;
    this.#told = told;
    this.#plot = element(root, '.plot');
    const canvas = part(root, 'canvas');
    if (!(canvas instanceof HTMLCanvasElement)) throw new Error('the tape has no canvas');
    this.#ahead = element(root, '.ahead');
    this.#now = element(root, '.now');
    this.#hover = element(root, '.hover');
    this.#hoverTime = part(root, '.hover span');
    this.#badges = part(root, '.badges');
    this.#asked = element(root, '.asked-label');
    this.#marks = new Marks(element(root, '.marks'), element(root, '.mark-tip'), (tick) => told.seek(tick, false));
    this.#paint = new Paint(canvas);
    this.#badge = LANES.map((who) => html('span', { class: 'badge', 'data-who': NAMES[who], hidden: true }));
    this.#badges.append(...this.#badge);
    const anew = () => {
      this.#fresh++;
      told.redraw();
    };
    new ResizeObserver(anew).observe(this.#plot);
    matchMedia('(prefers-color-scheme: dark)').addEventListener('change', () => {
      this.#paint.forget();
      anew();
    });
    document.fonts?.ready.then(anew);
    this.#listen();
    this.#expand();
  }

  /** What of the time is on the screen, for what lies below the tape. */
  get shown() {
    return this.#shown;
  }

  /** @param {State} state as it is shown */
  draw(state) {
    this.#state = state;
    this.#led = null;
    const { hello, frame, tape } = state;
    if (!hello || !frame) return;
    const dt = hello.tick_s;
    const length = tape.length * dt;
    if (!this.#held) this.#look = timeline.follow(this.#look, length, frame.time, frame.playing);
    this.#shown = timeline.shown(this.#look, length);
    const few = this.#root.dataset.shown === 'few' && matchMedia('(max-width: 899px)').matches;
    const form = `${this.#fresh} ${few}`;
    if (!this.#painted.startsWith(`${form} `)) this.#measure(few);
    if (this.#width === 0) return;
    // A stretch that has grown by less than half a pixel is not painted anew.
    const key = `${form} ${tape.stamp} ${Math.floor(2 * this.#x(length))} ${this.#shown.from} ${this.#shown.to} ${hello.asked.leeway_m} ${hello.shadows}`;
    if (key !== this.#painted) {
      this.#painted = key;
      this.#paint.draw(state, this.#shown, few);
      const asked = hello.asked.leeway_m;
      say(this.#asked, asked === undefined ? '' : fixed(asked, 2));
      vary(this.#asked, 'transform', `translateY(${Math.round(this.#paint.askedTop(asked ?? 0, few) - 7)}px)`);
      this.#marks.draw(tape.marks, (tick) => this.#x(tick * dt), this.#width, () => this.#state?.frame?.tick ?? 0);
    }
    this.#line(frame.time, length);
    this.#ends(state, few);
    set(this.#plot, 'aria-valuemax', round(length));
    set(this.#plot, 'aria-valuenow', round(frame.time));
    set(this.#plot, 'aria-valuetext', `${clock(frame.time)} of ${clock(length)}, ${hello.modes[frame.mode]?.name ?? ''}, ${metres(frame.gap)} to the nearest`);
  }

  /** @param {boolean} few */
  #measure(few) {
    const { width } = this.#plot.getBoundingClientRect();
    this.#width = Math.floor(width);
    this.#room = this.#badges.clientWidth;
    vary(this.#root, '--tape-height', `${height(few)}px`);
    this.#paint.size(this.#width, height(few), Math.min(devicePixelRatio || 1, 3));
  }

  /** @param {number} time s */
  #x(time) {
    const { from, to } = this.#shown;
    return ((time - from) / (to - from)) * this.#width;
  }

  /** @param {number} time @param {number} length */
  #line(time, length) {
    const x = Math.round(this.#x(time) * 2) / 2;
    const inside = x >= -1 && x <= this.#width + 1;
    vary(this.#now, 'transform', `translateX(${x}px)`);
    set(this.#now, 'hidden', !inside);
    const left = Math.min(Math.max(x, 0), this.#width);
    const right = Math.min(Math.max(this.#x(length), 0), this.#width);
    vary(this.#ahead, 'transform', `translateX(${left}px) scaleX(${Math.max(right - left, 0) / Math.max(this.#width, 1)})`);
  }

  /** @param {State} state @param {boolean} few */
  #ends({ hello, frame, tape }, few) {
    if (!hello || !frame) return;
    for (const m of frame.verdict.models) {
      const end = tape.endOf(m.who);
      if (end && frame.tick >= end.tick && m.status !== 'running') this.#endings.set(`${m.who} ${end.tick}`, m.status);
    }
    LANES.forEach((who, i) => {
      const badge = this.#badge[i];
      const end = tape.endOf(who);
      const x = end ? this.#x(end.tick * hello.tick_s) : -1;
      const there = end !== null && x >= 0 && x <= this.#width + 1 && (who === 0 || (!few && hello.shadows));
      set(badge, 'hidden', !there);
      if (!end || !there) return;
      const look = hello.modes[tape.stretchAt(who, end.tick)?.mode ?? -1]?.look;
      const status = this.#endings.get(`${who} ${end.tick}`);
      const word = look === 'done' || status === 'arrived' ? 'there' : status ?? (look === 'fail' ? 'gave up' : 'ended');
      say(badge, `${clock(end.tick * hello.tick_s, 0)} ${word}`);
      set(badge, 'title', end.text);
      set(badge, 'data-tone', word === 'there' ? 'done' : 'fail');
      set(badge, 'data-inside', x + BADGE > this.#room);
      vary(badge, 'transform', `translate(${Math.round(x + 6)}px, ${this.#paint.laneTop(who, few)}px)`);
    });
  }

  #listen() {
    const plot = this.#plot;
    const at = (/** @type {PointerEvent | WheelEvent} */ event) => {
      const box = plot.getBoundingClientRect();
      return (event.clientX - box.left) / Math.max(box.width, 1);
    };
    const seek = (/** @type {PointerEvent} */ event, /** @type {boolean} */ live) => {
      const { from, to } = this.#shown;
      this.#seek(from + at(event) * (to - from), live);
    };
    plot.addEventListener('pointerdown', (event) => {
      if (event.button !== 0) return;
      plot.setPointerCapture(event.pointerId);
      this.#held = true;
      seek(event, true);
    });
    plot.addEventListener('pointermove', (event) => {
      if (this.#held) seek(event, true);
      this.#point(event.pointerType === 'mouse' && !this.#held ? at(event) : null);
    });
    plot.addEventListener('pointerleave', () => this.#point(null));
    plot.addEventListener('pointerup', (event) => {
      if (!this.#held) return;
      this.#held = false;
      seek(event, false);
    });
    plot.addEventListener('pointercancel', () => {
      if (!this.#held) return;
      this.#held = false;
      const tick = this.#state?.seek?.tick;
      if (tick !== undefined) this.#told.seek(tick, false);
    });
    plot.addEventListener('wheel', (event) => {
      const along = event.shiftKey && event.deltaX === 0 ? event.deltaY : event.deltaX;
      if (event.ctrlKey || event.metaKey) this.#zoom(at(event), Math.exp(-event.deltaY * 0.004));
      else if (along !== 0 && this.#look.from !== null) this.#pan(along / Math.max(this.#width, 1));
      else return;
      event.preventDefault();
    }, { passive: false });
    plot.addEventListener('keydown', (event) => this.#key(event) && event.preventDefault());
    // The buttons stand among those of the transport.
    for (const button of document.querySelectorAll('[data-axis]')) {
      button.addEventListener('click', () => this.#zoomAtNow(Number(button.getAttribute('data-axis'))));
    }
  }

  /**
   * Says which moment is under the pointer.
   * @param {number | null} share of the width
   */
  #point(share) {
    set(this.#hover, 'hidden', share === null);
    if (share === null) return;
    const { from, to } = this.#shown;
    say(this.#hoverTime, clock(from + share * (to - from), to - from < 30 ? 2 : 1));
    vary(this.#hover, 'transform', `translateX(${Math.round(share * this.#width)}px)`);
  }

  /** @param {KeyboardEvent} event */
  #key(event) {
    const { frame, seek, tape, hello } = this.#state ?? {};
    if (!frame || !tape || !hello || event.ctrlKey || event.metaKey || event.altKey) return false;
    const now = (this.#led ?? seek?.tick ?? frame.tick) * hello.tick_s;
    const by = event.shiftKey ? FAR : STEP;
    switch (event.key) {
      case 'ArrowLeft':
      case 'ArrowDown':
        this.#seek(now - by, false);
        return true;
      case 'ArrowRight':
      case 'ArrowUp':
        this.#seek(now + by, false);
        return true;
      case 'PageDown':
        this.#seek(now - 10, false);
        return true;
      case 'PageUp':
        this.#seek(now + 10, false);
        return true;
      case 'Home':
        this.#seek(0, false);
        return true;
      case 'End':
        this.#seek(Infinity, false);
        return true;
      case '+':
      case '=':
        this.#zoomAtNow(2);
        return true;
      case '-':
        this.#zoomAtNow(0.5);
        return true;
      case '0':
        this.#zoomAtNow(0);
        return true;
      default:
        return false;
    }
  }

  /** @param {number} time s @param {boolean} live */
  #seek(time, live) {
    const { hello, tape } = this.#state ?? {};
    if (!hello || !tape) return;
    const tick = Math.round(Math.min(Math.max(time / hello.tick_s, 0), tape.length));
    this.#led = tick;
    this.#told.seek(tick, live);
  }

  /** @param {number} factor 0: show all */
  #zoomAtNow(factor) {
    const { frame } = this.#state ?? {};
    if (!frame) return;
    if (factor > 0) {
      const share = this.#x(frame.time) / Math.max(this.#width, 1);
      this.#zoom(share >= 0 && share <= 1 ? share : 0.5, factor);
      return;
    }
    this.#look = timeline.ALL;
    this.#told.redraw();
  }

  /** @param {number} share @param {number} factor */
  #zoom(share, factor) {
    const { hello, tape } = this.#state ?? {};
    if (!hello || !tape) return;
    this.#look = timeline.zoom(this.#look, tape.length * hello.tick_s, share, factor);
    this.#told.redraw();
  }

  /** @param {number} share */
  #pan(share) {
    const { hello, tape } = this.#state ?? {};
    if (!hello || !tape) return;
    this.#look = timeline.pan(this.#look, tape.length * hello.tick_s, share);
    this.#told.redraw();
  }

  /** On a small screen the shadows' lanes are folded away until somebody asks. */
  #expand() {
    const button = part(document.body, '.more-lanes');
    button.addEventListener('click', () => {
      const all = this.#root.dataset.shown === 'few';
      this.#root.dataset.shown = all ? 'all' : 'few';
      set(button, 'aria-expanded', String(all));
      say(button, all ? 'Fewer lanes' : 'All lanes');
      this.#fresh++;
      this.#told.redraw();
    });
  }
}

/** @param {number} v */
const round = (v) => Math.round(v * 100) / 100;

/** @param {Element} within @param {string} selector */
function element(within, selector) {
  const found = part(within, selector);
  if (!(found instanceof HTMLElement)) throw new Error(`${selector} is no element of a page`);
  return found;
}
