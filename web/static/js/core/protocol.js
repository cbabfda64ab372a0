// Protocol: the messages of the live stream, as types, and what makes a message
// out of a text. The server is trusted to send what the types say; what is taken
// care of here is that lists which are empty may be missing.

/** @typedef {[number, number]} Point */
/** @typedef {[number, number, number]} Pose x, y in metres, heading in radians */

/** A model: 0 the robot, 1 the point, 2 the unicycle. @typedef {0 | 1 | 2} Who */

/**
 * One moment of the tape, flat; core/tape.js says what stands where.
 * @typedef {number[]} Row
 */

/** @typedef {[Who, number, number, number]} Span who, tick, mode, side: it lasts to the next of the same model */

/** @typedef {'contact' | 'parting' | 'chatter' | 'ceiling' | 'end'} MarkKind */

/** @typedef {{kind: MarkKind, who: Who, tick: number, text: string}} Mark */

/** The whole tape so far. @typedef {{every: number, length: number, rows: Row[], spans: Span[], marks: Mark[]}} TapeWhole */

/**
 * What has come to the tape, and the number of the first of each.
 * @typedef {{from: number, rows: Row[], spans_from: number, spans: Span[], marks_from: number, marks: Mark[]}} TapeMore
 */

/** A shadow now. @typedef {{pose: Pose, mode: number, side: -1 | 0 | 1, status: string, gap: number | null}} Shadow */

/**
 * One condition of an exit. Share, mark and release are places on a scale from 0 to 1.
 * @typedef {{label: string, text: string, met: boolean, share: number, mark: number, release: number}} Gauge
 */

/**
 * A way out of the mode: when all gauges are met, and have been for hold seconds.
 * @typedef {{to: number, name: string, hold: number, held: number, gauges: Gauge[]}} Exit
 */

/**
 * What is known of one model up to now. Of the shadows, the distances are those from the robot.
 * @typedef {object} Measures
 * @property {Who} who
 * @property {string} status
 * @property {number} time s
 * @property {number | null} leeway
 * @property {number} way m
 * @property {number} switches
 * @property {number} contacts
 * @property {number} saturated share of the time
 * @property {number} estimate_error m
 * @property {number} largest m
 * @property {number} largest_at s
 * @property {number} rms m
 * @property {string} parting the first, in words; empty: none
 * @property {number} parting_tick
 */

/** Shortest: the shortest way, m; null where there is none or none is known, and then why. @typedef {{shortest: number | null, shortest_why?: string, models: Measures[]}} Measured */

/** Where the simple model is exact, and whether these numbers keep to it. @typedef {{about: string, holds: boolean, text: string}} Advice */

/**
 * How a mode looks.
 * @typedef {'goal' | 'wall' | 'avoid' | 'done' | 'fail' | 'other'} Look
 */

/** @typedef {{name: string, look: Look}} Mode */

/**
 * A solid. Points: the corners of a polygon, the points of a wall, or the centre
 * of a disc. Its anchor is the first of them.
 * @typedef {object} Solid
 * @property {string} id
 * @property {'wall' | 'polygon' | 'disc'} shape
 * @property {Point[]} points
 * @property {number} [radius]
 * @property {boolean} [fixed] it cannot be moved
 */

/**
 * A mover. With a radius it is a disc, else a box of half sizes half, turned by
 * heading. Its anchor is the first point of its route.
 * @typedef {object} Mover
 * @property {string} id
 * @property {number} [radius]
 * @property {Point} [half]
 * @property {number} [heading]
 * @property {Point[]} route
 * @property {boolean} [loop]
 */

/**
 * A piece of the brief: plain text, a number, or a choice.
 * @typedef {object} Part
 * @property {string} [text]
 * @property {string} [number] path of the number
 * @property {string} [choice] path of the choice
 * @property {number | string} [value]
 * @property {string} [unit]
 * @property {number} [min]
 * @property {number} [max]
 * @property {number} [step]
 * @property {number} [decimals]
 * @property {'now' | 'restart'} [applies]
 * @property {string} [label]
 * @property {{value: string, label: string}[]} [options]
 */

/** @typedef {{within_s?: number, leeway_m?: number, switches?: number}} Asked */

/**
 * @typedef {object} Frame
 * @property {'frame'} kind
 * @property {number} tick
 * @property {number} time s
 * @property {boolean} playing
 * @property {number} speed 0: as fast as it goes
 * @property {number} viewers
 * @property {Pose} pose
 * @property {Pose} belief
 * @property {number} mode
 * @property {-1 | 0 | 1} side 1: the wall is on the left, −1: on the right
 * @property {number} since s, when the mode was entered
 * @property {string} why
 * @property {number[]} ranges m, from the mount
 * @property {string} hits a '1' for each beam that met something
 * @property {number | null} gap hull to the nearest solid, m
 * @property {number | null} leeway
 * @property {[number, number, number, number, number] | null} closest hull x, y; place x, y; time
 * @property {number} way m
 * @property {number} switches
 * @property {number} contacts
 * @property {number} saturated share of the time
 * @property {number} estimate_error m
 * @property {Point[]} movers
 * @property {Point} goal
 * @property {[string, number, number][]} moved id and anchor of each solid moved since hello
 * @property {string} status
 * @property {string} [reason]
 * @property {string} [hash]
 * @property {number} length of the tape, ticks
 * @property {boolean} at_head nothing is known beyond now
 * @property {Shadow[]} shadows point and unicycle; empty when there are none
 * @property {Exit[]} exits
 * @property {Measured} verdict
 * @property {TapeMore} tape
 */

/**
 * @typedef {object} Hello
 * @property {'hello'} kind
 * @property {string} session
 * @property {string} name
 * @property {string} [purpose]
 * @property {string} file
 * @property {number} tick_s
 * @property {boolean} playing
 * @property {number} speed
 * @property {number} viewers
 * @property {number} [idle_minutes]
 * @property {[number, number, number, number]} bounds
 * @property {Pose} start
 * @property {[number, number, number]} goal x, y, radius
 * @property {number} hull radius, m
 * @property {number} track
 * @property {number} wheel radius, m
 * @property {number} mount
 * @property {number} range_max
 * @property {number[]} bearings radians from the nose
 * @property {string} motion
 * @property {boolean} [all_round]
 * @property {Mode[]} modes
 * @property {Solid[]} solids
 * @property {Mover[]} movers
 * @property {Part[]} brief
 * @property {Asked} asked
 * @property {boolean} shadows they are computed
 * @property {Advice[]} advice
 * @property {TapeWhole} tape
 * @property {number | null} ceiling m/s below which no heading asks too much of a wheel
 * @property {number | null} wheel_max rad/s
 * @property {Frame} frame
 */

/** @typedef {{kind: 'problem', about: string, text: string}} Problem */
/** @typedef {{kind: 'notice', text: string}} Notice */
/** @typedef {{kind: 'ended', text: string}} Ended */
/** @typedef {Hello | Frame | Problem | Notice | Ended} Message */

/**
 * What can be dragged.
 * @typedef {'goal' | 'start' | 'robot' | 'solid' | 'mover'} What
 */

/**
 * A message to the server.
 * @typedef {{kind: 'drag', what: What, id?: string, x: number, y: number, done: boolean}
 *   | {kind: 'play' | 'pause' | 'tick' | 'back' | 'restart' | 'resync'}
 *   | {kind: 'seek', tick: number}
 *   | {kind: 'shadows', on: boolean}
 *   | {kind: 'speed', value: number}
 *   | {kind: 'number', path: string, value: number}
 *   | {kind: 'choice', path: string, value: string}} Command
 */

/**
 * The message in a text, or null when there is none that this page knows.
 * @param {string} text
 * @returns {Message | null}
 */
export function decode(text) {
  let m;
  try {
    m = JSON.parse(text);
  } catch {
    return null;
  }
  if (typeof m !== 'object' || m === null) return null;
  switch (m.kind) {
    case 'hello':
      return hello(m);
    case 'frame':
      return frame(m);
    case 'problem':
    case 'notice':
    case 'ended':
      return { ...m, text: String(m.text ?? ''), about: String(m.about ?? '') };
    default:
      return null;
  }
}

/**
 * @param {any} m
 * @returns {Hello}
 */
export function hello(m) {
  return {
    ...m,
    kind: 'hello',
    bearings: m.bearings ?? [],
    modes: m.modes ?? [],
    solids: (m.solids ?? []).map((/** @type {any} */ s) => ({ ...s, points: s.points ?? [] })),
    movers: (m.movers ?? []).map((/** @type {any} */ v) => ({ ...v, route: v.route ?? [] })),
    brief: m.brief ?? [],
    asked: asked(m.asked ?? {}),
    shadows: m.shadows ?? false,
    advice: m.advice ?? [],
    tape: {
      every: m.tape?.every || 1, length: m.tape?.length ?? 0,
      rows: m.tape?.rows ?? [], spans: m.tape?.spans ?? [], marks: m.tape?.marks ?? [],
    },
    ceiling: m.ceiling ?? null,
    wheel_max: m.wheel_max ?? null,
    frame: frame(m.frame ?? {}),
  };
}

/**
 * What is not asked is left out, where the server writes a number that cannot be.
 * @param {any} a
 * @returns {Asked}
 */
function asked(a) {
  return {
    within_s: a.within_s > 0 ? a.within_s : undefined,
    leeway_m: typeof a.leeway_m === 'number' ? a.leeway_m : undefined,
    switches: a.switches >= 0 ? a.switches : undefined,
  };
}

/**
 * @param {any} m
 * @returns {Frame}
 */
function frame(m) {
  return {
    ...m,
    kind: 'frame',
    ranges: m.ranges ?? [],
    hits: m.hits ?? '',
    movers: m.movers ?? [],
    moved: m.moved ?? [],
    length: m.length ?? m.tick ?? 0,
    at_head: m.at_head ?? true,
    shadows: m.shadows ?? [],
    exits: (m.exits ?? []).map((/** @type {any} */ x) => ({ ...x, gauges: x.gauges ?? [] })),
    verdict: { ...m.verdict, shortest: m.verdict?.shortest ?? null, models: m.verdict?.models ?? [] },
    tape: {
      from: m.tape?.from ?? 0, rows: m.tape?.rows ?? [],
      spans_from: m.tape?.spans_from ?? 0, spans: m.tape?.spans ?? [],
      marks_from: m.tape?.marks_from ?? 0, marks: m.tape?.marks ?? [],
    },
    status: m.status ?? 'running',
    why: m.why ?? '',
  };
}

/**
 * The text of a command, its lengths rounded to tenths of a millimetre.
 * @param {Command} command
 */
export function encode(command) {
  return JSON.stringify(command, (key, value) => (key === 'x' || key === 'y' ? Math.round(value * 1e4) / 1e4 : value));
}
