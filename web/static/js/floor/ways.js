// Ways: where robot and shadows have been up to now, what is known of where they
// will go, and the future that the latest change gave up, both faint. The robot's
// way has the colour of each mode and, for those who cannot tell the colours
// apart, a mark along the middle of the line: none for goal-seeking, dashes for
// wall-following, dots for obstacle avoidance. The point's is dotted, the
// unicycle's dashed. A redraw touches the chunks that now has passed since the
// last one.

import { cut, whole } from '../core/way.js';
import { set, svg } from '../dom.js';

/** @typedef {import('../core/way.js').Way} Way */
/** @typedef {import('../core/way.js').Chunk} Chunk */
/** @typedef {import('../core/tape.js').Old} Old */
/** @typedef {import('../core/protocol.js').Mode} Mode */
/** @typedef {import('../core/protocol.js').Point} Point */

const CLASSES = ['way', 'shade-way point', 'shade-way unicycle'];

export class Ways {
  #layers = CLASSES.map((name) => new Line(name));
  #old = CLASSES.map((name) => svg('path', { class: `old ${name.split(' ')[1] ?? 'robot'}` }));
  /** @type {Old | null} */
  #given = null;
  layer = svg('g', { 'aria-hidden': 'true' },
    ...[1, 2, 0].map((who) => this.#old[who]), ...[1, 2, 0].map((who) => this.#layers[who].layer));

  /**
   * @param {readonly Way[]} ways by model
   * @param {number} tick now
   * @param {(Point | null)[]} at where the models are now; null: not there
   * @param {Mode[]} modes
   * @param {Old | null} old
   */
  draw(ways, tick, at, modes, old) {
    this.#layers.forEach((line, who) => {
      const here = at[who];
      set(line.layer, 'display', here ? null : 'none');
      if (here) line.draw(ways[who], tick, here, modes);
    });
    if (old !== this.#given) {
      this.#given = old;
      this.#old.forEach((path, who) => set(path, 'd', old?.ways[who] ?? ''));
    }
  }
}

/** @typedef {{line: SVGPathElement, mark: SVGPathElement | null, name: string}} Drawn */

/** The way of one model. */
class Line {
  #name;
  #lines = svg('g');
  #marks = svg('g');
  /** What comes of the chunk in which now is. */
  #rest = svg('path');
  layer = svg('g', {}, this.#lines, this.#marks, this.#rest);
  #epoch = -1;
  /** @type {Drawn[]} */
  #drawn = [];
  #now = -1;

  /** @param {string} name class of the lines */
  constructor(name) {
    this.#name = name;
  }

  /**
   * @param {Way} way
   * @param {number} tick
   * @param {Point} at
   * @param {Mode[]} modes
   */
  draw(way, tick, at, modes) {
    const { chunks } = way;
    if (way.epoch !== this.#epoch) {
      this.#epoch = way.epoch;
      this.#lines.replaceChildren();
      this.#marks.replaceChildren();
      this.#drawn = [];
      this.#now = -1;
    }
    const now = way.chunkAt(tick);
    const first = Math.max(Math.min(now, this.#now, this.#drawn.length - 1), 0);
    const last = Math.min(Math.max(now, this.#now, chunks.length - 1), chunks.length - 1);
    // Between the moments before and now, and at the end, where there may be more.
    const passed = Math.max(now, this.#now);
    for (let i = first; i <= last; i++) {
      if (i > passed && i < this.#drawn.length - 1) i = this.#drawn.length - 1;
      this.#show(chunks, i, now, tick, at, modes);
    }
    if (now < 0) set(this.#rest, 'd', '');
    this.#now = now;
  }

  /**
   * @param {Chunk[]} chunks
   * @param {number} i
   * @param {number} now
   * @param {number} tick
   * @param {Point} at
   * @param {Mode[]} modes
   */
  #show(chunks, i, now, tick, at, modes) {
    const chunk = chunks[i];
    const look = chunk.mode < 0 ? '' : ` ${modes[chunk.mode]?.look ?? 'other'}`;
    if (i >= this.#drawn.length) this.#drawn.push(this.#begin(look));
    const { line, mark, name } = this.#drawn[i];
    if (i === now) {
      const [head, rest] = cut(chunk, tick, at);
      set(this.#rest, 'class', `${name} ahead`);
      set(this.#rest, 'd', rest);
      set(line, 'd', head);
      if (mark) set(mark, 'd', head);
    } else {
      const d = whole(chunk);
      set(line, 'd', d);
      if (mark) set(mark, 'd', d);
    }
    set(line, 'class', i > now ? `${name} ahead` : name);
    if (mark) set(mark, 'display', i > now ? 'none' : null);
  }

  /** @param {string} look */
  #begin(look) {
    const name = this.#name + look;
    const line = svg('path', { class: name });
    this.#lines.append(line);
    if (look !== ' wall' && look !== ' avoid') return { line, mark: null, name };
    const mark = svg('path', { class: `tick${look}` });
    this.#marks.append(mark);
    return { line, mark, name };
  }
}
