// Open: a link holds a whole scenario in its fragment, which no server ever
// sees. This page hands it over and gives way to the bench.

import { dataOf } from './core/link.js';
import { byId, say, set } from './dom.js';
import { open } from './sessions.js';
import { faultList } from './ui/faults.js';

const words = byId('open-words', HTMLElement);
const place = byId('open-faults', HTMLElement);

async function hand() {
  const data = dataOf(location.hash);
  if (!data) {
    say(words, location.hash.length > 1
      ? 'This link is damaged: what stands behind # is not the data of a scenario. Perhaps it was cut when it was sent.'
      : 'This link is empty: the scenario should stand behind a # at its end. Perhaps it was cut when it was sent.');
    return;
  }
  const result = await open({ link: data, playing: true });
  if ('url' in result) {
    // Going back from the bench leads to where the link was clicked, not to here.
    location.replace(result.url);
    return;
  }
  set(words, 'hidden', true);
  place.replaceChildren(faultList('The link', result.faults));
  set(place, 'hidden', null);
}

addEventListener('hashchange', () => location.reload());
hand();
