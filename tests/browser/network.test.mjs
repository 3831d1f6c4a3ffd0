// The page makes no network request, and its policy stops what is planted in it. A listening socket on this machine
// counts what arrives; a copy of the page without the policy is hit, so the count can fail.

import assert from 'node:assert/strict';
import { once } from 'node:events';
import { readFileSync } from 'node:fs';
import { createServer } from 'node:http';
import { after, before, beforeEach, describe, it } from 'node:test';
import { pathToFileURL } from 'node:url';
import { browserNames, launch, newTab, openFile, pageFile, temporaryFile, waitForState } from './harness.mjs';

const POLICY = /<meta http-equiv="Content-Security-Policy"[^>]*>\n/;

for (const name of browserNames) {
  describe(`${name}: network`, () => {
    /** @type {import('puppeteer-core').Browser} */
    let browser;
    /** @type {Set<string>} */
    const hits = new Set();
    const server = createServer((request, response) => {
      hits.add(request.url ?? '');
      response.setHeader('access-control-allow-origin', '*').end('');
    });
    server.on('upgrade', (request, socket) => {
      hits.add(request.url ?? '');
      socket.destroy();
    });

    before(async () => {
      server.listen(0, '127.0.0.1');
      await once(server, 'listening');
      browser = await launch(name);
    });
    after(async () => {
      await browser.close();
      server.closeAllConnections();
      server.close();
    });
    beforeEach(() => hits.clear());

    it('lets nothing out that is planted in the page', async () => {
      const tab = await openFile(browser);
      await waitForState(tab, 'ready');
      await plant(tab);
      assert.deepEqual([...hits], []);
    });

    it('is hit by every planted attempt where the policy is taken out', async () => {
      const page = readFileSync(pageFile, 'utf8');
      assert.match(page, POLICY);
      const tab = await openFile(browser, temporaryFile('page.html', page.replace(POLICY, '')));
      await plant(tab);
      assert.deepEqual([...hits].sort(), [
        '/beacon',
        '/event-source',
        '/fetch',
        '/frame',
        '/image',
        '/script',
        '/socket',
        '/style',
        '/worker-fetch',
      ]);
    });

    it('asks for nothing but itself while it starts', async () => {
      const tab = await newTab(browser);
      /** @type {string[]} */
      const asked = [];
      tab.on('request', (request) => asked.push(request.url()));
      const self = pathToFileURL(pageFile).href;
      await tab.goto(self);
      await waitForState(tab, 'ready');
      assert.deepEqual(
        asked.filter((url) => url !== self && !url.startsWith('data:') && !url.startsWith('blob:')),
        [],
      );
      // Firefox reports no request for a local file, the page's own included; Chromium shows that the list can be filled.
      if (name === 'chromium') assert.ok(asked.includes(self));
    });

    /**
     * Tries every way out that a page has, and gives each time to arrive.
     * @param {import('./harness.mjs').Tab} tab
     */
    async function plant(tab) {
      const { port } = /** @type {import('node:net').AddressInfo} */ (server.address());
      await tab.evaluate(async (base) => {
        const attempts = [
          () => fetch(`${base}/fetch`, { mode: 'no-cors' }).catch(() => undefined),
          () => Object.assign(new Image(), { src: `${base}/image` }),
          () => new WebSocket(`${base.replace('http', 'ws')}/socket`),
          () => new EventSource(`${base}/event-source`),
          () => navigator.sendBeacon(`${base}/beacon`, 'x'),
          () => document.body.append(Object.assign(document.createElement('script'), { src: `${base}/script` })),
          () => document.head.append(Object.assign(document.createElement('link'), { rel: 'stylesheet', href: `${base}/style` })),
          () => document.body.append(Object.assign(document.createElement('iframe'), { src: `${base}/frame` })),
          () => new Worker(URL.createObjectURL(new Blob([`fetch(${JSON.stringify(`${base}/worker-fetch`)}, { mode: 'no-cors' })`]))),
        ];
        for (const attempt of attempts) {
          try {
            await attempt();
          } catch {
            // Refused outright, which is as good.
          }
        }
        await new Promise((resolve) => setTimeout(resolve, 1500));
      }, `http://127.0.0.1:${port}`);
    }
  });
}
