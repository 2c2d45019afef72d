/** The page of a training day: the plan, and under it the day as it was entered. */
import { credits, dateName, EXPIRED } from '../../../lib/brief/words/index.ts';
import type { PlanContext } from '../../../lib/config/plan.ts';
import type { DayPlan } from '../../../lib/plan/day-plan.ts';
import { planTitle } from '../../../lib/plan/words/index.ts';
import type { Issue } from '../../../lib/result.ts';
import { html, type Html } from '../html.ts';
import { layout } from '../layout.ts';
import { planForm } from './plan-form.ts';
import { tellForm } from './tell-form.ts';
import { planView, type PlanViewOptions } from './plan-view.ts';

export interface PlanPage {
  readonly now: Date;
  readonly known: PlanContext;
  /** The day as it stands in the form. */
  readonly json: unknown;
  readonly action: string;
  readonly plan: DayPlan | null;
  readonly view: PlanViewOptions;
  readonly problems: readonly Issue[];
  /** Something to say about the plan as such. */
  readonly remark: string | null;
  /** Of a kept plan: whether somebody is told when a block turns. */
  readonly isTold: boolean | null;
}

export function planPage({ now, known, json, action, plan, view, problems, remark, isTold }: PlanPage): string {
  const isExpired = plan !== null && (plan.validUntil === null || now.getTime() >= Date.parse(plan.validUntil));
  const shown = plan === null ? null : isExpired ? html`<p class="day">${EXPIRED}</p>` : planView(plan, view);
  // The first button of a form is what the return key presses: not one that takes an hour out.
  const body = html`<link rel="stylesheet" href="/plan.css"><button class="off" form="plan-form" tabindex="-1" aria-hidden="true">Plan this day</button><div class="top plan-top"><h1>${plan === null ? 'Training day' : `Training day, ${dateName(plan.date)}`}</h1>
<p class="lede">Which group where and when, by what is left of every limit. A person decides; this informs.</p></div>
${problems.length === 0 ? null : problemList(problems)}${remark === null ? null : html`<p class="rules">${remark}</p>`}${shown}${isTold === null ? null : tellForm(action, isTold)}
<section class="plan-edit" aria-labelledby="edit-h"><h2 id="edit-h">The day as entered</h2>${planForm(json, known, action)}</section>`;
  return layout({
    title: `${problems.length > 0 ? 'Not planned' : plan === null ? 'Training day' : isExpired ? 'Expired' : planTitle(plan)} - Dawnmargin`,
    description: 'A training day planned from the margins of the morning: which group, which slope or strip, which hours, and why.',
    body, demo: plan?.demo ?? false, credits: credits({ sources: (plan?.siteDays ?? []).flatMap(({ sources }) => sources) }), keep: '',
  });
}

function problemList(problems: readonly Issue[]): Html {
  return html`<section class="cautions" aria-labelledby="wrong-h"><h2 id="wrong-h">This day cannot be planned yet</h2><ul>${problems.map(({ path, value, problem, allowed }) => html`<li>${where(path)}: ${problem} (${value}); right would be ${allowed}.</li>`)}</ul></section>`;
}

/** "$.groups[1].wishHours" is "Group 2, wishHours". */
function where(path: string): string {
  return path.replace(/^\$\.?/, '').replace(/^(group|site|move)s\[(\d+)\]\.?/, (_, row: string, index: string) => `${row.slice(0, 1).toUpperCase()}${row.slice(1)} ${Number(index) + 1}, `).replace(/, $/, '') || 'The day';
}
