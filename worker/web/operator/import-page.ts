/** Sites in and out, as a GeoJSON FeatureCollection (RFC 7946): what a file would change is looked at before it does. */
import type { Issue } from '../../../lib/result.ts';
import { plainText } from '../../../lib/brief/words/index.ts';
import { html, type Html } from '../html.ts';
import { operatorPage, stamped, type OperatorFrame } from './frame.ts';

export interface ImportPlan {
  readonly added: readonly string[];
  readonly changed: readonly string[];
  readonly same: readonly string[];
  readonly retired: readonly string[];
}

export interface ImportPage extends OperatorFrame {
  readonly text: string;
  /** The sites of the text are all there are from then on. */
  readonly isWhole: boolean;
  readonly plan: ImportPlan | null;
  readonly fieldProblems: readonly Issue[];
  readonly etag: string;
  readonly count: number;
}

function planPart({ added, changed, same, retired }: ImportPlan): Html {
  const named = (title: string, ids: readonly string[]): Html | null => (ids.length === 0 ? null : html`<li><strong>${title}</strong> ${ids.map((id) => plainText(id)).join(', ')}</li>`);
  return html`<section aria-labelledby="plan-h"><h2 id="plan-h">What this would change</h2><ul>${named('Retired:', retired)}${named('Changed:', changed)}${named('New:', added)}${named('As they are:', same)}</ul></section>`;
}

export function importPage(page: ImportPage): string {
  const { fieldProblems, plan, text, isWhole } = page;
  const wrong = fieldProblems.length === 0 ? null : html`<div class="wrong" id="text-wrong" role="alert"><p>Nothing was taken. ${fieldProblems.length === 1 ? 'One thing has' : `${fieldProblems.length} things have`} to be mended first:</p><ul>${fieldProblems.slice(0, 40).map(({ path, value, problem, allowed }) => html`<li><code>${plainText(path, 120)}</code>: ${plainText(problem, 200)}${value === 'missing' ? '' : ` (${plainText(value, 90)})`}; right would be ${plainText(allowed, 200)}.</li>`)}</ul></div>`;
  return operatorPage(page, html`<p>${page.count === 0 ? 'There is no site yet to take out.' : html`<a class="button" href="/operator/sites.geojson" download>Take all ${page.count} sites out as GeoJSON</a>`}</p>
${wrong}<form class="steps" method="post" action="/operator/import" enctype="multipart/form-data">${stamped(page.stamp)}<input type="hidden" name="etag" value="${page.etag}">
${plan === null ? null : html`${planPart(plan)}<div class="turn"><button class="next" name="to" value="save">Take these in</button></div>`}
<fieldset><legend>Bring sites in</legend><div class="field"><label for="file">A file</label> <input id="file" type="file" name="file" accept=".geojson,.json,application/geo+json,application/json"></div>
<div class="field"><label for="text">Or its text</label> <textarea id="text" name="text" rows="12" spellcheck="false"${wrong === null ? null : html` aria-invalid="true" aria-describedby="text-wrong"`}>${text}</textarea><p class="hint">A FeatureCollection of launches and strips. A site whose id is here already is replaced.</p></div>
<label class="pick"><input type="checkbox" name="whole" value="1"${isWhole ? html` checked` : null}> <span>These are all sites from now on: retire the others</span></label>
<div class="turn"><button class="${plan === null ? 'next' : 'back'}" name="to" value="look">Look at what changes</button></div></fieldset></form>`);
}
