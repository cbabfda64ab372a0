// Start: the first page. A card opens its scenario; files and links are opened as
// on the bench.

import { byId, set } from './dom.js';
import { open } from './sessions.js';
import { faultList } from './ui/faults.js';
import { intake } from './ui/intake.js';

const root = byId('intake', HTMLElement);

for (const card of document.querySelectorAll('button[data-shipped]')) {
  card.addEventListener('click', async () => {
    if (document.body.dataset.busy !== undefined) return;
    set(document.body, 'data-busy', true);
    set(card, 'data-busy', true);
    const result = await open({ shipped: card.getAttribute('data-shipped') ?? '', playing: true });
    set(document.body, 'data-busy', null);
    set(card, 'data-busy', null);
    if ('url' in result) {
      location.assign(result.url);
      return;
    }
    const place = root.querySelector('.fault-place');
    place?.replaceChildren(faultList('The floor', result.faults));
    place?.scrollIntoView({ block: 'center' });
  });
}

// Coming back by the browser's own button finds the page as it was left.
addEventListener('pageshow', () => {
  for (const busy of [document.body, ...document.querySelectorAll('[data-busy]')]) set(busy, 'data-busy', null);
});

intake(root);
