import { Hono } from 'hono';
import { judgeHours } from '../../lib/brief/judge-hours.ts';
import { CLOSING, INVENTED, siteBlock, siteSentence } from '../../lib/brief/words/index.ts';
import { parseAssessRequest } from '../../lib/config/assess-request.ts';
import type { LimitSheet } from '../../lib/margin/sheet.ts';
import type { Site } from '../../lib/site.ts';
import { READER } from '../morning/message.ts';
import type { Services } from '../service-set.ts';
import { pageServices } from '../web/page-data.ts';
import { jsonBody } from './body.ts';
import { limiter } from './limiter.ts';
import { API_HEADERS, json, problem } from './problem.ts';

/** The interface for programs. Nothing here stores anything. */
const MAX_BODY_BYTES = 256 * 1024;

const assessLimit = limiter(300);

export function api(services: Services): Hono {
  const app = new Hono();

  app.post('/assess', async (c) => {
    if (!services.settings.local) {
      const waitS = assessLimit.take(c.req.header('cf-connecting-ip') ?? 'unknown', services.clock.nowMs());
      if (waitS > 0) return problem('too-many', { detail: '300 requests a minute are answered', headers: { 'retry-after': String(waitS) } });
    }
    const body = await jsonBody(c.req.raw, MAX_BODY_BYTES);
    if (!body.ok) return body.error;
    const { sites, sheets } = await namedIn(services, body.value);
    const request = parseAssessRequest(body.value, { sites, sheets, wingClasses: services.wingClasses(), nowMs: services.clock.nowMs() });
    return request.ok ? json(judgeHours(request.value)) : problem('bad-input', { problems: request.error });
  });

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

/** Reads the tables only for what a request names by its id. */
async function namedIn(services: Services, body: unknown): Promise<{ sites: Site[]; sheets: LimitSheet[] }> {
  const part = (name: string): object => {
    const value = typeof body === 'object' && body !== null ? (body as Record<string, unknown>)[name] : null;
    return typeof value === 'object' && value !== null ? value : {};
  };
  const sites = 'geometry' in part('site') ? [] : await services.stores.site.all();
  const sheets = 'limits' in part('sheet') ? [] : await services.stores.sheet.newest();
  const stored = sheets.flatMap((row) => { const sheet = services.read.sheet(row); return sheet.ok ? [sheet.value] : []; });
  const rows = new Set(sheets.map(({ id }) => id));
  return {
    sites: sites.flatMap((row) => { const place = services.read.site(row); return place.ok ? [place.value.site] : []; }),
    // A sheet of the operator's, readable or not, is never stood in for by the shipped one of its id.
    sheets: [...stored, ...services.shippedSheets().filter(({ id }) => !rows.has(id))],
  };
}
