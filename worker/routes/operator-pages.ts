/** The desk of whoever runs this service: signed in with the operator token, good for an hour. GET changes nothing. */
import type { Context } from 'hono';
import { Hono } from 'hono/tiny';
import { WING_CLASSES } from '../../lib/config/wing.ts';
import { ownData } from '../own-data.ts';
import type { DeskServices } from '../service-set.ts';
import { textIn } from '../web/forms/wishes.ts';
import { signInPage } from '../web/operator/frame.ts';
import { homePage } from '../web/operator/home-page.ts';
import { rehearse } from '../web/operator/rehearsal.ts';
import { rehearsalPage } from '../web/operator/rehearsal-page.ts';
import { page } from './forms.ts';
import { formOf, sitesAndSheets } from './forms-data.ts';
import { canSignIn, isOwnForm, sessionOf, signedOut, signIn } from './operator-session.ts';
import { allSheets, copiedSheet, oneSheet } from './operator-sheets.ts';
import { board, exported, imported, importStart, newSite, oneSite, sentSite, type Visit } from './operator-sites.ts';
import { status } from './operator-status.ts';
import { seeOther, shown } from './page-answers.ts';

const MAX_FORM_BYTES = 300 * 1024;

function nothing(): Response {
  return shown(page('There is nothing here', null), 404);
}

export function operatorPages(services: DeskServices): Hono {
  const app = new Hono();

  /** A page for who is signed in; everybody else is led to the sign-in. */
  const visited = (look: (visit: Visit, c: Context) => Promise<Response | null>) => async (c: Context): Promise<Response> => {
    const session = await sessionOf(services, c.req.raw);
    if (session === null) return seeOther('/operator/sign-in');
    return (await look({ services, stamp: session.stamp, said: c.req.query('said') ?? null }, c)) ?? nothing();
  };

  /** A form of a page of this session, and of no other. */
  const sent = (act: (visit: Visit, form: FormData, c: Context) => Promise<Response | null>) => async (c: Context): Promise<Response> => {
    const session = await sessionOf(services, c.req.raw);
    if (session === null) return seeOther('/operator/sign-in');
    const form = await formOf(c.req.raw, MAX_FORM_BYTES);
    if (form === null) return shown(page('This was not understood', 'A form of at most 300 kB is read.'), 400);
    if (!(await isOwnForm(services, session, c.req.raw, form))) return shown(page('Not from here', 'This form was not sent by a page that you have open here.'), 403);
    return (await act({ services, stamp: session.stamp, said: null }, form, c)) ?? nothing();
  };
  const id = (c: Context): string => c.req.param('id') ?? '';

  app.get('/sign-in', () => shown(signInPage({ said: null, isPossible: canSignIn(services) })));
  app.post('/sign-in', async (c) => {
    const form = canSignIn(services) ? await formOf(c.req.raw) : null;
    const made = form === null ? null : await signIn(services, c.req.raw, textIn(form, 'token'));
    if (typeof made === 'string') return seeOther('/operator', { 'set-cookie': made });
    const isTooMany = made?.status === 429;
    return shown(signInPage({ said: isTooMany ? 'Too many wrong tokens. Try again in a minute.' : 'This is not the token.', isPossible: canSignIn(services) }), isTooMany ? 429 : 401);
  });
  app.post('/sign-out', sent(async () => seeOther('/operator/sign-in', { 'set-cookie': signedOut(services) })));

  app.get('/', visited(home));
  for (const kind of ['launch', 'strip'] as const) {
    app.get(`/new/${kind}`, visited((visit) => newSite(visit, kind)));
    app.post(`/new/${kind}`, sent((visit, form) => sentSite(visit, { id: null, kind }, form)));
  }
  app.get('/sites/:id', visited((visit, c) => oneSite(visit, id(c))));
  app.post('/sites/:id', sent((visit, form, c) => sentSite(visit, { id: id(c), kind: 'launch' }, form)));
  app.get('/sites/:id/rehearse', visited(rehearsed));
  app.post('/board', sent(board));
  app.get('/sites.geojson', visited(() => exported(services)));
  app.get('/import', visited(importStart));
  app.post('/import', sent(imported));
  app.get('/sheets', visited(allSheets));
  app.get('/sheets/:id', visited((visit, c) => oneSheet(visit, id(c), null)));
  app.post('/sheets/:id', sent((visit, form, c) => oneSheet(visit, id(c), form)));
  app.get('/sheets/:id/copy', visited((visit, c) => copiedSheet(visit, id(c), null)));
  app.post('/sheets/:id/copy', sent((visit, form, c) => copiedSheet(visit, id(c), form)));
  app.get('/status', visited(status));
  return app;
}

const SAID: Readonly<Record<string, string>> = { retired: 'Retired. Its briefs stay.', imported: 'Taken in. From the next brief on these sites count.' };

async function home({ services, stamp, said }: Visit): Promise<Response> {
  const [rows, published] = await Promise.all([services.stores.site.all(), services.stores.published.all()]);
  const sites = rows.map((row) => { const place = services.read.site(row); return { id: row.id, site: place.ok ? place.value.site : null, demo: row.demo }; });
  return shown(homePage({ title: 'Sites', stamp, said: said === null ? null : (SAID[said] ?? null), sites, published }));
}

async function rehearsed({ services, stamp }: Visit, c: Context): Promise<Response | null> {
  const { sites, sheets } = await sitesAndSheets(services);
  const site = sites.find((known) => known.id === c.req.param('id'));
  if (site === undefined) return null;
  const fitting = sheets.filter(({ kind }) => kind === site.kind);
  const sheet = fitting.find((known) => known.id === (c.req.query('sheet') ?? (site.kind === 'launch' ? 'descent-new' : 'solo-tow'))) ?? fitting[0];
  const wingKey = WING_CLASSES.find((known) => known === c.req.query('wing')) ?? 'EN B';
  if (sheet === undefined) return null;
  const rehearsal = rehearse(site, { wing: services.wingClasses()[wingKey], wingKey, sheet, scenario: ownData.demo(), thresholds: services.thresholds(), judge: services.judge, nowMs: services.clock.nowMs() });
  return shown(rehearsalPage({ title: 'Invented weather: rehearsed brief', stamp, rehearsal, sheets, action: `/operator/sites/${encodeURIComponent(site.id)}/rehearse` }));
}
