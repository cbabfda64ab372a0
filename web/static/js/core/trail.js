// Trail: the way driven so far, cut into chunks of one mode each. Points only
// ever come at the end, so a picture of it need only touch the last chunk: the
// text of the path data of every other chunk is final.

/** @typedef {import('./protocol.js').TrailPoint} TrailPoint */

/**
 * @typedef {object} Chunk
 * @property {number} mode index of the mode
 * @property {string} d path data in metres
 * @property {number} points
 */

/** Points of one chunk; a longer stretch of one mode is continued in another. */
const CHUNK = 256;
/** Points closer than this to the last one drawn are left out, m. */
const FINEST = 0.004;
/** A hull that is farther than this from the last point was carried there, m. */
const CARRIED = 1;

export class Trail {
  /** @type {Chunk[]} */
  chunks = [];
  /** Points taken in, drawn or not: the number that the next one should have. */
  count = 0;
  /** Changes whenever the trail starts anew. */
  epoch = 0;
  #x = NaN;
  #y = NaN;

  /**
   * Starts anew with these points.
   * @param {TrailPoint[]} points
   */
  reset(points) {
    this.chunks = [];
    this.count = 0;
    this.epoch++;
    this.#x = NaN;
    this.#y = NaN;
    this.append(0, points);
  }

  /**
   * Takes in points of which the first has the number from. Points that are
   * there already are passed over. Returns false, and changes nothing, when
   * points in between are missing.
   * @param {number} from
   * @param {TrailPoint[]} points
   */
  append(from, points) {
    if (points.length === 0) return from <= this.count;
    if (from > this.count) return false;
    for (let i = this.count - from; i < points.length; i++) {
      this.#add(points[i]);
      this.count++;
    }
    return true;
  }

  /** @param {TrailPoint} p */
  #add([x, y, mode]) {
    const moved = Math.hypot(x - this.#x, y - this.#y);
    const last = this.chunks.at(-1);
    if (last && last.mode === mode && moved < FINEST) return;
    const text = `${coordinate(x)} ${coordinate(y)}`;
    if (!last || moved > CARRIED) {
      this.chunks.push({ mode, d: `M${text}`, points: 1 });
    } else if (last.mode !== mode || last.points >= CHUNK) {
      const joint = `M${coordinate(this.#x)} ${coordinate(this.#y)}`;
      this.chunks.push({ mode, d: `${joint}L${text}`, points: 2 });
    } else {
      last.d += `L${text}`;
      last.points++;
    }
    this.#x = x;
    this.#y = y;
  }
}

/** Millimetres are finer than a pixel at the closest look. @param {number} v */
const coordinate = (v) => String(Math.round(v * 1000) / 1000);
