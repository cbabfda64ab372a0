// Things: what on the floor can be taken hold of, where each of it is now, and
// which of it is under a finger. Things keep the order in which they were made:
// start, goal, robot, solids, movers.
//
// A thing is moved by its anchor: the first point of a wall, a polygon or a
// mover's route, the centre of everything else.

/** @typedef {import('./protocol.js').Hello} Hello */
/** @typedef {import('./protocol.js').Frame} Frame */
/** @typedef {import('./protocol.js').Solid} Solid */
/** @typedef {import('./protocol.js').Mover} Mover */
/** @typedef {import('./protocol.js').Point} Point */
/** @typedef {import('./protocol.js').What} What */

/**
 * @typedef {object} Thing
 * @property {string} key unique on the floor
 * @property {What} what
 * @property {string} id empty but for solids and movers
 * @property {string} label as it is read out
 * @property {number} index of a solid or mover in the hello message
 */

/**
 * A thing that a person has hold of, or has let go of and whose new place the
 * server has not confirmed yet.
 * @typedef {{key: string, anchor: Point, live: boolean}} Held
 */

/** @param {What} what @param {string} id */
export const keyOf = (what, id) => (id ? `${what} ${id}` : what);

/**
 * @param {Hello} hello
 * @returns {Thing[]}
 */
export function thingsOf(hello) {
  /** @type {Thing[]} */
  const things = [
    { key: 'start', what: 'start', id: '', label: 'start', index: -1 },
    { key: 'goal', what: 'goal', id: '', label: 'goal', index: -1 },
    { key: 'robot', what: 'robot', id: '', label: 'robot', index: -1 },
  ];
  hello.solids.forEach((s, index) => {
    if (s.fixed) return;
    const kind = s.shape === 'wall' ? 'wall' : 'solid';
    things.push({ key: keyOf('solid', s.id), what: 'solid', id: s.id, label: named(kind, s.id), index });
  });
  hello.movers.forEach((m, index) => {
    things.push({ key: keyOf('mover', m.id), what: 'mover', id: m.id, label: named('mover', m.id), index });
  });
  return things;
}

/** @param {string} kind @param {string} id */
const named = (kind, id) => (id.toLowerCase().startsWith(kind) ? id : `${kind} ${id}`);

/**
 * Where the anchors of all things are, at one frame.
 */
export class Places {
  /**
   * @param {Hello} hello
   * @param {Frame} frame
   * @param {Held | null} held
   * @param {Point | null} [taken] where the centre of a held mover was when it was taken
   */
  constructor(hello, frame, held, taken = null) {
    this.hello = hello;
    this.frame = frame;
    this.held = held;
    this.taken = taken;
    /** @type {Map<string, Point>} */
    this.moved = new Map(frame.moved.map(([id, x, y]) => [id, [x, y]]));
  }

  /** @param {Thing} t @returns {Point} */
  anchor(t) {
    if (this.held?.key === t.key) return this.held.anchor;
    switch (t.what) {
      case 'start':
        return [this.hello.start[0], this.hello.start[1]];
      case 'goal':
        return this.frame.goal ?? [this.hello.goal[0], this.hello.goal[1]];
      case 'robot':
        return [this.frame.pose[0], this.frame.pose[1]];
      case 'solid':
        return this.moved.get(t.id) ?? this.hello.solids[t.index].points[0];
      case 'mover':
        return this.hello.movers[t.index].route[0];
    }
  }

  /**
   * How far a solid is from where the hello message has it, or null when it is
   * there.
   * @param {number} index
   * @returns {Point | null}
   */
  shift(index) {
    const s = this.hello.solids[index];
    const held = this.held?.key === keyOf('solid', s.id) ? this.held.anchor : undefined;
    const now = held ?? this.moved.get(s.id);
    if (!now) return null;
    return [now[0] - s.points[0][0], now[1] - s.points[0][1]];
  }

  /**
   * The centre of a mover now, and how far its route is from where the hello
   * message has it.
   * @param {number} index
   * @returns {{at: Point, shift: Point}}
   */
  mover(index) {
    const m = this.hello.movers[index];
    const at = this.frame.movers[index] ?? m.route[0];
    if (this.held?.key !== keyOf('mover', m.id)) return { at, shift: [0, 0] };
    // The server moves the route while the hand does. What is held is drawn from
    // where it was taken, so that the two do not add up.
    const shift = /** @type {Point} */ ([this.held.anchor[0] - m.route[0][0], this.held.anchor[1] - m.route[0][1]]);
    const from = this.taken ?? at;
    return { at: [from[0] + shift[0], from[1] + shift[1]], shift };
  }

  /**
   * A point in the middle of the thing, where its name and its focus ring go.
   * @param {Thing} t
   * @returns {Point}
   */
  middle(t) {
    if (t.what === 'mover') return this.mover(t.index).at;
    if (t.what !== 'solid') return this.anchor(t);
    const [x0, y0, x1, y1] = extent(this.hello.solids[t.index]);
    const [dx, dy] = this.shift(t.index) ?? [0, 0];
    return [(x0 + x1) / 2 + dx, (y0 + y1) / 2 + dy];
  }

  /**
   * Half the size of the thing about its middle, m.
   * @param {Thing} t
   * @returns {Point}
   */
  half(t) {
    if (t.what === 'robot') return [this.hello.hull, this.hello.hull];
    if (t.what === 'goal') return [this.hello.goal[2], this.hello.goal[2]];
    if (t.what === 'mover') {
      const r = moverReach(this.hello.movers[t.index]);
      return [r, r];
    }
    if (t.what !== 'solid') return [0, 0];
    const [x0, y0, x1, y1] = extent(this.hello.solids[t.index]);
    return [(x1 - x0) / 2, (y1 - y0) / 2];
  }

  /**
   * The thing under the point, or null: small things before large ones, and
   * within the slack (m) the nearest.
   * @param {Thing[]} things
   * @param {number} x
   * @param {number} y
   * @param {number} slack
   * @returns {Thing | null}
   */
  pick(things, x, y, slack) {
    let best = null;
    let least = Infinity;
    for (const t of things) {
      const far = this.#gap(t, x, y);
      if (far > slack) continue;
      const rank = RANK[t.what] * 1e6 + Math.max(far, 0);
      // Of two that are alike, the later one lies on top.
      if (rank <= least) {
        least = rank;
        best = t;
      }
    }
    return best;
  }

  /**
   * How far the point is from the thing, m; nothing or less inside it.
   * @param {Thing} t
   * @param {number} x
   * @param {number} y
   */
  #gap(t, x, y) {
    switch (t.what) {
      case 'robot':
      case 'goal':
      case 'start': {
        const [ax, ay] = this.anchor(t);
        return Math.hypot(x - ax, y - ay) - this.half(t)[0];
      }
      case 'mover': {
        const [ax, ay] = this.mover(t.index).at;
        return moverGap(this.hello.movers[t.index], x - ax, y - ay);
      }
      case 'solid': {
        const [dx, dy] = this.shift(t.index) ?? [0, 0];
        return solidGap(this.hello.solids[t.index], x - dx, y - dy);
      }
    }
  }
}

/** Small things are taken first where they overlap. */
const RANK = { robot: 0, goal: 1, start: 2, mover: 3, solid: 4 };

/** @type {WeakMap<Solid, [number, number, number, number]>} */
const extents = new WeakMap();

/**
 * The rectangle round a solid: x0, y0, x1, y1.
 * @param {Solid} s
 * @returns {[number, number, number, number]}
 */
export function extent(s) {
  let box = extents.get(s);
  if (!box) {
    const xs = s.points.map((p) => p[0]);
    const ys = s.points.map((p) => p[1]);
    const r = s.shape === 'disc' ? s.radius ?? 0 : 0;
    box = [least(xs) - r, least(ys) - r, most(xs) + r, most(ys) + r];
    extents.set(s, box);
  }
  return box;
}

/** @param {number[]} v */
const least = (v) => v.reduce((a, b) => Math.min(a, b), Infinity);
/** @param {number[]} v */
const most = (v) => v.reduce((a, b) => Math.max(a, b), -Infinity);

/** @param {Mover} m */
const moverReach = (m) => m.radius || Math.hypot(m.half?.[0] ?? 0, m.half?.[1] ?? 0);

/**
 * @param {Mover} m
 * @param {number} dx from its centre
 * @param {number} dy
 */
function moverGap(m, dx, dy) {
  if (m.radius) return Math.hypot(dx, dy) - m.radius;
  const [c, s] = [Math.cos(m.heading ?? 0), Math.sin(m.heading ?? 0)];
  const along = Math.abs(c * dx + s * dy) - (m.half?.[0] ?? 0);
  const across = Math.abs(c * dy - s * dx) - (m.half?.[1] ?? 0);
  return Math.hypot(Math.max(along, 0), Math.max(across, 0)) + Math.min(Math.max(along, across), 0);
}

/**
 * How far a point is from a solid, m; 0 inside a polygon, less inside a disc.
 * @param {Solid} s
 * @param {number} x
 * @param {number} y
 */
export function solidGap(s, x, y) {
  const [x0, y0, x1, y1] = extent(s);
  const away = Math.hypot(Math.max(x0 - x, 0, x - x1), Math.max(y0 - y, 0, y - y1));
  if (away > 1) return away; // far off: the rectangle will do
  if (s.shape === 'disc') return Math.hypot(x - s.points[0][0], y - s.points[0][1]) - (s.radius ?? 0);
  if (s.shape === 'polygon' && inside(s.points, x, y)) return 0;
  let gap = Infinity;
  const n = s.points.length;
  for (let i = s.shape === 'polygon' ? 0 : 1; i < n; i++) {
    gap = Math.min(gap, segmentGap(s.points[(i + n - 1) % n], s.points[i], x, y));
  }
  return gap;
}

/**
 * Whether the point is inside the polygon, by the parity of the edges that a ray
 * to the right crosses.
 * @param {Point[]} points
 * @param {number} x
 * @param {number} y
 */
export function inside(points, x, y) {
  let odd = false;
  for (let i = 0, j = points.length - 1; i < points.length; j = i++) {
    const [xi, yi] = points[i];
    const [xj, yj] = points[j];
    if (yi > y !== yj > y && x < ((xj - xi) * (y - yi)) / (yj - yi) + xi) odd = !odd;
  }
  return odd;
}

/**
 * @param {Point} a
 * @param {Point} b
 * @param {number} x
 * @param {number} y
 */
function segmentGap(a, b, x, y) {
  const [ux, uy] = [b[0] - a[0], b[1] - a[1]];
  const length2 = ux * ux + uy * uy;
  const t = length2 > 0 ? Math.min(Math.max(((x - a[0]) * ux + (y - a[1]) * uy) / length2, 0), 1) : 0;
  return Math.hypot(x - a[0] - t * ux, y - a[1] - t * uy);
}
