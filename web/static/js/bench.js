// Bench: the page of one live session. Everything that happens is an event; the
// state that follows from it is drawn once an animation frame.

import { clock } from './core/format.js';
import { sessionOf } from './core/link.js';
import { hello as asHello } from './core/protocol.js';
import { nextTo } from './core/marks.js';
import { shown } from './core/seek.js';
import { initial, step } from './core/state.js';
import { spoken } from './core/verdict.js';
import { byId, say, set } from './dom.js';
import { Floor } from './floor/floor.js';
import { Live } from './live.js';
import { open } from './sessions.js';
import { Advice } from './ui/advice.js';
import { Banner } from './ui/banner.js';
import { Brief } from './ui/brief.js';
import { intake } from './ui/intake.js';
import { share } from './ui/share.js';
import { Strip } from './ui/strip.js';
import { Strips } from './ui/strips.js';
import { TapeView } from './ui/tape.js';
import { shortcut, Transport } from './ui/transport.js';
import { Verdict } from './ui/verdict.js';
import { Why } from './ui/why.js';

/** @typedef {import('./core/state.js').Event} Event */
/** @typedef {import('./core/protocol.js').Command} Command */

let session = document.body.dataset.session ?? sessionOf(location.pathname) ?? '';
let state = initial();
/** The animation frame that has been asked for, or 0. */
let drawing = 0;
/** @type {{command: Command & {kind: 'drag'}, sent: boolean} | null} What the hand does; sent once a frame at most. */
let drag = null;
/** The tick to look at, when it has not been sent yet; once a frame at most. @type {number | null} */
let wanted = null;
/** @type {number | null} The speed to ask for when a run is taken up again. */
let speed = null;
let takingUp = false;
/** What has been said already. */
const said = { notice: 0, problem: 0, status: 'running' };

const title = byId('name', HTMLElement);
const viewers = byId('viewers', HTMLElement);
const strip = new Strip(byId('strip', HTMLElement), byId('strip-words', HTMLElement), byId('heard', HTMLElement));

const live = new Live(
  (message) => {
    dispatch({ type: 'message', message });
    if (message.kind === 'hello' && speed !== null) {
      live.send({ kind: 'speed', value: speed });
      speed = null;
    }
  },
  (link, retryAt) => {
    dispatch({ type: 'link', link, retryAt });
    if (link === 'gone') takeUp();
  },
);

const floor = new Floor(byId('floor', SVGSVGElement), byId('cursor', HTMLElement), {
  hold(thing, [x, y]) {
    drag = { command: { kind: 'drag', what: thing.what, id: thing.id, x, y, done: false }, sent: false };
    return dispatch({ type: 'hold', key: thing.key, anchor: [x, y] });
  },
  release() {
    if (drag) send({ ...drag.command, done: true });
    drag = null;
    dispatch({ type: 'release' });
  },
  announce: (words) => strip.announce(words),
  redraw: schedule,
});

const brief = new Brief(byId('brief', HTMLElement), {
  number: (path, value) => send({ kind: 'number', path, value }),
  choice: (path, value) => send({ kind: 'choice', path, value }),
});
const transport = new Transport(byId('transport', HTMLElement), byId('legend', HTMLElement), (command) => {
  if (!send(command)) strip.show('Not done: the connection is lost.', true);
});
const banner = new Banner(byId('banner', HTMLElement), () => live.retry());
const tape = new TapeView(byId('tape', HTMLElement), { seek, redraw: schedule });
const strips = new Strips(byId('strips', HTMLElement), () => tape.shown, { session: () => session, seek, redraw: schedule });
const cards = [
  new Why(byId('why', HTMLElement)), new Verdict(byId('verdict', HTMLElement), (tick) => seek(tick)),
  transport, tape, strips, brief, new Advice(byId('advice', HTMLElement), byId('holds', HTMLElement)),
];

/**
 * @param {Event} event
 */
function dispatch(event) {
  const next = step(state, event);
  if (event.type === 'link' || next.state.link !== state.link) banner.draw(next.state);
  state = next.state;
  for (const effect of next.effects) live.send({ kind: effect });
  schedule();
  return state;
}

/**
 * Looks at another moment.
 * @param {number} tick
 * @param {boolean} [live] a hand holds on to it
 */
function seek(tick, live = false) {
  if (state.link !== 'live') {
    strip.show('Not done: the connection is lost.', true);
    return;
  }
  dispatch({ type: 'seek', tick, live });
  if (state.seek) wanted = state.seek.tick;
}

function schedule() {
  if (!drawing) drawing = requestAnimationFrame(draw);
}

/**
 * Sends a command, after the seek that waits for the next redraw: what a person did
 * first is done first.
 * @param {Command} command
 */
function send(command) {
  sendSeek();
  return live.send(command);
}

function sendSeek() {
  if (wanted !== null) live.send({ kind: 'seek', tick: wanted });
  wanted = null;
}

function draw() {
  drawing = 0;
  sendSeek();
  if (drag && !drag.sent) {
    drag.sent = true;
    live.send(drag.command);
  }
  const now = shown(state);
  floor.draw(now);
  for (const card of cards) card.draw(now);
  head();
  speak();
}

function head() {
  const { hello, frame } = state;
  if (!hello || !frame) return;
  const name = hello.name || 'Unnamed scenario';
  say(title, name);
  const tab = `${name} · Leeway`;
  if (document.title !== tab) document.title = tab;
  const n = frame.viewers ?? hello.viewers;
  say(viewers, n > 1 ? `${n} watching` : '');
}

/** Says what is new since the last frame. */
function speak() {
  const { notice, problem, frame, hello } = state;
  if (notice && notice.serial !== said.notice) {
    said.notice = notice.serial;
    strip.show(notice.text);
  }
  if (problem && problem.serial !== said.problem) {
    said.problem = problem.serial;
    // What is wrong with a number of the brief is said beside it.
    if (!brief.has(problem.about)) strip.show(problem.text, true);
  }
  if (frame && hello && frame.status !== said.status) {
    said.status = frame.status;
    strip.announce(spoken(frame, hello.asked));
  }
}

/**
 * Hands the run to a server that knows it no more: the last known file, brought
 * to the last known tick. The page goes on under the new address.
 */
async function takeUp() {
  const { hello, frame } = state;
  if (!hello || !frame || takingUp) return;
  takingUp = true;
  const result = await open({ scenario: hello.file, tick: frame.tick, playing: frame.playing });
  takingUp = false;
  if ('faults' in result) {
    const text = `The run could not be taken up again. ${result.faults[0]?.text ?? ''}`;
    dispatch({ type: 'message', message: { kind: 'ended', text } });
    return;
  }
  history.replaceState(null, '', result.url);
  session = result.session;
  speed = frame.speed;
  addresses();
  live.connect(session);
  dispatch({ type: 'say', text: `The server had lost this run. It goes on from ${clock(frame.time)}.` });
}

/** The addresses on the page that hold the session's id. */
function addresses() {
  for (const id of ['save', 'share-save']) {
    set(byId(id, HTMLAnchorElement), 'href', `/api/sessions/${encodeURIComponent(session)}/scenario`);
  }
  for (const id of ['replay', 'report']) {
    set(byId(id, HTMLAnchorElement), 'href', `/${id}/${encodeURIComponent(session)}`);
  }
}

function keys() {
  const dialog = byId('keys', HTMLDialogElement);
  byId('keys-open', HTMLButtonElement).addEventListener('click', () => dialog.showModal());
  const everywhere = byId('keys-on', HTMLInputElement);
  everywhere.checked = remembered() !== 'off';
  everywhere.addEventListener('change', () => remember(everywhere.checked ? 'on' : 'off'));
  addEventListener('keydown', (event) => {
    const does = everywhere.checked ? shortcut(event) : null;
    if (!does) return;
    event.preventDefault();
    if (does === 'mark before' || does === 'mark after') toMark(does === 'mark after' ? 1 : -1);
    else if (!event.repeat || does === 'tick' || does === 'back') transport.do(does);
  });
}

/** @param {1 | -1} way */
function toMark(way) {
  const now = state.seek?.tick ?? state.frame?.tick ?? 0;
  const tick = nextTo(state.tape.marks, now, way);
  if (tick === null) {
    strip.announce(way > 0 ? 'No mark after this moment' : 'No mark before this moment');
    return;
  }
  seek(tick);
  const words = state.tape.marks.filter((m) => m.tick === tick).map((m) => m.text).join(' ');
  strip.announce(`${clock(tick * (state.hello?.tick_s ?? 0))}. ${words}`);
}

/** Under this name the browser keeps whether single keys do something; it may refuse to keep anything. */
const KEYS = 'leeway single keys';

function remembered() {
  try {
    return localStorage.getItem(KEYS);
  } catch {
    return null;
  }
}

/** @param {string} value */
function remember(value) {
  try {
    localStorage.setItem(KEYS, value);
  } catch {
    // Then it holds for this page alone.
  }
}

function opener() {
  const dialog = byId('opener', HTMLDialogElement);
  byId('open', HTMLButtonElement).addEventListener('click', () => dialog.showModal());
  intake(dialog, () => {
    if (!dialog.open) dialog.showModal();
  });
}

for (const dialog of document.querySelectorAll('dialog')) {
  dialog.addEventListener('click', (event) => {
    // The dialog itself is only hit beside what is in it.
    const close = event.target instanceof Element && event.target.closest('[data-close]');
    if (close || event.target === dialog) dialog.close();
  });
}
for (const button of document.querySelectorAll('[data-zoom]')) {
  button.addEventListener('click', () => {
    const factor = Number(button.getAttribute('data-zoom'));
    if (factor > 0) floor.zoom(factor);
    else floor.fit();
  });
}
keys();
opener();
share(() => session, (words, problem) => strip.show(words, problem));

const first = document.getElementById('hello')?.textContent;
const known = first ? JSON.parse(first) : null;
if (known) {
  dispatch({ type: 'message', message: asHello(known) });
  dispatch({ type: 'link', link: 'connecting' });
}
live.connect(session);
