// Faults: what is wrong with a file, as a list that one can work through: where,
// what, and the line itself with the place marked.

import { html } from '../dom.js';

/** @typedef {import('../sessions.js').Fault} Fault */

/** A line longer than this is cut round the place, characters. */
const CUT = 100;
/** More faults than this are counted, not listed. */
const MOST = 100;

/**
 * @param {string} what was to be opened: the name of a file, or "The link"
 * @param {Fault[]} faults
 * @param {string} [source] the text of the file
 * @returns {HTMLElement}
 */
export function faultList(what, faults, source) {
  const lines = source?.split(/\r?\n/) ?? [];
  const many = faults.length === 1 ? 'One thing is' : `${faults.length} things are`;
  const head = source === undefined ? `${what} could not be opened.` : `${many} wrong in ${what}:`;
  const list = html('ol', { class: 'faults' }, ...faults.slice(0, MOST).map((f) => item(f, lines)));
  const rest = faults.length > MOST ? [html('p', { class: 'soft' }, `… and ${faults.length - MOST} more.`)] : [];
  return html('div', { class: 'fault-box', role: 'alert' }, html('p', { class: 'fault-head' }, head), list, ...rest);
}

/**
 * @param {Fault} f
 * @param {string[]} lines
 */
function item(f, lines) {
  const where = [];
  if (f.line) where.push(`line ${f.line}${f.column ? `, column ${f.column}` : ''}`);
  if (f.path) where.push(f.path);
  const li = html('li', {}, html('span', { class: 'fault-text' }, f.text));
  if (where.length > 0) li.prepend(html('span', { class: 'fault-where' }, where.join(' · ')));
  const line = f.line ? lines[f.line - 1] : undefined;
  if (line !== undefined && line.trim() !== '') li.append(excerpt(line, f.column ?? 0));
  return li;
}

/**
 * The line, without what is before and behind it, with the column marked.
 * @param {string} line
 * @param {number} column
 */
function excerpt(line, column) {
  const indent = line.length - line.trimStart().length;
  const at = Math.min(Math.max(column - 1, indent), line.length);
  const from = at - indent > CUT - 20 ? at - CUT / 2 : indent;
  const shown = line.slice(from, from + CUT);
  const head = (from > indent ? '…' : '') + shown.slice(0, at - from);
  const code = html('code', { class: 'fault-line' }, head);
  if (column > 0) code.append(html('mark', {}, shown.slice(at - from, at - from + 1) || ' '));
  code.append(shown.slice(column > 0 ? at - from + 1 : at - from), line.length > from + CUT ? '…' : '');
  return code;
}
