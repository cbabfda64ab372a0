// Live: the connection to a session. It comes back by itself after it is lost,
// waiting longer from try to try, and says so; it gives up only when the server
// answers that it knows the session no more.

import { wait } from './core/backoff.js';
import { liveAddress } from './core/link.js';
import { decode, encode } from './core/protocol.js';

/** @typedef {import('./core/protocol.js').Message} Message */
/** @typedef {import('./core/protocol.js').Command} Command */
/** @typedef {import('./core/state.js').Link} Link */

/** Close code with which the server says that there is no such session. */
const UNKNOWN_SESSION = 4404;
/** A connection that has not opened by then is given up, ms. */
const OPENING = 8000;

export class Live {
  /** @type {WebSocket | null} */
  #socket = null;
  #session = '';
  #attempt = 0;
  #timer = 0;
  /** Counts the connections made, so that a late word from an old one is not heard. */
  #turn = 0;

  /**
   * @param {(message: Message) => void} onMessage
   * @param {(link: Link, retryAt?: number) => void} onLink
   */
  constructor(onMessage, onLink) {
    this.onMessage = onMessage;
    this.onLink = onLink;
    addEventListener('online', () => this.#timer && this.retry());
  }

  /** @param {string} session */
  connect(session) {
    this.#session = session;
    this.#attempt = 0;
    this.#open();
  }

  /** Tries again now. */
  retry() {
    clearTimeout(this.#timer);
    this.#open();
  }

  /** Closes the connection for good. */
  close() {
    this.#turn++;
    clearTimeout(this.#timer);
    this.#timer = 0;
    this.#socket?.close();
    this.#socket = null;
  }

  /**
   * Sends a command; false when there is no connection to send it over.
   * @param {Command} command
   */
  send(command) {
    if (this.#socket?.readyState !== WebSocket.OPEN) return false;
    this.#socket.send(encode(command));
    return true;
  }

  #open() {
    this.close();
    const turn = this.#turn;
    const socket = new WebSocket(liveAddress(this.#session, location));
    this.#socket = socket;
    let ended = false;
    const slow = setTimeout(() => socket.close(), OPENING);
    socket.addEventListener('open', () => clearTimeout(slow));
    socket.addEventListener('message', (event) => {
      if (turn !== this.#turn) return;
      const message = decode(String(event.data));
      if (!message) return;
      this.#attempt = 0;
      this.onMessage(message);
      if (message.kind === 'ended') ended = true;
    });
    socket.addEventListener('close', (event) => {
      clearTimeout(slow);
      if (turn !== this.#turn) return;
      if (event.code === UNKNOWN_SESSION) this.onLink('gone');
      else this.#lost(ended);
    });
  }

  /**
   * A close code can get lost on its way, so the server is asked.
   * @param {boolean} ended the server said that it ends the connection
   */
  async #lost(ended) {
    const turn = this.#turn;
    const unknown = await this.#unknown();
    if (turn !== this.#turn) return;
    if (unknown) {
      this.onLink('gone');
      return;
    }
    // A run that the server has put away is not woken by coming back unasked.
    if (ended) return;
    const delay = 1000 * wait(this.#attempt++, Math.random());
    this.onLink('lost', Date.now() + delay);
    this.#timer = window.setTimeout(() => this.#open(), delay);
  }

  /** Whether the server is there and knows nothing of the session. */
  async #unknown() {
    try {
      const answer = await fetch(`/bench/${encodeURIComponent(this.#session)}`, { cache: 'no-store' });
      return answer.status === 404 || answer.status === 410;
    } catch {
      return false;
    }
  }
}
