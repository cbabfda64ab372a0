// Player: time that goes on, stands still, or is put elsewhere. It knows no clock:
// whoever has one says how much of it has passed.

export const SPEEDS = [0.25, 0.5, 1, 2, 4, 8, 16];

export class Player {
  /** Where the film is, in seconds. */
  now = 0;
  playing = false;
  speed = 1;
  #length;
  /** @type {() => void} */
  #changed;

  /**
   * @param {number} length seconds
   * @param {() => void} changed called after each change
   */
  constructor(length, changed) {
    this.#length = length;
    this.#changed = changed;
  }

  /** Plays on; from the start when it stands at the end. */
  play() {
    if (this.now >= this.#length) this.now = 0;
    this.playing = this.#length > 0;
    this.#changed();
  }

  pause() {
    this.playing = false;
    this.#changed();
  }

  toggle() {
    if (this.playing) this.pause();
    else this.play();
  }

  /**
   * Goes to a time; it plays on if it played.
   * @param {number} seconds
   */
  seek(seconds) {
    this.now = Math.min(Math.max(seconds, 0), this.#length);
    this.#changed();
  }

  /** @param {number} speed */
  setSpeed(speed) {
    this.speed = speed;
    this.#changed();
  }

  /** The next faster or slower speed. @param {1 | -1} by */
  shift(by) {
    const at = SPEEDS.indexOf(this.speed) + by;
    if (SPEEDS[at]) this.setSpeed(SPEEDS[at]);
  }

  /**
   * Lets real time pass.
   * @param {number} seconds
   */
  pass(seconds) {
    if (!this.playing) return;
    // A page that was hidden for a while does not leap.
    this.now = Math.min(this.now + Math.min(seconds, 0.25) * this.speed, this.#length);
    if (this.now >= this.#length) this.playing = false;
    this.#changed();
  }
}
