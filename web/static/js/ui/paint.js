// Paint: the lanes, the leeway and the time axis on a canvas. Modes have the
// colours, patterns and words that they have on the whole page.

import { thinned } from '../core/curve.js';
import { boxes } from '../core/lanes.js';
import { BASE, ENDED, GAP, LANES, TICK } from '../core/tape.js';
import { ticks } from '../core/timeline.js';
import { upTo } from '../core/way.js';

/** @typedef {import('../core/state.js').State} State */
/** @typedef {import('../core/timeline.js').Shown} Shown */
/** @typedef {import('../core/protocol.js').Who} Who */
/** @typedef {import('../core/protocol.js').Look} Look */

/** Heights, px. */
const LANE = 19;
const STEP = 23;
const MARKS = 20;
const AXIS = 18;
const LEEWAY = { few: 34, all: 54 };

/** @param {boolean} few only the robot's lane */
export const height = (few) => lanes(few) * STEP + MARKS + (few ? LEEWAY.few : LEEWAY.all) + AXIS;

/** @param {boolean} few */
const lanes = (few) => (few ? 1 : LANES.length);

export class Paint {
  #canvas;
  #pen;
  #width = 0;
  #height = 0;
  #ratio = 1;
  /** @type {Map<string, CanvasPattern | string>} */
  #fills = new Map();

  /** @param {HTMLCanvasElement} canvas */
  constructor(canvas) {
    this.#canvas = canvas;
    const pen = canvas.getContext('2d');
    if (!pen) throw new Error('the browser has no canvas to draw on');
    this.#pen = pen;
  }

  /** The colours may be others now. */
  forget() {
    this.#fills.clear();
  }

  /**
   * @param {number} width
   * @param {number} height
   * @param {number} ratio pixels of the screen for each of the page
   */
  size(width, height, ratio) {
    if (ratio !== this.#ratio) this.#fills.clear();
    [this.#width, this.#height, this.#ratio] = [width, height, ratio];
    this.#canvas.width = Math.round(width * ratio);
    this.#canvas.height = Math.round(height * ratio);
  }

  /** @param {Who} who @param {boolean} few */
  laneTop(who, few) {
    return few ? 0 : LANES.indexOf(who) * STEP;
  }

  /**
   * @param {State} state
   * @param {Shown} shown
   * @param {boolean} few
   */
  draw(state, shown, few) {
    const pen = this.#pen;
    pen.setTransform(this.#ratio, 0, 0, this.#ratio, 0, 0);
    pen.clearRect(0, 0, this.#width, this.#height);
    if (!state.hello) return;
    const dt = state.hello.tick_s;
    const [from, to] = [shown.from / dt, shown.to / dt];
    for (const who of LANES) if (who === 0 || !few) this.#lane(state, who, from, to, this.laneTop(who, few));
    const top = lanes(few) * STEP + MARKS;
    const tall = few ? LEEWAY.few : LEEWAY.all;
    this.#leeway(state, from, to, top, tall, few);
    this.#axis(shown, top + tall);
  }

  /**
   * @param {State} state
   * @param {Who} who
   * @param {number} from
   * @param {number} to
   * @param {number} top
   */
  #lane({ hello, tape }, who, from, to, top) {
    if (!hello || (who !== 0 && !tape.shadows)) return;
    const pen = this.#pen;
    const end = tape.endOf(who)?.tick ?? tape.length;
    pen.font = `600 12px ${colour('--next')}`;
    pen.textBaseline = 'middle';
    for (const box of boxes(tape.lanes[who], end, from, to, this.#width)) {
      const mode = hello.modes[box.mode];
      const wide = box.x1 - box.x0;
      // A hair of paper between boxes, where there is room for it.
      const room = wide > 3 ? 1 : 0;
      pen.fillStyle = this.#fill(mode?.look ?? 'other');
      pen.beginPath();
      pen.roundRect(box.x0, top, Math.max(wide - room, 0.5), LANE, wide > 8 ? 3 : 0);
      pen.fill();
      const word = mode?.name ?? '';
      if (wide > 30 && word) {
        const width = pen.measureText(word).width;
        if (width + 14 < wide) this.#word(word, box.x0 + 7, top, width, mode?.look ?? 'other');
      }
    }
  }

  /**
   * @param {string} word
   * @param {number} x
   * @param {number} top
   * @param {number} width
   * @param {Look} look
   */
  #word(word, x, top, width, look) {
    const pen = this.#pen;
    // The pattern would cut through the letters.
    pen.fillStyle = colour(COLOURS[look]);
    pen.fillRect(x - 3, top + 1, width + 6, LANE - 2);
    pen.fillStyle = colour('--on-colour');
    pen.fillText(word, x, top + LANE / 2 + 0.5);
  }

  /**
   * @param {State} state
   * @param {number} from
   * @param {number} to
   * @param {number} top
   * @param {number} tall
   * @param {boolean} few
   */
  #leeway({ hello, tape }, from, to, top, tall, few) {
    if (!hello) return;
    const pen = this.#pen;
    const asked = hello.asked.leeway_m;
    const most = Math.min(Math.max(5 * (asked ?? 0), 0.5), 3);
    const y = (/** @type {number} */ gap) => top + tall - (Math.min(Math.max(gap, 0), most) / most) * (tall - 3);
    if (asked !== undefined) {
      pen.fillStyle = colour('--short');
      pen.fillRect(0, y(asked), this.#width, top + tall - y(asked));
    }
    pen.strokeStyle = colour('--rule');
    pen.lineWidth = 1;
    pen.beginPath();
    pen.moveTo(0, top + tall - 0.5);
    pen.lineTo(this.#width, top + tall - 0.5);
    pen.stroke();
    const scale = this.#width / (to - from);
    const { rows } = tape;
    const first = Math.max(upTo(rows.length, (i) => rows[i][TICK] < from) - 1, 0);
    const last = Math.min(upTo(rows.length, (i) => rows[i][TICK] <= to) + 1, rows.length);
    for (const who of LANES) {
      if (who !== 0 && (few || !tape.shadows)) continue;
      const end = tape.endOf(who)?.tick ?? Infinity;
      const b = BASE[who];
      const stop = Math.min(upTo(rows.length, (i) => rows[i][TICK] <= end && !(who !== 0 && rows[i][b + ENDED])), last);
      pen.setLineDash(who === 1 ? [1, 3] : who === 2 ? [5, 4] : []);
      pen.strokeStyle = colour(who === 0 ? '--ink' : '--shade-line');
      pen.lineWidth = who === 0 ? 1.7 : 1.3;
      pen.beginPath();
      for (const [x, gap] of thinned(first, stop, (i) => rows[i][TICK], (i) => rows[i][b + GAP] ?? most, from, scale)) pen.lineTo(x, y(gap));
      pen.stroke();
    }
    pen.setLineDash([]);
    if (asked === undefined) return;
    pen.strokeStyle = colour('--failure');
    pen.lineWidth = 1.2;
    pen.setLineDash([5, 4]);
    pen.beginPath();
    pen.moveTo(0, y(asked));
    pen.lineTo(this.#width, y(asked));
    pen.stroke();
    pen.setLineDash([]);
  }

  /** How high the line of what is asked is, px from the top. @param {number} asked @param {boolean} few */
  askedTop(asked, few) {
    const most = Math.min(Math.max(5 * asked, 0.5), 3);
    const tall = few ? LEEWAY.few : LEEWAY.all;
    return lanes(few) * STEP + MARKS + tall - (asked / most) * (tall - 3);
  }

  /** @param {Shown} shown @param {number} top */
  #axis(shown, top) {
    const pen = this.#pen;
    pen.font = `500 11.5px ${colour('--mono')}`;
    pen.textBaseline = 'alphabetic';
    for (const { time, text } of ticks(shown, this.#width)) {
      const x = ((time - shown.from) / (shown.to - shown.from)) * this.#width;
      pen.strokeStyle = colour('--rule');
      pen.beginPath();
      pen.moveTo(Math.round(x) + 0.5, top);
      pen.lineTo(Math.round(x) + 0.5, top + 4);
      pen.stroke();
      const wide = pen.measureText(text).width;
      pen.fillStyle = colour('--soft');
      pen.fillText(text, Math.min(Math.max(x - wide / 2, 0), this.#width - wide), top + 15);
    }
  }

  /** @param {Look} look */
  #fill(look) {
    const known = this.#fills.get(look);
    if (known) return known;
    const fill = this.#pattern(look) ?? colour(COLOURS[look]);
    this.#fills.set(look, fill);
    return fill;
  }

  /** @param {Look} look @returns {CanvasPattern | null} */
  #pattern(look) {
    if (look !== 'wall' && look !== 'avoid') return null;
    const size = look === 'wall' ? 8 : 6;
    const tile = document.createElement('canvas');
    tile.width = tile.height = Math.round(size * this.#ratio);
    const pen = tile.getContext('2d');
    if (!pen) return null;
    const exact = tile.width / size;
    pen.scale(exact, exact);
    pen.fillStyle = colour(COLOURS[look]);
    pen.fillRect(0, 0, size, size);
    pen.globalAlpha = look === 'wall' ? 0.42 : 0.7;
    pen.strokeStyle = pen.fillStyle = colour('--on-colour');
    pen.lineWidth = 1.3;
    pen.beginPath();
    if (look === 'wall') {
      for (const shift of [-size, 0, size]) {
        pen.moveTo(shift - 1, size + 1);
        pen.lineTo(shift + size + 1, -1);
      }
      pen.stroke();
    } else {
      pen.arc(size / 2, size / 2, 1.1, 0, 2 * Math.PI);
      pen.fill();
    }
    const pattern = this.#pen.createPattern(tile, 'repeat');
    pattern?.setTransform(new DOMMatrix([1 / exact, 0, 0, 1 / exact, 0, 0]));
    return pattern;
  }
}

/** @type {Map<string, string>} */
const colours = new Map();
matchMedia('(prefers-color-scheme: dark)').addEventListener('change', () => colours.clear());

/**
 * A colour, or a face, of the page as it now is.
 * @param {string} name of a custom property
 */
export function colour(name) {
  let value = colours.get(name);
  if (value === undefined) {
    value = getComputedStyle(document.documentElement).getPropertyValue(name).trim();
    colours.set(name, value);
  }
  return value;
}

/** @type {Record<Look, string>} */
const COLOURS = {
  goal: '--goal-seeking', wall: '--wall-following', avoid: '--avoidance', done: '--arrived', fail: '--failure', other: '--other-mode',
};
