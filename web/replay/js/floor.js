// Floor: what stands on it, the ways up to now, and the models where they are.

import { line, moverOutline, outline, ring } from '../../static/js/core/shapes.js';
import { set, svg } from '../../static/js/dom.js';
import { POINT, ROBOT, UNICYCLE } from './core/film.js';
import { pathTo, piecesOf } from './core/ways.js';

/** @typedef {import('./core/film.js').Film} Film */
/** @typedef {import('./core/moment.js').Moment} Moment */
/** @typedef {import('./core/ways.js').Piece} Piece */

/** Pixels kept free round the floor. */
const MARGIN = 12;
/** A hull is drawn at least this large, px. */
const SMALLEST = 3.5;
/** The believed pose shows from this drift on, m. */
const DRIFT = 0.02;

export class Floor {
  /** @type {Film} */
  #film;
  #svg = svg('svg', { role: 'img', 'aria-labelledby': 'floor-title' });
  #world = svg('g', { class: 'world' });
  #labels = svg('g', { class: 'labels' });
  #scale = 1;
  #tall = 1;
  #moved = new Map();
  #goal = svg('g', { class: 'goal' });
  #goalWord = word('goal');
  #startWord = word('start');
  #beams = svg('path', { class: 'beam' });
  #hits = svg('path', { class: 'beam hit' });
  #echoes = svg('path', { class: 'echo' });
  /** @type {{piece: Piece, paths: SVGPathElement[], full: string, shown: string}[]} */
  #way = [];
  /** @type {{piece: Piece, path: SVGPathElement}[][]} */
  #traces = [];
  /** @type {SVGGElement[]} */
  #hulls = [];
  #nose = svg('path', { class: 'nose' });
  #ghost = svg('g', { class: 'ghost' });
  #drift = svg('path', { class: 'drift' });
  #pin = svg('g', { class: 'pin' });
  #pinWord = word('');
  #pinLeader = svg('path', { class: 'pin-leader' });
  #movers = svg('g');
  #bar = svg('path', { class: 'bar' });
  #barWord = word('');
  #grid = svg('path', { class: 'grid' });
  /** What is shown besides the robot. */
  shown = { point: true, unicycle: true, beams: true };

  /**
   * @param {HTMLElement} host
   * @param {Film} film
   */
  constructor(host, film) {
    this.#film = film;
    const title = svg('title', { id: 'floor-title' });
    title.textContent = `The floor of ${film.head.name}, with the robot and its shadows`;
    this.#svg.append(title, this.#world, this.#labels);
    host.prepend(this.#svg);
    this.#build();
    new ResizeObserver(() => this.#resize(host)).observe(host);
    this.#resize(host);
  }

  #build() {
    const { head } = this.#film;
    const [x0, y0, x1, y1] = head.bounds;
    this.#world.append(
      svg('path', { class: 'sheet', d: `${line([[x0, y0], [x1, y0], [x1, y1], [x0, y1]])}Z` }),
      this.#grid,
      svg('g', { class: 'solids' }, ...this.#film.solids.map((s) => svg('path', { class: s.shape === 'wall' ? 'thin' : 'solid', d: outline({ id: '', ...s }) }))),
      this.#movers,
      this.#startMark(),
      this.#goal,
      this.#beams, this.#hits, this.#echoes,
    );
    for (const m of head.movers ?? []) {
      this.#movers.append(svg('path', { class: 'mover', d: moverOutline({ id: '', route: [], radius: m.radius ?? 0, half: m.half, heading: m.heading, loop: false }) }));
    }
    this.#goal.append(svg('circle', { class: 'goal-rim', r: head.goal[2] }), svg('circle', { class: 'goal-dot', r: Math.min(head.goal[2] / 3, 0.06) }));

    for (const who of [POINT, UNICYCLE]) {
      this.#traces[who] = piecesOf(this.#film, who, true).map((piece) => ({ piece, path: svg('path', { class: `trace ${who === POINT ? 'dotted' : 'dashed'}` }) }));
      this.#world.append(...this.#traces[who].map((t) => t.path));
    }
    for (const piece of piecesOf(this.#film, ROBOT, false)) {
      const look = head.modes[piece.mode]?.look ?? 'other';
      const paths = [svg('path', { class: `way ${look}` })];
      if (look === 'wall' || look === 'avoid') paths.push(svg('path', { class: `over ${look}` }));
      this.#way.push({ piece, paths, full: pathTo(piece, piece.to, { x: 0, y: 0 }), shown: '' });
      this.#world.append(...paths);
    }
    this.#pinUp();
    this.#world.append(this.#drift, this.#ghost);
    for (const who of [POINT, UNICYCLE, ROBOT]) {
      this.#hulls[who] = svg('g', { class: `hull ${['robot', 'point', 'unicycle'][who]}` });
      this.#world.append(this.#hulls[who]);
    }
    this.#labels.append(this.#startWord, this.#goalWord, this.#pinLeader, this.#pinWord, this.#bar, this.#barWord);
  }

  #startMark() {
    const [x, y] = this.#film.head.start;
    const r = Math.max(this.#film.head.hull * 0.5, 0.08);
    return svg('path', { class: 'start', d: `${line([[x - r, y], [x + r, y]])}${line([[x, y - r], [x, y + r]])}` });
  }

  #pinUp() {
    const { pin, hull, short } = this.#film.head;
    if (!pin) return;
    this.#svg.classList.toggle('short', short);
    this.#pinWord.classList.add('pin-word');
    this.#pin.append(svg('path', { class: 'pin-hull', d: ring(pin.hull[0], pin.hull[1], hull) }));
    this.#world.append(this.#pin);
  }

  /** @param {HTMLElement} host */
  #resize(host) {
    const [x0, y0, x1, y1] = this.#film.head.bounds;
    const { clientWidth: width, clientHeight: height } = host;
    if (!width || !height) return;
    const scale = Math.min((width - 2 * MARGIN) / Math.max(x1 - x0, 1e-6), (height - 2 * MARGIN) / Math.max(y1 - y0, 1e-6));
    const left = (width - scale * (x1 - x0)) / 2 - scale * x0;
    const top = (height + scale * (y1 - y0)) / 2 + scale * y0;
    this.#scale = scale;
    this.#tall = height;
    this.#place = ([x, y]) => [left + scale * x, top - scale * y];
    set(this.#svg, 'viewBox', `0 0 ${width} ${height}`);
    const { pin } = this.#film.head;
    if (pin) this.#pinWord.textContent = width < 560 ? pin.text : `${pin.text} ${pin.more}`;
    set(this.#world, 'transform', `matrix(${scale} 0 0 ${-scale} ${left} ${top})`);

    const square = [1, 2, 5, 10, 20, 50, 100].find((s) => s * scale >= 22) ?? 200;
    let d = '';
    for (let x = Math.ceil(x0 / square) * square; x <= x1; x += square) d += line([[x, y0], [x, y1]]);
    for (let y = Math.ceil(y0 / square) * square; y <= y1; y += square) d += line([[x0, y], [x1, y]]);
    set(this.#grid, 'd', d);
    // The bar stands below the floor where there is room, else in its corner.
    const [bx, by] = [this.#place([x0, y0])[0] + 4, Math.min(this.#place([x0, y0])[1] + 8, height - 5)];
    set(this.#bar, 'd', `M${bx} ${by - 3}v6m0-3h${square * scale}m0-3v6`);
    put(this.#barWord, bx + square * scale + 6, by + 4, 'start');
    this.#barWord.textContent = `${square} m`;
    this.#shapes();
    if (this.#now) this.draw(this.#now);
  }

  /** @type {(p: readonly [number, number]) => [number, number]} */
  #place = (p) => [p[0], p[1]];
  /** @type {Moment | null} */
  #now = null;

  /** The models, which do not get smaller than can be seen. */
  #shapes() {
    const { head } = this.#film;
    const r = Math.max(head.hull, SMALLEST / this.#scale);
    const k = r / head.hull;
    const half = (head.track / 2) * k;
    const [a, b] = [Math.max(head.wheel * k, r * 0.2), Math.max(r * 0.09, 0.01)];
    const wheel = (/** @type {number} */ y) => `${line([[-a, y - b], [a, y - b], [a, y + b], [-a, y + b]])}Z`;
    const tip = line([[r * 0.82, 0], [r * 0.34, r * 0.3], [r * 0.34, -r * 0.3]]);
    set(this.#nose, 'd', `${tip}Z`);
    this.#hulls[ROBOT].replaceChildren(
      svg('circle', { class: 'rim', r }), svg('path', { class: 'wheel', d: head.track ? wheel(half) + wheel(-half) : '' }), this.#nose);
    for (const who of [POINT, UNICYCLE]) {
      /** @type {SVGElement[]} */
      const parts = [svg('circle', { class: 'rim', r })];
      if (who === UNICYCLE) parts.push(svg('path', { class: 'tip', d: line([[r * 0.3, r * 0.32], [r * 0.82, 0], [r * 0.3, -r * 0.32]]) }));
      else parts.push(svg('circle', { class: 'dot', r: Math.max(r * 0.16, 1.2 / this.#scale) }));
      this.#hulls[who].replaceChildren(...parts);
    }
    this.#ghost.replaceChildren(svg('path', { d: ring(0, 0, r) }), svg('path', { d: tip }));
  }

  /** @param {Moment} m */
  draw(m) {
    this.#now = m;
    const { head } = this.#film;
    const robot = m.models[ROBOT];
    for (const w of this.#way) {
      const d = m.tick >= w.piece.to ? w.full : pathTo(w.piece, m.tick, robot);
      if (d === w.shown) continue;
      w.shown = d;
      for (const p of w.paths) set(p, 'd', d);
    }
    for (const who of [POINT, UNICYCLE]) {
      const on = who === POINT ? this.shown.point : this.shown.unicycle;
      for (const t of this.#traces[who]) set(t.path, 'd', on ? pathTo(t.piece, m.tick, m.models[who]) : '');
      set(this.#hulls[who], 'visibility', on ? null : 'hidden');
    }
    m.models.forEach((b, who) => set(this.#hulls[who], 'transform', pose(b.x, b.y, b.heading)));
    set(this.#nose, 'class', `nose ${head.modes[robot.mode]?.look ?? 'other'}`);

    m.movers.forEach(([x, y], k) => set(this.#movers.children[k], 'transform', `translate(${x} ${y})`));
    set(this.#goal, 'transform', `translate(${m.goal[0]} ${m.goal[1]})`);
    this.#moveSolids(m.moved);
    this.#drawBeams(m);
    this.#drawBelief(m);

    const goal = this.#place(m.goal);
    put(this.#goalWord, goal[0], goal[1] - head.goal[2] * this.#scale - 7);
    const start = this.#place([head.start[0], head.start[1]]);
    put(this.#startWord, start[0], start[1] - Math.max(head.hull * this.#scale, 5) - 7);
    this.#drawPin(m);
  }

  /** @param {Map<number, readonly [number, number]>} moved */
  #moveSolids(moved) {
    const { solids } = this.#film;
    const group = this.#world.querySelector('.solids');
    for (const k of new Set([...moved.keys(), ...this.#moved.keys()])) {
      const to = moved.get(k);
      const from = solids[k].points[0];
      const element = group?.children[k];
      if (element) set(element, 'transform', to ? `translate(${to[0] - from[0]} ${to[1] - from[1]})` : null);
    }
    this.#moved = moved;
  }

  /** @param {Moment} m */
  #drawBeams(m) {
    const { head } = this.#film;
    const robot = m.models[ROBOT];
    let [free, hits, echoes] = ['', '', ''];
    if (this.shown.beams && m.ranges && !robot.ended) {
      m.ranges.forEach((range, k) => {
        const angle = robot.heading + (head.bearings?.[k] ?? 0);
        const [c, s] = [Math.cos(angle), Math.sin(angle)];
        const from = /** @type {const} */ ([robot.x + c * head.mount, robot.y + s * head.mount]);
        const to = /** @type {const} */ ([robot.x + c * (head.mount + range), robot.y + s * (head.mount + range)]);
        const d = line([[...from], [...to]]);
        if (range >= head.range_max - 0.005) free += d;
        else {
          hits += d;
          echoes += line([[...to], [...to]]);
        }
      });
    }
    set(this.#beams, 'd', free);
    set(this.#hits, 'd', hits);
    set(this.#echoes, 'd', echoes);
  }

  /** @param {Moment} m */
  #drawBelief(m) {
    const robot = m.models[ROBOT];
    const apart = m.belief ? Math.hypot(m.belief[0] - robot.x, m.belief[1] - robot.y) : 0;
    const on = m.belief !== null && apart > DRIFT;
    set(this.#ghost, 'visibility', on ? null : 'hidden');
    set(this.#drift, 'd', on && m.belief ? line([[robot.x, robot.y], [m.belief[0], m.belief[1]]]) : '');
    if (on && m.belief) set(this.#ghost, 'transform', pose(...m.belief));
  }

  /** @param {Moment} m */
  #drawPin(m) {
    const { pin, bounds } = this.#film.head;
    const on = pin !== null && m.tick >= pin.tick;
    for (const e of [this.#pin, this.#pinWord, this.#pinLeader]) set(e, 'visibility', on ? null : 'hidden');
    if (!pin || !on) return;
    // The words stand on the side that has more room.
    const [x, y] = this.#place(pin.solid);
    const side = pin.solid[0] > (bounds[0] + bounds[2]) / 2 ? -1 : 1;
    const up = y < this.#tall * 0.2 ? 26 : -22;
    set(this.#pinLeader, 'd', `M${x} ${y}l${side * 20} ${up}h${side * 8}`);
    put(this.#pinWord, x + side * 32, y + up + 4, side > 0 ? 'start' : 'end');
  }
}

/** @param {string} text */
function word(text) {
  const e = svg('text', { class: 'word' });
  e.textContent = text;
  return e;
}

/**
 * @param {SVGTextElement} e
 * @param {number} x
 * @param {number} y
 * @param {string} anchor
 */
function put(e, x, y, anchor = 'middle') {
  set(e, 'x', Math.round(x * 10) / 10);
  set(e, 'y', Math.round(y * 10) / 10);
  set(e, 'text-anchor', anchor);
}

/** @param {number} x @param {number} y @param {number} angle */
function pose(x, y, angle) {
  const [c, s] = [Math.cos(angle), Math.sin(angle)];
  return `matrix(${c.toFixed(5)} ${s.toFixed(5)} ${(-s).toFixed(5)} ${c.toFixed(5)} ${x.toFixed(4)} ${y.toFixed(4)})`;
}
