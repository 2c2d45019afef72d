import type { Context } from 'hono';
import { judgeHours } from '../../lib/brief/judge-hours.ts';
import { parseAssessRequest } from '../../lib/config/assess-request.ts';
import type { LimitSheet } from '../../lib/margin/sheet.ts';
import type { Site } from '../../lib/site.ts';
import type { DeskServices } from '../service-set.ts';
import { jsonBody } from './body.ts';
import { limiter } from './limiter.ts';
import { json, problem } from './problem.ts';

const MAX_BODY_BYTES = 256 * 1024;

const assessLimit = limiter(300);

/** Judges the hours that the caller gives. Nothing is stored. */
export async function assess(services: DeskServices, c: Context): Promise<Response> {
  if (!services.settings.local) {
    const waitS = assessLimit.take(c.req.header('cf-connecting-ip') ?? 'unknown', services.clock.nowMs());
    if (waitS > 0) return problem('too-many', { detail: '300 requests a minute are answered', headers: { 'retry-after': String(waitS) } });
  }
  const body = await jsonBody(c.req.raw, MAX_BODY_BYTES);
  if (!body.ok) return body.error;
  const { sites, sheets } = await namedIn(services, body.value);
  const request = parseAssessRequest(body.value, { sites, sheets, wingClasses: services.wingClasses(), nowMs: services.clock.nowMs() });
  return request.ok ? json(judgeHours(request.value)) : problem('bad-input', { problems: request.error });
}

/** Reads the tables only for what a request names by its id. */
async function namedIn(services: DeskServices, body: unknown): Promise<{ sites: Site[]; sheets: LimitSheet[] }> {
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
