// Tape: lanes of modes for the three models, how near they came to anything, marks,
// and the line that is now. Dragging along it goes through time.

import { clock } from '../../static/js/core/format.js';
import { set, svg } from '../../static/js/dom.js';
import { POINT, ROBOT } from './core/film.js';
import { axis, badges, blocks, gapPath, gapY, layout, ORDER, tickOf, xOf } from './core/lanes.js';

/** @typedef {import('./core/film.js').Film} Film */
/** @typedef {import('./core/lanes.js').Layout} Layout */

/** Colours of the lanes, by look; patterns tell them apart as well. */
const FILLS = /** @type {Record<string, string>} */ ({ wall: 'url(#lane-wall)', avoid: 'url(#lane-avoid)' });

export class Tape {
  #host;
  #film;
  #svg = svg('svg', { 'aria-hidden': 'true' });
  #now = svg('path', { class: 'now' });
  /** @type {Layout} */
  #layout = layout(800);
  #tick = 0;

  /**
   * @param {HTMLElement} host
   * @param {Film} film
   * @param {(tick: number) => void} seek
   */
  constructor(host, film, seek) {
    this.#host = host;
    this.#film = film;
    host.append(this.#svg);
    host.setAttribute('aria-valuemax', String(Math.round(film.head.length * film.head.tick_s)));
    new ResizeObserver(() => this.#build()).observe(host);
    this.#build();
    const follow = (/** @type {PointerEvent} */ e) => {
      seek(tickOf(this.#layout, film, e.clientX - host.getBoundingClientRect().left));
    };
    host.addEventListener('pointerdown', (e) => {
      if (e.button !== 0) return;
      host.setPointerCapture(e.pointerId);
      follow(e);
    });
    host.addEventListener('pointermove', (e) => {
      if (host.hasPointerCapture(e.pointerId)) follow(e);
    });
  }

  #build() {
    const width = this.#host.clientWidth;
    if (!width) return;
    const film = this.#film;
    const l = (this.#layout = layout(width));
    set(this.#svg, 'viewBox', `0 0 ${l.width} ${l.height}`);
    set(this.#svg, 'height', l.height);
    /** @type {SVGElement[]} */
    const parts = [patterns()];
    ORDER.forEach((who, k) => parts.push(...lane(l, film, who, l.marks + k * l.step)));
    parts.push(...strip(l, film), ...marks(l, film), this.#now);
    this.#svg.replaceChildren(...parts);
    this.draw(this.#tick);
  }

  /** @param {number} tick */
  draw(tick) {
    this.#tick = tick;
    const l = this.#layout;
    const x = Math.round(xOf(l, this.#film, tick) * 10) / 10;
    set(this.#now, 'd', `M${x - 5} ${l.marks - 8}h10l-5 6zM${x} ${l.marks - 4}V${l.gaps + l.strip}`);
    const seconds = tick * this.#film.head.tick_s;
    set(this.#host, 'aria-valuenow', seconds.toFixed(1));
    set(this.#host, 'aria-valuetext', clock(seconds));
  }
}

function patterns() {
  return svg('defs', {},
    svg('pattern', { id: 'lane-wall', width: 7, height: 7, patternUnits: 'userSpaceOnUse', patternTransform: 'rotate(45)' },
      svg('rect', { class: 'fill wall', width: 7, height: 7 }), svg('rect', { class: 'figure', width: 1.8, height: 7 })),
    svg('pattern', { id: 'lane-avoid', width: 6, height: 6, patternUnits: 'userSpaceOnUse' },
      svg('rect', { class: 'fill avoid', width: 6, height: 6 }), svg('circle', { class: 'figure', cx: 3, cy: 3, r: 1.2 })));
}

/**
 * @param {Layout} l
 * @param {Film} film
 * @param {number} who
 * @param {number} y
 */
function lane(l, film, who, y) {
  const model = film.head.models[who];
  const base = y + l.lane / 2 + 4.2;
  /** @type {SVGElement[]} */
  const parts = [text('name', 0, base, model.name)];
  for (const b of blocks(l, film, who)) {
    const box = svg('rect', { class: 'block', x: b.x, y, width: b.width, height: l.lane, rx: 2.5 });
    if (FILLS[b.look]) box.setAttribute('fill', FILLS[b.look]);
    else box.setAttribute('class', `block fill ${b.look}`);
    const title = svg('title');
    title.textContent = b.name;
    box.append(title);
    parts.push(box);
    if (!b.word) continue;
    // Words are not read on a pattern.
    if (FILLS[b.look]) parts.push(svg('rect', { class: `fill ${b.look}`, x: b.x + 3, y: y + 2.5, width: b.word.length * 6.4 + 5, height: l.lane - 5, rx: 2 }));
    parts.push(text('in-lane', b.x + 6, base, b.word));
  }
  const x = xOf(l, film, model.end);
  const words = `${clock(model.end * film.head.tick_s, 0)} ${model.ending}`;
  const width = words.length * 6.5 + 12;
  if (x + 6 + width <= l.width) {
    parts.push(svg('rect', { class: `ending ${model.good ? 'done' : 'fail'}`, x: x + 5, y: y + 1, width, height: l.lane - 2, rx: l.lane / 2 }));
    parts.push(text('in-lane middle', x + 5 + width / 2, base, words));
  } else {
    parts.push(svg('circle', { class: `ending ${model.good ? 'done' : 'fail'}`, cx: Math.min(x + 6, l.width - 5), cy: y + l.lane / 2, r: 4.5 }));
  }
  return parts;
}

/**
 * @param {Layout} l
 * @param {Film} film
 */
function strip(l, film) {
  const { least, top } = film.head;
  const [asked, bottom] = [gapY(l, film, least), l.gaps + l.strip];
  const across = l.right - l.left;
  /** @type {SVGElement[]} */
  const parts = [
    text('name', 0, l.gaps + l.strip / 2 + 4, across > 400 ? 'leeway, m' : 'leeway'),
    text('small end', l.left - 6, l.gaps + 9, top.toFixed(1)),
    svg('rect', { class: 'too-near', x: l.left, y: asked, width: across, height: bottom - asked }),
    svg('path', { class: 'base', d: `M${l.left} ${bottom}H${l.right}` }),
    svg('path', { class: 'asked', d: `M${l.left} ${asked}H${l.right}` }),
  ];
  if (l.width - l.right > 80) parts.push(text('asked-word', l.right + 6, Math.min(asked + 4, bottom - 1), `${least.toFixed(2)} asked`));
  for (const who of ORDER) {
    const kind = who === ROBOT ? 'robot' : who === POINT ? 'dotted' : 'dashed';
    parts.push(svg('path', { class: `gap ${kind}`, d: gapPath(l, film, who) }));
  }
  for (const t of axis(l, film)) {
    parts.push(svg('path', { class: 'base', d: `M${t.x} ${bottom}v4` }), text('small middle', t.x, bottom + 16, t.text));
  }
  return parts;
}

/**
 * @param {Layout} l
 * @param {Film} film
 */
function marks(l, film) {
  const bottom = l.gaps + l.strip;
  /** @type {SVGElement[]} */
  const parts = badges(l, film).flatMap((b) => [
    svg('path', { class: 'parting-line', d: `M${b.at} ${l.marks - 4}V${bottom}` }),
    svg('circle', { class: 'badge', cx: b.x, cy: 8, r: 7.2 }),
    text('badge-word middle', b.x, 11.7, b.text),
  ]);
  for (const m of film.head.marks ?? []) {
    const x = xOf(l, film, m.tick);
    if (m.kind === 'contact' && m.who === ROBOT) parts.push(svg('path', { class: 'contact', d: `M${x - 3.5} ${bottom - 3.5}l7 7m0-7l-7 7` }));
    if (m.kind === 'chatter' && m.who === ROBOT) {
      const y = l.marks + l.step * 2 + l.lane + 3;
      parts.push(svg('path', { class: 'chatter', d: `M${x - 7} ${y}l2.5 3.4l3-3.4l3 3.4l3-3.4l2.5 3.4` }));
    }
  }
  return parts;
}

/**
 * @param {string} kind
 * @param {number} x
 * @param {number} y
 * @param {string} words
 */
function text(kind, x, y, words) {
  const e = svg('text', { class: kind, x, y });
  e.textContent = words;
  return e;
}
