/** The plan on a page and on paper: what it could not do first, then each group, then what stands with every verdict. */
import { capital, cautionSentences, hourName, placeName, plainText, provenance, type Reader } from '../../../lib/brief/words/index.ts';
import { instantsOf } from '../../../lib/plan/blocks.ts';
import type { PlanNotice } from '../../../lib/plan/changes.ts';
import type { Block, DayPlan, GroupPlan, SiteDay } from '../../../lib/plan/day-plan.ts';
import { blockReason, blockSentence, groupName, ifLostSentence, leftOutSentence, moveWords, nextBestSentence, noticeSentence, planSentence } from '../../../lib/plan/words/index.ts';
import { localDateTime, epochOf } from '../../../lib/time.ts';
import { html, type Html } from '../html.ts';

/** Blocks that fit on a sheet of A4 in the larger print. */
const MOST_ROOMY = 8;

export interface PlanViewOptions {
  readonly reader: Reader;
  readonly notices: readonly PlanNotice[];
  /** Where the downloads of this plan are; null for a plan that is not kept. */
  readonly link: string | null;
}

export function planView(plan: DayPlan, { reader, notices, link }: PlanViewOptions): Html {
  const isDense = plan.groups.reduce((sum, { blocks }) => sum + Math.max(1, blocks.length), 0) > MOST_ROOMY;
  return html`<section class="plan${isDense ? ' dense' : ''}" data-valid-until="${plan.validUntil ?? plan.asOf ?? ''}" aria-label="The plan">
${notices.length === 0 ? null : html`<section class="cautions" aria-labelledby="turned-h"><h2 id="turned-h">Turned since this plan was made</h2><ul>${notices.map((notice) => html`<li>${noticeSentence(notice, plan, reader)}</li>`)}</ul></section>`}
<p class="day">${plan.demo ? html`<span class="tag">Invented weather.</span> ` : null}${planSentence(plan)}</p>
<p class="hint">Spares of unlike margins are compared in close bands: 0.5 m/s, 30 m, 5°, 15 minutes and their like.</p>
${plan.groups.map((group) => groupEntry(group, plan, reader))}
<p class="plan-next">${nextBestSentence(plan)}</p>
${plan.ifLost.length === 0 ? null : html`<details class="plan-lose"><summary>When an hour is lost</summary><ul>${plan.ifLost.map((lost) => html`<li>${ifLostSentence(lost, plan)}</li>`)}</ul></details>`}
${siteDays(plan, reader)}
${link === null ? null : html`<p class="back"><a href="${link}/plan.csv" download>As a table (CSV)</a> · <a href="${link}/plan.ics" download>As a calendar</a></p>`}</section>`;
}

function groupEntry(group: GroupPlan, plan: DayPlan, reader: Reader): Html {
  const day = plan.siteDays.find(({ wingKey, sheetId }) => wingKey === group.wing && sheetId === group.sheet);
  const body = group.leftOut !== null ? html`<p class="plan-none">${leftOutSentence(group, plan, reader)}</p>` : group.blocks.map((block) => blockEntry(block, plan, reader));
  return html`<article class="entry"><div class="margin"><h2>${groupName(group.name)}</h2><p class="aside">${group.wing} <br>${plainText(day?.sheetName ?? group.sheet)}</p></div><div class="body">${body}</div></article>`;
}

function blockEntry(block: Block, plan: DayPlan, reader: Reader): Html {
  const way = moveWords(block);
  return html`<div class="plan-block">${way === null ? null : html`<p class="plan-way">${way}</p>`}<p class="plan-when">${blockSentence(block, plan.timeZone)}</p><p class="plan-why">${blockReason(block, plan.timeZone, reader)}</p>
<p class="hint plan-out">${instantsOf(block).slice(0, -1).map((at) => html`<button form="plan-form" name="lose" value="${block.site} ${localDateTime(epochOf(at), plan.timeZone).hour}" aria-label="Take out ${hourName(at, plan.timeZone)} at ${placeName({ name: block.siteName, id: block.site })}">Take out ${hourName(at, plan.timeZone)}</button> `)}</p></div>`;
}

/** Cautions, rules and ages, a site at a time; what several sheets share is said once. */
function siteDays(plan: DayPlan, reader: Reader): Html {
  const sites = [...new Set(plan.siteDays.map(({ siteId }) => siteId))];
  return html`<div class="plan-sites">${sites.map((id) => siteEntry(plan.siteDays.filter(({ siteId }) => siteId === id), plan, reader))}</div>`;
}

function siteEntry(days: readonly SiteDay[], plan: DayPlan, reader: Reader): Html | null {
  const [first] = days;
  if (first === undefined) return null;
  const said = new Map<string, string[]>();
  for (const day of days) {
    const names = plan.groups.filter(({ wing, sheet }) => wing === day.wingKey && sheet === day.sheetId).map(({ name }) => groupName(name));
    for (const caution of cautionSentences(day.cautions, day, reader)) said.set(caution, [...(said.get(caution) ?? []), ...names]);
  }
  const all = new Set(days.flatMap((day) => plan.groups.filter(({ wing, sheet }) => wing === day.wingKey && sheet === day.sheetId).map(({ name }) => groupName(name)))).size;
  const cautions = [...said].map(([caution, names]) => html`<li>${new Set(names).size < all ? `${[...new Set(names)].join(', ')}: ` : ''}${caution}</li>`);
  const ages = [...new Set(days.map((day) => provenance(day)))];
  return html`<section class="cautions"><h3>${placeName({ name: first.siteName, id: first.siteId })}</h3>${cautions.length === 0 ? null : html`<ul aria-label="Cautions">${cautions}</ul>`}
${first.localRules === null ? null : html`<p class="rules"><strong>Local rules:</strong> ${plainText(first.localRules, 300)}</p>`}${ages.map((age) => html`<p class="ages">${capital(age)}</p>`)}</section>`;
}
