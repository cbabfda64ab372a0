// Chart: one chart of a strip, drawn by uPlot under the tape's own time axis. Its
// upright line is where the pointer is, and else at the moment that is shown.

import { columns, scale, values } from '../core/strips.js';
import { html, say } from '../dom.js';
import { colour } from './paint.js';

/** @typedef {import('../core/strips.js').Chart} Spec */
/** @typedef {import('../core/strips.js').Style} Style */
/** @typedef {import('../core/state.js').State} State */

/** Height of a chart, px. */
const HEIGHT = 92;
/** While it plays, a chart takes in what is new this often, ms. */
const OFTEN = 300;

const VENDOR = new URL('../../vendor/uplot/', import.meta.url);
/** @type {Promise<any> | null} */
let library = null;

/** The library is fetched when the first strip is opened, with its style sheet. */
function load() {
  if (!library) {
    document.head.append(html('link', { rel: 'stylesheet', href: new URL('uPlot.min.css', VENDOR).href }));
    library = import(new URL('uPlot.esm.js', VENDOR).href).then((m) => m.default);
  }
  return library;
}

/** @type {Record<Style, {stroke: string, width: number, dash: number[]}>} */
const STYLES = {
  actual: { stroke: '--ink', width: 1.6, dash: [] },
  commanded: { stroke: '--goal-seeking', width: 1.4, dash: [4, 3] },
  second: { stroke: '--wall-text', width: 1.6, dash: [] },
  'second commanded': { stroke: '--avoidance', width: 1.4, dash: [4, 3] },
  point: { stroke: '--shade-line', width: 2.2, dash: [1.5, 3.5] },
  unicycle: { stroke: '--ink', width: 1.5, dash: [6, 4] },
};

export class Chart {
  #spec;
  #seek;
  #redraw;
  #place = html('div', { class: 'chart-plot' });
  /** @type {HTMLElement[]} */
  #values;
  /** @type {any} */
  #plot = null;
  root;
  #taken = { version: -1, at: 0 };
  #view = '';
  /** @type {State | null} */
  #state = null;
  #hovered = false;
  #gone = false;

  /**
   * @param {Spec} spec
   * @param {{left: number, right: number}} room beside the plot, px
   * @param {(tick: number, live: boolean) => void} seek
   * @param {() => void} redraw
   */
  constructor(spec, room, seek, redraw) {
    this.#spec = spec;
    this.#seek = seek;
    this.#redraw = redraw;
    this.#values = spec.lines.map(() => html('b', { class: 'n' }));
    const key = spec.lines.map((l, i) => html('span', { class: 'key' }, html('i', { class: `key-line ${l.style.replace(' ', '-')}`, 'aria-hidden': 'true' }), `${l.label} `, this.#values[i]));
    const limits = spec.limits.filter((l) => l.label).map((l) => html('span', { class: 'key' }, html('i', { class: 'key-line limit', 'aria-hidden': 'true' }), `${l.label} `, html('b', { class: 'n' }, l.at.toFixed(spec.decimals))));
    this.root = html('div', { class: 'chart' }, html('p', { class: 'chart-head' }, html('span', { class: 'chart-title' }, `${spec.title}, ${spec.unit}`), ...key, ...limits), this.#place);
    load().then((uPlot) => {
      if (this.#gone) return;
      this.#build(uPlot, room);
      redraw();
    });
  }

  /**
   * @param {any} uPlot
   * @param {{left: number, right: number}} room
   */
  #build(uPlot, room) {
    const spec = this.#spec;
    const axis = { stroke: () => colour('--soft'), font: `500 11px ${colour('--mono')}`, grid: { stroke: () => colour('--hair'), width: 1 }, ticks: { show: false } };
    this.#plot = new uPlot({
      width: Math.max(this.#place.clientWidth, 100), height: HEIGHT,
      padding: [6, room.right, 4, 0],
      legend: { show: false },
      cursor: { y: false, drag: { x: false, y: false, setScale: false }, points: { size: 6 }, lock: false, focus: { prox: -1 } },
      scales: {
        x: { time: false, range: () => [this.#shown.from, this.#shown.to] },
        y: { range: (/** @type {any} */ _u, /** @type {number | null} */ low, /** @type {number | null} */ high) => scale(spec, low, high) },
      },
      axes: [
        { ...axis, show: false, size: 0 },
        { ...axis, size: room.left, gap: 6, space: 20 },
      ],
      series: [{}, ...spec.lines.map((l) => ({
        label: l.label, stroke: () => colour(STYLES[l.style].stroke), width: STYLES[l.style].width, dash: STYLES[l.style].dash, points: { show: false },
      }))],
      hooks: { drawSeries: [], draw: [(/** @type {any} */ u) => this.#limits(u)], setCursor: [() => this.#write()] },
    }, [[], ...spec.lines.map(() => [])], this.#place);
    this.#listen(this.#plot.over);
  }

  #shown = { from: 0, to: 1 };

  /**
   * @param {State} state as it is shown
   * @param {{from: number, to: number}} shown s
   */
  draw(state, shown) {
    this.#state = state;
    const { hello, frame, tape } = state;
    const u = this.#plot;
    if (!u || !hello || !frame) return;
    const view = `${shown.from} ${shown.to}`;
    const now = performance.now();
    const fresh = tape.version !== this.#taken.version && (now - this.#taken.at > OFTEN || !frame.playing);
    if (fresh || view !== this.#view) {
      this.#shown = shown;
      this.#view = view;
      this.#taken = { version: tape.version, at: now };
      u.setData(columns(this.#spec, tape, hello.tick_s), true);
      this.#redraw(); // the scales are there from the next frame on, and the line goes by them
    }
    if (!this.#hovered) {
      const left = u.valToPos(frame.time, 'x');
      u.setCursor({ left: left < 0 || left > u.over.clientWidth ? -10 : left, top: 0 }, false);
    }
    this.#write();
  }

  resized() {
    if (this.#plot) this.#plot.setSize({ width: Math.max(this.#place.clientWidth, 100), height: HEIGHT });
  }

  /** The colours are others now. */
  repaint() {
    this.#plot?.redraw(false);
  }

  destroy() {
    this.#gone = true;
    this.#plot?.destroy();
  }

  /** The values where the upright line is. */
  #write() {
    const { hello, frame, tape } = this.#state ?? {};
    if (!hello || !frame || !tape) return;
    const time = this.#hovered ? this.#plot.posToVal(this.#plot.cursor.left, 'x') : frame.time;
    const row = tape.rows[tape.rowAt(time / hello.tick_s + 0.5)];
    values(this.#spec, row).forEach((text, i) => say(this.#values[i], text ?? '–'));
  }

  /** @param {any} u */
  #limits(u) {
    const { ctx, bbox } = u;
    ctx.save();
    ctx.beginPath();
    ctx.rect(bbox.left, bbox.top, bbox.width, bbox.height);
    ctx.clip();
    ctx.strokeStyle = colour('--failure');
    ctx.lineWidth = 1.2 * devicePixelRatio;
    ctx.setLineDash([5 * devicePixelRatio, 4 * devicePixelRatio]);
    for (const { at } of this.#spec.limits) {
      const y = Math.round(u.valToPos(at, 'y', true));
      ctx.beginPath();
      ctx.moveTo(bbox.left, y);
      ctx.lineTo(bbox.left + bbox.width, y);
      ctx.stroke();
    }
    ctx.restore();
  }

  /** @param {HTMLElement} over */
  #listen(over) {
    const seek = (/** @type {PointerEvent} */ event, /** @type {boolean} */ live) => {
      const hello = this.#state?.hello;
      if (!hello) return;
      const left = event.clientX - over.getBoundingClientRect().left;
      this.#seek(Math.round(this.#plot.posToVal(left, 'x') / hello.tick_s), live);
    };
    let down = false;
    over.addEventListener('pointerdown', (event) => {
      if (event.button !== 0) return;
      down = true;
      over.setPointerCapture(event.pointerId);
      seek(event, true);
    });
    over.addEventListener('pointermove', (event) => {
      this.#hovered = event.pointerType === 'mouse' && !down;
      if (down) seek(event, true);
    });
    const up = (/** @type {PointerEvent} */ event) => {
      if (down) seek(event, false);
      down = false;
    };
    over.addEventListener('pointerup', up);
    over.addEventListener('pointercancel', up);
    over.addEventListener('pointerleave', () => {
      this.#hovered = false;
      if (this.#state) this.draw(this.#state, this.#shown);
    });
  }
}
