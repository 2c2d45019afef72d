/** The day of one site: first the sentence that says it, then the columns, the cautions, and one hour in full. */
import type { JudgedDay, JudgedHour } from '../../lib/brief/day.ts';
import {
  briefTitle, capital, causeClause, dateName, EXPIRED, hourName, placeName, plainText, provenance, sentence, verdictPhrase, type Reader,
} from '../../lib/brief/words/index.ts';
import { tightestFirst } from '../../lib/brief/tightest.ts';
import { creditsOf, isExpired } from './board.ts';
import { chosenHour } from './chosen-hour.ts';
import { chooseForm } from './choose-form.ts';
import { hoursTable } from './hours-table.ts';
import { html, type Html, type Piece } from './html.ts';
import { layout } from './layout.ts';
import { marginsList } from './margins-list.ts';
import type { Choices, HourDetail } from './page-services.ts';
import { columnsPicture, LARGE } from './pictures/columns.ts';
import { columnsKey } from './pictures/key.ts';
import { hourPictures } from './pictures/hour-pictures.ts';
import { hourLinks, verdictRuns } from './pictures/runs.ts';
import { cautionItems, dayLine, tied, windowLines } from './sentences.ts';
import { stripHours } from './strip-hours.ts';
import { sourcesSection } from './sources-section.ts';
import { whatIfForm } from './what-if-form.ts';
import { address, unitsPart } from './units-query.ts';

/** Causes said in sentences over the pictures; every margin stands below them. */
const MOST_CAUSES = 4;

export interface DayPageOptions {
  readonly reader: Reader;
  readonly now: Date;
  /** The hour asked for, ISO 8601 UTC; null for the one that limits the day. */
  readonly hour: string | null;
  readonly detail: (hour: JudgedHour) => HourDetail;
  readonly choices: Choices;
}

function hourHref(day: JudgedDay, hour: JudgedHour, reader: Reader): string {
  return address(`/sites/${encodeURIComponent(day.siteId)}`, {
    date: day.localDate, wing: day.wingKey, sheet: day.sheetId, hour: hour.validAt, ...unitsPart(reader.units),
  }, '#hour');
}

function cautionsSection(day: JudgedDay, reader: Reader): Piece {
  const list = cautionItems(day.cautions, day, reader);
  if (list.length === 0) return null;
  return html`<section aria-labelledby="cautions-h"><h2 id="cautions-h">Cautions</h2><ul class="cautions">${list}</ul></section>`;
}

function columnsSection(day: JudgedDay, chosen: JudgedHour, reader: Reader): Html {
  return html`<figure class="airspeed">${columnsPicture(day, reader, { size: LARGE, id: 'col' })}
${hourLinks(day, { chosen: chosen.validAt, href: (hour) => hourHref(day, hour, reader) })}${verdictRuns(day)}
<figcaption>${columnsKey(day, reader)}</figcaption>${hoursTable(day, reader)}</figure>`;
}

function causesOf(hour: JudgedHour, reader: Reader): Piece {
  const causes = hour.causes.map((id) => hour.margins.find((margin) => margin.id === id)).filter((margin) => margin !== undefined);
  const own = tightestFirst(causes.filter(({ status }) => status === hour.verdict));
  if (own.length === 0) return null;
  const more = own.length - MOST_CAUSES;
  return html`<ul class="causes">${own.slice(0, MOST_CAUSES).map((margin) => html`<li>${tied(sentence(causeClause(margin, reader)))}</li>`)}${more > 0 ? html`<li>And ${more} more, below.</li>` : null}</ul>`;
}

function hourSection(day: JudgedDay, hour: JudgedHour, options: DayPageOptions): Html {
  const { reader } = options;
  const detail = options.detail(hour);
  return html`<section id="hour" class="hour" aria-labelledby="hour-h"><h2 id="hour-h">${capital(verdictPhrase(hour.verdict))} at ${hourName(hour.validAt, day.timeZone)}</h2>
${causesOf(hour, reader)}${hourPictures(day, hour, detail, reader)}
<h3>Margins, tightest first</h3><p class="hint">Open a margin for its working.</p>${marginsList(hour, detail, reader)}
<h3 class="if">What if</h3><p class="hint">Your numbers for this hour; what you leave empty is the forecast’s.</p>${whatIfForm(day, { reader, hour: hour.validAt, given: detail.given ?? {}, typed: {} })}</section>`;
}

function marginalia(day: JudgedDay): Html {
  return html`<p class="aside"><span>${dateName(day.localDate)}</span> <span>${plainText(day.wingName)}</span> <span>${plainText(day.sheetName)}, version ${day.sheetVersion}</span></p>`;
}

function judged(day: JudgedDay, options: DayPageOptions): Html {
  const { reader } = options;
  const hour = chosenHour(day, options.hour);
  return html`<div class="judged" data-valid-until="${day.validUntil}" data-issued-at="${day.issuedAt}">
${dayLine(day, reader)}${windowLines(day)}<p class="ages">${tied(provenance(day))}</p>
${hour === null ? null : columnsSection(day, hour, reader)}${cautionsSection(day, reader)}
${day.localRules === null ? null : html`<p class="rules"><strong>Local rules:</strong> ${plainText(day.localRules, 300)}</p>`}
${stripHours(day, reader)}${hour === null ? null : hourSection(day, hour, options)}${sourcesSection(day, hour, reader)}</div>`;
}

export function dayPage(day: JudgedDay, options: DayPageOptions): string {
  const expired = isExpired(day, options.now);
  const name = placeName({ name: day.siteName, id: day.siteId });
  const hour = chosenHour(day, options.hour);
  const body = html`<article class="site"><div class="margin"><h1>${name}</h1>${marginalia(day)}</div><div class="body">
${expired ? html`<p class="day">${EXPIRED}</p>` : judged(day, options)}
<section aria-labelledby="choose-h"><h2 id="choose-h">Another wing, sheet or unit</h2>${chooseForm(day, options.choices, { reader: options.reader, hour: hour?.validAt ?? '' })}</section></div></article>`;
  return layout({
    title: expired ? `Expired - ${name} - Dawnmargin` : `${briefTitle([day])} - Dawnmargin`,
    description: `The morning margins of ${name}: hour by hour what wind, gusts, glide, thermals, rain and daylight leave against the limits of a sheet.`,
    body, demo: day.demo, credits: creditsOf([day]), keep: address('', unitsPart(options.reader.units)),
  });
}
