// Intake: opening a scenario from outside, by choosing a file, dropping one
// anywhere on the page, or pasting a link. On the start page and on the bench.

import { dataOf } from '../core/link.js';
import { set } from '../dom.js';
import { open } from '../sessions.js';
import { faultList } from './faults.js';
import { part } from './why.js';

/** @typedef {import('../sessions.js').Wanted} Wanted */

/** Far above any file the server accepts; what is larger is not even read. */
const LARGEST = 64 << 20;

/**
 * @param {HTMLElement} root with a file input, a form for the link and a place for faults
 * @param {() => void} [reveal] shows root, before faults are put into it
 */
export function intake(root, reveal = () => {}) {
  const file = part(root, 'input[type=file]');
  const form = part(root, 'form');
  const link = part(root, 'input[name=link]');
  const faults = part(root, '.fault-place');
  if (!(file instanceof HTMLInputElement) || !(link instanceof HTMLInputElement)) throw new Error('the page has no intake');

  /**
   * @param {string} what it is, in words
   * @param {Wanted} wanted
   * @param {string} [source]
   */
  const take = async (what, wanted, source) => {
    set(root, 'data-busy', true);
    const result = await open({ ...wanted, playing: true });
    set(root, 'data-busy', null);
    if ('url' in result) {
      location.assign(result.url);
      return;
    }
    reveal();
    faults.replaceChildren(faultList(what, result.faults, source));
    faults.scrollIntoView({ block: 'nearest' });
  };

  /** @param {File} f */
  const read = async (f) => {
    if (f.size > LARGEST) {
      reveal();
      faults.replaceChildren(faultList(f.name, [{ text: 'It is far larger than any scenario file.' }]));
      return;
    }
    const text = await f.text();
    await take(f.name, { scenario: text }, text);
  };

  file.addEventListener('change', async () => {
    const chosen = file.files?.[0];
    if (chosen) await read(chosen);
    file.value = ''; // the same file, mended, can be chosen again
  });

  form.addEventListener('submit', async (event) => {
    event.preventDefault();
    const data = dataOf(link.value);
    if (data) await take('The link', { link: data });
    else faults.replaceChildren(faultList('The link', [{ text: 'A link ends in # and a run of letters and digits; paste all of it.' }]));
  });

  drop(read);
}

/**
 * Files dropped anywhere on the page.
 * @param {(file: File) => void} read
 */
function drop(read) {
  let depth = 0;
  const carries = (/** @type {DragEvent} */ event) => event.dataTransfer?.types.includes('Files') ?? false;
  const mark = () => set(document.body, 'data-drop', depth > 0);
  addEventListener('dragenter', (event) => {
    if (!carries(event)) return;
    event.preventDefault();
    depth++;
    mark();
  });
  addEventListener('dragleave', (event) => {
    if (!carries(event)) return;
    depth = Math.max(depth - 1, 0);
    mark();
  });
  addEventListener('dragover', (event) => {
    if (carries(event)) event.preventDefault();
  });
  addEventListener('drop', (event) => {
    if (!carries(event)) return;
    event.preventDefault();
    depth = 0;
    mark();
    const file = event.dataTransfer?.files[0];
    if (file) read(file);
  });
}
