// Share: copies a link that holds the whole scenario with its edits. Where the
// browser does not let a page write to the clipboard, the link is shown to be
// copied by hand; where it is too long for common chat tools, a file is offered.

import { longText } from '../core/link.js';
import { byId, say, set } from '../dom.js';

/**
 * @param {() => string} session
 * @param {(words: string, problem?: boolean) => void} tell
 */
export function share(session, tell) {
  const dialog = byId('share', HTMLDialogElement);
  const words = byId('share-words', HTMLElement);
  const field = byId('share-link', HTMLInputElement);
  const save = byId('share-save', HTMLElement);
  const copy = byId('share-copy', HTMLButtonElement);

  byId('copy', HTMLButtonElement).addEventListener('click', async () => {
    const link = await fetchLink(session());
    if (!link) {
      tell('The link could not be made: the server did not answer.', true);
      return;
    }
    if (link.long) {
      show(longText(link.characters), link.url, true);
      return;
    }
    if (await write(link.url)) tell('Link copied. It holds the whole scenario, with what you changed.');
    else show('The browser does not let this page copy by itself. Here is the link:', link.url, false);
  });

  copy.addEventListener('click', async () => {
    if (await write(field.value)) {
      dialog.close();
      tell('Link copied.');
      return;
    }
    field.focus();
    field.select();
  });

  /** @param {string} text @param {string} url @param {boolean} long */
  function show(text, url, long) {
    say(words, text);
    field.value = url;
    set(save, 'hidden', !long);
    copy.textContent = long ? 'Copy the link all the same' : 'Copy';
    dialog.showModal();
    if (!long) field.select();
  }
}

/**
 * @param {string} session
 * @returns {Promise<{url: string, characters: number, long: boolean} | null>}
 */
async function fetchLink(session) {
  try {
    const answer = await fetch(`/api/sessions/${encodeURIComponent(session)}/link`, { cache: 'no-store' });
    return answer.ok ? await answer.json() : null;
  } catch {
    return null;
  }
}

/** @param {string} text */
async function write(text) {
  try {
    await navigator.clipboard.writeText(text);
    return true;
  } catch {
    return false;
  }
}
