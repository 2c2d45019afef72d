/** What the operator may do: sites, sheets, the pairs on the board, and forgetting a person. */
import { Hono } from 'hono/tiny';
import { check, issue } from '../../lib/config/check.ts';
import { forgetSchema, parsePairs } from '../../lib/config/operator.ts';
import { parseSites } from '../../lib/config/sites.ts';
import { mailAddress } from '../security/mail-address.ts';
import { operatorRefusal } from '../security/operator.ts';
import { ownerOf } from '../security/owner.ts';
import { shippedRows } from '../security/subscribe.ts';
import { base64, derivedKey, sameText, sha256Hex } from '../secrets.ts';
import type { DeskServices } from '../service-set.ts';
import type { StoredSite } from '../store/site.ts';
import { jsonBody } from './body.ts';
import { sitesAndSheets } from './forms-data.ts';
import { approvalOf, nextSheet } from './next-sheet.ts';
import { json, problem } from './problem.ts';
import { staleness } from './staleness.ts';

const MAX_BODY_BYTES = 256 * 1024;

/** `refusal`: the pages of the operator go by their own session. */
export function operator(services: DeskServices, refusal: typeof operatorRefusal = operatorRefusal): Hono {
  const { stores, clock } = services;
  const app = new Hono();

  /** The second key is good for this alone. */
  app.post('/sheets/:id/approval', async (c) => {
    const { secondTokenSha256, linkKey } = services.settings;
    const refused = await operatorRefusal(services, c.req.raw, secondTokenSha256);
    if (refused !== null || linkKey === null) return refused ?? problem('unusable');
    const next = await nextSheet(services, c.req.param('id'), c.req.raw);
    return next.ok ? json({ version: next.value.version, changes: next.value.changes, approval: await approvalOf(services, c.req.param('id'), next.value) }) : next.error;
  });

  app.use(async (c, next) => (await refusal(services, c.req.raw)) ?? next());

  app.get('/sites', async () => {
    const rows = await stores.site.all();
    return json(collection(rows), { type: 'application/geo+json', headers: { etag: await etagOf(rows) } });
  });

  /** These are the sites from now on. Whoever did not read the newest writes nothing. */
  app.put('/sites', async (c) => {
    const rows = await stores.site.all();
    const stale = await staleness(c.req.header('if-match'), await etagOf(rows));
    if (stale !== null) return stale;
    const body = await jsonBody(c.req.raw, MAX_BODY_BYTES);
    if (!body.ok) return body.error;
    const sites = parseSites(body.value, { nowMs: clock.nowMs() });
    if (!sites.ok) return problem('bad-input', { problems: sites.error });
    const demo = new Set(rows.filter((row) => row.demo).map(({ id }) => id));
    const { features } = body.value as { readonly features: readonly { readonly id: string }[] };
    await stores.db.together(stores.site.replaceAll(features.map((feature) => ({ id: feature.id, feature: JSON.stringify(feature), demo: demo.has(feature.id) })), clock.nowMs()));
    const after = await stores.site.all();
    return json(collection(after), { type: 'application/geo+json', headers: { etag: await etagOf(after) } });
  });

  app.get('/sheets', async () => json((await sitesAndSheets(services)).sheets));

  app.get('/sheets/:id', async (c) => {
    const [row] = await stores.sheet.newestOf([c.req.param('id')]);
    if (row === undefined) return problem('not-found', { detail: 'no sheet of this id is stored' });
    return json({ sheet: JSON.parse(row.body) as unknown, history: await stores.sheetHistory.of(row.id) }, { headers: { etag: `"${row.version}"` } });
  });

  /** A new version: what it changes and what of it loosens is kept, answered, and told to everyone held to it. */
  app.put('/sheets/:id', async (c) => {
    const id = c.req.param('id');
    const next = await nextSheet(services, id, c.req.raw);
    if (!next.ok) return next.error;
    const { version, body, against, changes, loosens } = next.value;
    const approval = services.settings.secondTokenSha256 !== null && loosens ? ((await approvalOf(services, id, next.value)) ?? 'none') : null;
    if (approval !== null && (approval === 'none' || !(await sameText(c.req.header('approval') ?? '', approval)))) {
      return problem('unapproved', { detail: `it lets more pass than before: whoever holds the second key asks for the approval of the same sheet, by POST to /api/v1/operator/sheets/${id}/approval; then send it with the header approval` });
    }
    const nowMs = clock.nowMs();
    await stores.db.together([
      stores.sheet.put([{ id, version, body }], nowMs),
      // Nobody is held to a first version yet: what it lets pass beyond the one it was made from is nothing to be told of.
      stores.sheetHistory.add({ sheetId: id, version, against, changes: against === null ? [] : changes, storedAtMs: nowMs }),
    ]);
    await stores.log.write([{ level: loosens ? 'warning' : 'info', step: 'operator', event: 'sheet-changed', detail: { sheet: id, version, loosened: changes.filter((change) => change.loosens).length } }], nowMs);
    return json({ id, version, changes }, { headers: { etag: `"${version}"` } });
  });

  app.get('/published', async () => json((await stores.published.all()).map(({ siteId, wingKey, sheetId }) => ({ site: siteId, wing: wingKey, sheet: sheetId }))));

  app.put('/published', async (c) => {
    const body = await jsonBody(c.req.raw, MAX_BODY_BYTES);
    if (!body.ok) return body.error;
    const known = await sitesAndSheets(services);
    const pairs = parsePairs(body.value, known);
    if (!pairs.ok) return problem('bad-input', { problems: pairs.error });
    const wings = [...new Set(pairs.value.map(({ wing }) => wing))].map((key) => ({ key, name: key, body: JSON.stringify({ class: key }) }));
    const shipped = shippedRows(services, pairs.value.map(({ sheet }) => sheet));
    await stores.db.together([stores.wing.put(wings), ...(shipped.length === 0 ? [] : [stores.sheetHistory.putNew(shipped, clock.nowMs())]), ...stores.published.replaceAll(pairs.value.map(({ site, wing, sheet }) => ({ siteId: site, wingKey: wing, sheetId: sheet })))]);
    return json(pairs.value);
  });

  /** The same answer whether or not there was somebody. */
  app.post('/forget', async (c) => {
    const body = await jsonBody(c.req.raw, MAX_BODY_BYTES);
    if (!body.ok) return body.error;
    const asked = check(forgetSchema(), body.value, []);
    if (!asked.ok) return problem('bad-input', { problems: asked.error });
    const { linkKey } = services.settings;
    const address = mailAddress(asked.value.address);
    if (!('is' in address) || linkKey === null) return problem('bad-input', { problems: [issue(['address'], 'not shown', { problem: 'problem' in address ? address.problem : 'LINK_KEY is missing', allowed: 'name@domain' })] });
    const owner = await ownerOf(linkKey, address.is);
    const id = await stores.subscription.idOfOwner(owner);
    await stores.db.together([
      ...(id === null ? [] : stores.subscription.erase(id)), ...stores.signup.forget(owner),
      ...(asked.value.forGood === true ? [stores.suppression.add(owner, 'forgotten', clock.nowMs())] : []),
    ]);
    return json({ state: 'forgotten' });
  });

  /** With this secret the mail service's bounces are signed (Standard Webhooks). */
  app.get('/bounce-secret', async () => {
    const { linkKey } = services.settings;
    if (linkKey === null) return problem('unusable');
    return json({ secret: `whsec_${base64(await derivedKey(linkKey, { purpose: 'bounce', id: 'mail', version: 1 }))}` });
  });

  return app;
}

function collection(rows: readonly StoredSite[]): unknown {
  return { type: 'FeatureCollection', features: rows.map((row) => JSON.parse(row.feature) as unknown) };
}

async function etagOf(rows: readonly StoredSite[]): Promise<string> {
  return `"${(await sha256Hex(JSON.stringify(rows.map(({ feature }) => feature)))).slice(0, 32)}"`;
}
