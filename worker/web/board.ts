/** The board: a line of words a site, its columns of airspeed small beside it, windows, cautions, ages. */
import type { JudgedDay } from '../../lib/brief/day.ts';
import {
  briefTitle, credits, dateName, EXPIRED, inBriefOrder, placeName, plainText, provenance, type Reader,
} from '../../lib/brief/words/index.ts';
import { isoUtc, localDate } from '../../lib/time.ts';
import { html, type Html } from './html.ts';
import { layout } from './layout.ts';
import type { BoardSite } from './page-services.ts';
import { columnsPicture, SMALL } from './pictures/columns.ts';
import { hourScale } from './pictures/runs.ts';
import { cautionItems, dayLine, tied, windowLines } from './sentences.ts';
import { address, unitsPart } from './units-query.ts';

export function isExpired(day: Pick<JudgedDay, 'validUntil'>, now: Date): boolean {
  const until = Date.parse(day.validUntil);
  // A brief that does not say how long it holds does not hold.
  return Number.isNaN(until) || now.getTime() >= until;
}

function dayHref(day: JudgedDay, reader: Reader): string {
  return address(`/sites/${encodeURIComponent(day.siteId)}`, { date: day.localDate, wing: day.wingKey, sheet: day.sheetId, ...unitsPart(reader.units) });
}

function siteHead(day: JudgedDay, reader: Reader): Html {
  return html`<h2><a href="${dayHref(day, reader)}">${placeName({ name: day.siteName, id: day.siteId })}</a></h2>
<p class="aside"><span>${dateName(day.localDate, 'short')}</span> <span>${plainText(day.wingName)}</span> <span>${plainText(day.sheetName)}</span></p>`;
}

function entry(day: JudgedDay, options: { readonly reader: Reader; readonly now: Date; readonly id: string }): Html {
  const { reader, now, id } = options;
  if (isExpired(day, now)) {
    return html`<article class="entry"><div class="margin">${siteHead(day, reader)}</div><div class="say"><p class="day">${EXPIRED}</p></div></article>`;
  }
  const cautions = cautionItems(day.cautions, day, reader);
  const picture = day.hours.length === 0 ? null : html`<div class="small">${columnsPicture(day, reader, { size: SMALL, id })}${hourScale(day)}</div>`;
  return html`<article class="entry" data-valid-until="${day.validUntil}" data-issued-at="${day.issuedAt}"><div class="margin">${siteHead(day, reader)}</div><div class="say">
${dayLine(day, reader)}${windowLines(day)}</div>${picture}
${cautions.length === 0 ? null : html`<div class="heed"><h3 id="${id}-h">Cautions</h3> <ul class="cautions" aria-labelledby="${id}-h">${cautions}</ul></div>`}
<div class="notes">${day.localRules === null ? null : html`<p class="rules">${plainText(day.localRules, 300)}</p>`}
<p class="ages">${tied(provenance(day))}</p></div></article>`;
}

/** A site without a brief is a day of which nothing can be said, in the title as on the page. */
function silentDay(site: BoardSite, now: Date): JudgedDay {
  return {
    siteId: site.siteId, siteName: site.siteName, kind: site.kind, timeZone: site.timeZone, localDate: localDate(now.getTime(), site.timeZone),
    wingKey: '', wingName: '', sheetId: '', sheetName: '', sheetVersion: 0, issuedAt: isoUtc(now.getTime()), validUntil: isoUtc(now.getTime()), demo: false,
    legalDay: { none: 'no brief has been made for this morning yet' }, verdict: 'unknown', cause: null, windows: [], hours: [], sources: [], cautions: [],
    notJudged: [], localRules: null,
  };
}

function notMade(day: JudgedDay): Html {
  const name = placeName({ name: day.siteName, id: day.siteId });
  return html`<article class="entry"><div class="margin"><h2><a href="/sites/${encodeURIComponent(day.siteId)}">${name}</a></h2></div>
<div class="say"><p class="day">Cannot say: no brief has been made for this morning yet.</p></div></article>`;
}

export function boardPage(sites: readonly BoardSite[], options: { readonly reader: Reader; readonly now: Date }): string {
  const { reader, now } = options;
  const days = inBriefOrder(sites.flatMap((site) => site.days));
  const valid = days.filter((day) => !isExpired(day, now));
  const [first] = days;
  const missing = sites.filter((site) => site.days.length === 0).map((site) => silentDay(site, now));
  const told = [...valid, ...missing, ...days.filter((day) => isExpired(day, now)).map((day): JudgedDay => ({ ...day, verdict: 'unknown', hours: [], windows: [] }))];
  const body = html`<div class="top"><h1>${first === undefined ? 'No site yet' : dateName(first.localDate)}</h1>
<p class="lede">What is left of the airspeed this morning, once wind, gust and reserve are paid.</p></div>
${missing.map(notMade)}${days.map((day, index) => entry(day, { reader, now, id: `c${index}` }))}
${sites.length === 0 ? html`<p class="day">Cannot say: no site is set up.</p>` : null}`;
  return layout({
    title: `${briefTitle(told)} - Dawnmargin`,
    description: 'Margins of the morning for every launch and strip: wind, gusts, glide, thermals, rain and daylight against the limits of a sheet.',
    body, demo: days.some((day) => day.demo), credits: creditsOf(days), keep: address('', unitsPart(reader.units)),
  });
}

export function creditsOf(days: readonly JudgedDay[]): { readonly text: string; readonly href: string }[] {
  const all = days.flatMap((day) => credits(day));
  return all.filter((credit, index) => all.findIndex(({ href }) => href === credit.href) === index);
}
