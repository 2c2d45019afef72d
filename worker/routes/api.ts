import { Hono } from 'hono/tiny';
import { CLOSING, INVENTED, siteBlock, siteSentence } from '../../lib/brief/words/index.ts';
import { READER } from '../morning/message.ts';
import type { Services } from '../service-set.ts';
import { pageServices } from '../web/page-data.ts';
import { API_HEADERS, json, problem } from './problem.ts';

/** The interface for programs. Nothing here stores anything. */
export function api(services: Services): Hono {
  const app = new Hono();

  app.get('/sites', async () => {
    const rows = await services.stores.site.all();
    return json({ type: 'FeatureCollection', features: rows.map((row) => JSON.parse(row.feature) as unknown) }, { type: 'application/geo+json' });
  });

  app.get('/sites/:id/days/:date', async (c) => {
    const asked = (name: string): string | null => c.req.query(name) || null;
    const found = await pageServices(services).day({ siteId: c.req.param('id'), date: c.req.param('date'), wing: asked('wing'), sheet: asked('sheet') });
    switch (found.kind) {
      case 'no-site': return problem('not-found', { detail: 'no site has this id' });
      case 'bad-query': return problem('bad-input', { detail: found.problems.join(' ') });
      case 'day': {
        const { day } = found;
        if (/^text\/plain\b/.test(c.req.header('accept') ?? '')) {
          return new Response(`${siteBlock(day, READER)}\n\n${CLOSING}\n`, { headers: { 'content-type': 'text/plain; charset=utf-8', vary: 'accept', ...API_HEADERS } });
        }
        const notice = day.demo ? `${INVENTED}. ${CLOSING}` : CLOSING;
        return json({ ...day, sentence: siteSentence(day, READER), notice }, { headers: { vary: 'accept' } });
      }
    }
  });

  return app;
}
