// Link: what a person pastes, and what to say about a link that is made.

import { count } from './format.js';

/**
 * The data of a pasted link: everything after '#' of a whole link, or the bare
 * data. Null when it cannot be one. Spaces and line ends, which chat tools put
 * into long links, are taken out.
 * @param {string} text
 * @returns {string | null}
 */
export function dataOf(text) {
  const packed = text.replace(/\s+/g, '').replace(/^[<"'(]+|[>"')]+$/g, '');
  const at = packed.indexOf('#');
  const data = at >= 0 ? packed.slice(at + 1) : packed;
  return /^[A-Za-z0-9_-]{8,}$/.test(data) ? data : null;
}

/**
 * Why a link is better sent as a file.
 * @param {number} characters
 */
export function longText(characters) {
  return `This scenario makes a link of ${count(characters)} characters. Many chat and mail tools cut or refuse links as long as that, ` +
    'so save it as a file and send the file. It opens on any Leeway by dropping it on the page.';
}

/**
 * The id in a bench address, or null.
 * @param {string} path
 */
export function sessionOf(path) {
  const match = /^\/bench\/([A-Za-z0-9_-]+)$/.exec(path);
  return match ? match[1] : null;
}

/**
 * The address of a session's live stream.
 * @param {string} session
 * @param {{protocol: string, host: string}} at the page's own location
 */
export function liveAddress(session, at) {
  return `${at.protocol === 'https:' ? 'wss:' : 'ws:'}//${at.host}/live/${encodeURIComponent(session)}`;
}
