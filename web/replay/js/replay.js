// Replay: puts the film on the page and plays it.

import { clock, numbersIn, speed as speedWord } from '../../static/js/core/format.js';
import { byId, html, say, set, svg } from '../../static/js/dom.js';
import { POINT, ROBOT, UNICYCLE, unpack } from './core/film.js';
import { captionAt, momentAt, spanAt, whyAt } from './core/moment.js';
import { Player, SPEEDS } from './core/player.js';
import { Floor } from './floor.js';
import { Tape } from './tape.js';

const film = unpack(byId('film', HTMLScriptElement).textContent ?? '');
const { head } = film;
const dt = head.tick_s;
/** How many partings are listed before one asks for more. */
const LISTED = 12;
/** A drawing has been asked for. */
let asked = false;
/** When the last was made while playing, ms; 0: none yet. */
let before = 0;

byId('player', HTMLElement).hidden = false;
fillWords();
const player = new Player(head.length * dt, () => request());
const floor = new Floor(byId('floor', HTMLElement), film);
const tape = new Tape(byId('tape', HTMLElement), film, (tick) => leave(() => player.seek(tick * dt)));
listMoments();
controls();
keys();
player.seek(head.length * dt); // how it ended is what one wants to see first

/** Draws with the next picture of the screen. */
function request() {
  if (asked) return;
  asked = true;
  requestAnimationFrame((at) => {
    asked = false;
    draw();
    if (player.playing) player.pass(before ? (at - before) / 1000 : 0);
    before = player.playing ? at : 0;
  });
}

function draw() {
  const tick = player.now / dt;
  const moment = momentAt(film, tick);
  floor.draw(moment);
  tape.draw(tick);
  say(byId('clock', HTMLElement), clock(player.now));
  const play = byId('play', HTMLButtonElement);
  set(play, 'data-playing', player.playing);
  set(play, 'aria-label', player.playing ? 'Pause' : 'Play');
  drawWhy(tick);
  // A sentence stays for as long as it takes to read it.
  const caption = captionAt(film, tick, (player.playing ? 5 * Math.max(player.speed, 1) : 1.5) / dt);
  sentence(byId('caption', HTMLElement), caption?.text ?? '');
  for (const b of document.querySelectorAll('[data-tick]')) set(b, 'aria-current', caption !== null && b.getAttribute('data-tick') === String(caption.tick) && 'true');
  for (const i of document.querySelectorAll('#speeds input')) /** @type {HTMLInputElement} */ (i).checked = Number(i.getAttribute('value')) === player.speed;
}

/** @param {number} tick */
function drawWhy(tick) {
  const card = byId('why', HTMLElement);
  const span = spanAt(film, ROBOT, tick);
  const why = whyAt(film, ROBOT, tick);
  const mode = head.modes[span?.mode ?? 0];
  if (card.dataset.look !== mode.look) {
    card.dataset.look = mode.look;
    fillSwatch(/** @type {SVGSVGElement} */ (card.querySelector('.swatch')), mode.look);
  }
  const over = tick >= head.models[ROBOT].end;
  say(byId('mode', HTMLElement), capital(mode.name) + side(mode.look, span?.side ?? 0));
  sentence(byId('because', HTMLElement), over ? head.ending : `Since ${clock(why.since * dt)}. ${why.text}`);
  const list = byId('others', HTMLElement);
  [POINT, UNICYCLE].forEach((who, k) => {
    const s = spanAt(film, who, tick);
    const m = head.modes[s?.mode ?? 0];
    const row = list.children[k];
    const model = head.models[who];
    if (row.getAttribute('data-look') !== m.look) {
      set(row, 'data-look', m.look);
      fillSwatch(/** @type {SVGSVGElement} */ (row.querySelector('.swatch')), m.look);
    }
    say(row.children[2], tick >= model.end ? `${model.ending} at ${clock(model.end * dt)}` : m.name + side(m.look, s?.side ?? 0));
  });
}

/** @param {string} look @param {number} s */
function side(look, s) {
  return look === 'wall' && s ? `, wall on the ${s > 0 ? 'left' : 'right'}` : '';
}

/** @param {string} s */
function capital(s) {
  return s.charAt(0).toUpperCase() + s.slice(1);
}

/** What does not change while it plays. */
function fillWords() {
  say(byId('made', HTMLElement), head.date);
  say(byId('purpose', HTMLElement), head.purpose);
  sentence(byId('asked', HTMLElement), head.asked);
  say(byId('big', HTMLElement), head.big);
  byId('of', HTMLElement).replaceChildren(`${head.of} `, html('b', {}, head.words));
  set(byId('verdict', HTMLElement), 'data-mark', head.short ? 'bad' : 'good');
  byId('table', HTMLElement).replaceChildren(...head.table.map((row) => html('tr', {}, html('th', { scope: 'row' }, row.label),
    ...row.cells.map((c) => html('td', c.bad ? { class: 'bad' } : {}, c.text)))));
  sentence(byId('ending', HTMLElement), [...(head.failures ?? []), head.ways?.[0] ?? ''].join(' '));
  byId('others', HTMLElement).replaceChildren(...[POINT, UNICYCLE].map((who) => html('li', {},
    svg('svg', { class: 'swatch', width: 16, height: 12, viewBox: '0 0 16 12', 'aria-hidden': 'true' }), html('b', {}, head.models[who].name), html('span'))));
  byId('ways', HTMLElement).replaceChildren(...(head.ways ?? []).map((w) => item(w)));
  sentence(byId('brief', HTMLElement), head.brief);
  byId('advice', HTMLElement).replaceChildren(...(head.advice ?? []).map((a) => {
    const li = item(a.text);
    if (!a.holds) {
      li.className = 'broken';
      li.prepend(html('b', { 'aria-label': 'Does not hold:', role: 'img' }, '!'));
    }
    return li;
  }));
  const again = byId('again', HTMLElement);
  again.replaceChildren('Seed ', number(head.seed), ', state at the end ', number(head.hash), `, made by Leeway ${head.version}${head.date ? ` on ${head.date}` : ''}. `);
  if (/^https?:\/\//.test(head.link)) again.append(html('a', { href: head.link, rel: 'noreferrer' }, 'Open this run in Leeway'), '.');
  sentence(byId('caution', HTMLElement), head.caution);
  say(byId('length', HTMLElement), ` / ${clock(head.length * dt)}`);
  const met = new Set(head.spans.map((s) => s.mode));
  byId('legend', HTMLElement).replaceChildren(...head.modes.flatMap((m, k) => {
    if (!met.has(k)) return [];
    const swatch = svg('svg', { class: 'swatch', width: 16, height: 12, viewBox: '0 0 16 12', 'aria-hidden': 'true' });
    fillSwatch(swatch, m.look);
    return [html('li', { 'data-look': m.look }, swatch, m.name)];
  }));
}

/** Lists what one may want to jump to. */
function listMoments() {
  const partings = film.marks.filter((m) => m.kind === 'parting').map((m, k) =>
    html('li', {}, jump(m.tick, m.text, html('span', { class: 'badge' }, String(k + 1)), html('b', {}, `From the ${head.models[m.who].name}. `))));
  byId('partings', HTMLElement).replaceChildren(...partings.slice(0, LISTED));
  if (!partings.length) byId('partings', HTMLElement).append(html('li', {}, 'They never part.'));
  fold('more', 'More partings', partings.slice(LISTED));
  fold('events', 'What else happened', film.marks.filter((m) => m.kind !== 'parting' && !(m.kind === 'end' && m.who === ROBOT))
    .map((m) => html('li', {}, jump(m.tick, m.text, html('span', { class: 'when n' }, clock(m.tick * dt))))));
}

/** @param {string} id @param {string} title @param {HTMLElement[]} items */
function fold(id, title, items) {
  const details = byId(id, HTMLDetailsElement);
  details.hidden = !items.length;
  /** @type {Element} */ (details.querySelector('summary')).textContent = `${title} (${items.length})`;
  /** @type {Element} */ (details.querySelector('ol')).replaceChildren(...items);
}

/**
 * A sentence that leads to its moment.
 * @param {number} tick
 * @param {string} words
 * @param {...(Node | string)} before
 */
function jump(tick, words, ...before) {
  const span = html('span', {});
  const rest = before.slice(1);
  span.append(...rest, ...pieces(words));
  const b = html('button', { type: 'button', class: 'jump', 'data-tick': tick }, before[0], span);
  b.addEventListener('click', () => leave(() => {
    player.pause();
    player.seek(tick * dt);
    byId('floor', HTMLElement).scrollIntoView({ block: 'nearest' });
  }));
  return b;
}

/** The first invitation goes once the film has been touched. @param {() => void} act */
function leave(act) {
  byId('first', HTMLButtonElement).hidden = true;
  act();
}

function controls() {
  const step = 0.1;
  /** @type {Record<string, () => void>} */
  const acts = {
    start: () => player.seek(0),
    back: () => (player.pause(), player.seek(player.now - step)),
    play: () => player.toggle(),
    on: () => (player.pause(), player.seek(player.now + step)),
  };
  for (const b of document.querySelectorAll('[data-do]')) {
    b.addEventListener('click', () => leave(acts[b.getAttribute('data-do') ?? '']));
  }
  byId('first', HTMLButtonElement).addEventListener('click', () => leave(() => {
    player.seek(0);
    player.play();
    byId('play', HTMLButtonElement).focus({ preventScroll: true });
  }));
  byId('speeds', HTMLElement).append(...SPEEDS.map((s) => {
    const input = html('input', { type: 'radio', name: 'speed', value: s, 'aria-label': `${s} times real time` });
    input.addEventListener('change', () => {
      player.setSpeed(s);
      if (!input.matches(':focus-visible')) input.blur(); // the arrow keys go on moving time
    });
    return html('label', {}, input, html('span', { 'aria-hidden': 'true' }, speedWord(s)));
  }));
  const shown = byId('shown', HTMLElement);
  for (const name of /** @type {const} */ (['point', 'unicycle', 'beams'])) {
    if (name === 'beams' && !film.beams.length) continue;
    const input = html('input', { type: 'checkbox', name, checked: true });
    input.addEventListener('change', () => {
      floor.shown[name] = input.checked;
      request();
    });
    const sample = svg('svg', { width: 24, height: 8, 'aria-hidden': 'true' }, svg('path', { class: { point: 'trace dotted', unicycle: 'trace dashed', beams: 'beam hit' }[name], d: 'M1 4h22' }));
    shown.append(html('label', {}, input, sample, name));
  }
}

function keys() {
  document.addEventListener('keydown', (e) => {
    const target = e.target instanceof Element ? e.target : null;
    if (e.ctrlKey || e.metaKey || e.altKey) return;
    // What was reached by keyboard answers its own keys.
    if (e.key === ' ' && target?.matches('button:focus-visible, input[type=checkbox], summary, a')) return;
    if (e.key.startsWith('Arrow') && target?.matches('input[type=radio]')) return;
    const far = e.shiftKey ? 10 : 1;
    /** @type {Record<string, () => void>} */
    const acts = {
      ' ': () => player.toggle(),
      k: () => player.toggle(),
      ArrowLeft: () => player.seek(player.now - far),
      ArrowRight: () => player.seek(player.now + far),
      ',': () => (player.pause(), player.seek(player.now - 0.1)),
      '.': () => (player.pause(), player.seek(player.now + 0.1)),
      Home: () => player.seek(0),
      End: () => player.seek(head.length * dt),
      n: () => toParting(1),
      p: () => toParting(-1),
      '+': () => player.shift(1),
      '=': () => player.shift(1),
      '-': () => player.shift(-1),
    };
    const act = acts[e.key.length === 1 ? e.key.toLowerCase() : e.key];
    if (!act) return;
    e.preventDefault();
    leave(act);
  });
}

/** @param {1 | -1} by */
function toParting(by) {
  const ticks = film.marks.filter((m) => m.kind === 'parting').map((m) => m.tick);
  const now = Math.round(player.now / dt);
  const to = by > 0 ? ticks.find((t) => t > now) : ticks.filter((t) => t < now).at(-1);
  if (to === undefined) return;
  player.pause();
  player.seek(to * dt);
}

/** @param {string} words */
function item(words) {
  const li = html('li');
  li.append(...pieces(words));
  return li;
}

/** @param {string} text */
function number(text) {
  return html('span', { class: 'n' }, text);
}

/** A sentence with its numbers in the monospaced face. @param {string} words */
function pieces(words) {
  return numbersIn(words).map((p) => (p.number ? number(p.text) : document.createTextNode(p.text)));
}

/**
 * @param {HTMLElement & {said?: string}} element
 * @param {string} words
 */
function sentence(element, words) {
  if (element.said === words) return;
  element.said = words;
  element.replaceChildren(...pieces(words));
}

/**
 * Shows a look by colour and by pattern.
 * @param {SVGSVGElement} swatch
 * @param {string} look
 */
function fillSwatch(swatch, look) {
  const { width, height } = swatch.viewBox.baseVal;
  const parts = [svg('rect', { class: `fill ${look}`, width, height, rx: 3 })];
  let d = '';
  if (look === 'wall') for (let x = -height; x < width; x += 5.5) d += `M${x} ${height}l${height * 0.7} ${-height}`;
  if (look === 'avoid') for (let y = 3, k = 0; y < height; y += 3.3, k++) for (let x = 3 + (k % 2) * 2.6; x < width - 1; x += 5.2) d += `M${x} ${y}h0`;
  swatch.replaceChildren(...parts, svg('path', { class: `figure-line ${look}`, d }));
}
