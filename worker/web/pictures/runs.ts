/** What stands under the columns: the hours, and the verdicts in words, once for a run of equal hours. */
import type { JudgedDay, JudgedHour } from '../../../lib/brief/day.ts';
import { hourName, hourSpan, verdictPhrase } from '../../../lib/brief/words/index.ts';
import { html, type Html } from '../html.ts';

interface Run {
  readonly first: JudgedHour;
  readonly last: JudgedHour;
  readonly count: number;
}

function runsOf(hours: readonly JudgedHour[]): Run[] {
  const runs: Run[] = [];
  for (const hour of hours) {
    const run = runs.at(-1);
    if (run !== undefined && run.first.verdict === hour.verdict) runs[runs.length - 1] = { ...run, last: hour, count: run.count + 1 };
    else runs.push({ first: hour, last: hour, count: 1 });
  }
  return runs;
}

/** So many hours that a phone has no room for a word under two of them. */
function crowd(day: JudgedDay): string {
  return day.hours.length > 11 ? ' many' : '';
}

export function verdictRuns(day: JudgedDay): Html {
  return html`<ol class="runs${crowd(day)}">${runsOf(day.hours).map(({ first, last, count }) => html`<li class="s${count} v-${first.verdict}"><span class="off">${hourSpan({ from: first.validAt, to: last.validAt }, day.timeZone)} </span>${verdictPhrase(first.verdict)}</li>`)}</ol>`;
}

/** The hours as links that choose one; the chosen one is marked. */
export function hourLinks(day: JudgedDay, options: { readonly chosen: string; readonly href: (hour: JudgedHour) => string }): Html {
  return html`<ol class="hours${crowd(day)}">${day.hours.map((hour) => {
    const name = hourName(hour.validAt, day.timeZone);
    const label = `${name}, ${verdictPhrase(hour.verdict)}`;
    const current = hour.validAt === options.chosen ? html` aria-current="true"` : null;
    return html`<li><a href="${options.href(hour)}" aria-label="${label}"${current}>${name.replace(/ h( UTC)?$/, '')}</a></li>`;
  })}</ol>`;
}

export function hourScale(day: JudgedDay): Html {
  return html`<ol class="hours" aria-hidden="true">${day.hours.map((hour) => html`<li>${hourName(hour.validAt, day.timeZone).replace(/ h( UTC)?$/, '')}</li>`)}</ol>`;
}
