/** One launch or strip: its fields, what follows from them, and what can be done with it. */
import type { Issue } from '../../../lib/result.ts';
import type { Site } from '../../../lib/site.ts';
import { inputField, problemsOf, problemWords, selectField, type Field } from '../form-fields.ts';
import { textIn } from '../forms/wishes.ts';
import { html, type Html, type Piece } from '../html.ts';
import type { ComputedRow } from './computed.ts';
import { leaf, operatorPage, stamped, type OperatorFrame } from './frame.ts';

export interface SitePage extends OperatorFrame {
  readonly kind: Site['kind'];
  /** null for a new one. */
  readonly id: string | null;
  readonly form: FormData;
  readonly fieldProblems: readonly Issue[];
  readonly computed: readonly ComputedRow[];
  /** What the whole list of sites was when this page was made. */
  readonly etag: string;
  readonly action: string;
  /** Of a site that is there: what the board shows of it, and the sheets to choose from. */
  readonly board: Piece;
}

const PLACES: Readonly<Record<string, RegExp>> = {
  name: /^\$\.(id|properties\.name)/, place: /^\$\.geometry/, zone: /^\$\.properties\.timeZone/, heading: /^\$\.properties\.(facingDeg|headingDeg)/, reference: /^\$\.properties\.headingReference/,
  slope: /^\$\.properties\.slopeDeg/, form: /^\$\.properties\.hill\.form/, hill: /^\$\.properties\.hill\.heightM/, half: /^\$\.properties\.hill\.halfLengthM/,
  landing: /^\$\.properties\.landing(\.coordinates.*)?$/, rough: /^\$\.properties\.(landing\.)?roughnessM/, summit: /^\$\.properties\.summitElevationM/, rules: /^\$\.properties\.localRules/,
  line: /^\$\.properties\.lineLengthM/, clear: /^\$\.properties\.lineClearM/, more: /^\$\.(more|properties\.(daylight|sectors|localWind|pressureStep|notes|trackDeg|distanceM|lineTensionRatio|releaseAngleDeg)).*/,
};

/** What no field of the form stands for. */
export function elsewhere(problems: readonly Issue[]): Issue[] {
  return problems.filter(({ path }) => Object.values(PLACES).every((place) => !place.test(path)));
}

const FORMS = [['ridge', 'a ridge'], ['escarpment', 'an escarpment'], ['cone', 'a cone'], ['flat', 'flat ground']].map(([id = '', name = '']) => ({ id, name }));
const REFERENCES = [{ id: 'magnetic', name: 'read from a compass' }, { id: 'true', name: 'from true north, as on a map' }];

function fieldsOf({ kind, form, fieldProblems }: SitePage): Html {
  const field = (name: string, label: string, hint?: string): Field => ({ name, label, value: textIn(form, name), problems: problemsOf(fieldProblems, PLACES[name] ?? /^$/), ...(hint === undefined ? {} : { hint }) });
  const number = (name: string, label: string, hint?: string): Html => inputField(field(name, label, hint), { mode: 'decimal' });
  const isLaunch = kind === 'launch';
  const zone = field('zone', 'Time zone', 'As Area/City.');
  const more = field('more', 'Further properties, as JSON');
  return html`<fieldset><legend>Where</legend><div class="fields">${inputField(field('name', 'Name'))}
${inputField(field('place', isLaunch ? 'Launch: latitude, longitude, metres' : 'Middle of the strip: latitude, longitude, metres', 'As a map gives them: 47.2692, 11.4041, 1240.'))}
${isLaunch ? inputField(field('landing', 'Landing: latitude, longitude, metres', 'Above sea level, not above the launch.')) : null}${inputField(zone, { isZone: true })}</div></fieldset>
<fieldset><legend>${isLaunch ? 'How it lies' : 'How it is laid'}</legend><div class="fields">${number('heading', isLaunch ? 'Faces, degrees' : 'Heading, degrees', isLaunch ? 'Down the slope: where a wind square on comes from.' : 'The way a tow goes: from the pilot to the winch.')}
${selectField(field('reference', 'That is'), REFERENCES)}${isLaunch ? html`${number('slope', 'Slope, degrees')}
${selectField(field('form', 'The hill is'), FORMS)}${number('hill', 'Its height, m', 'From the foot of the slope that the wind meets to the top.')}${number('half', 'From top to half height, m', 'Level distance, upwind.')}`
    : html`${number('line', 'Length of the line, m')}${number('clear', 'Free width beside the line, m', 'If known.')}`}
${number('rough', isLaunch ? 'Roughness of the landing, m' : 'Roughness of the strip, m', 'Mown grass 0.01, a meadow 0.03, crops 0.1, bushes 0.3.')}</div>
${isLaunch ? null : html`<label class="pick"><input type="checkbox" name="both" value="1"${form.get('both') === '1' ? html` checked` : null}> <span>Tows go both ways</span></label>`}</fieldset>
<details class="further"${more.problems.length > 0 || textIn(form, 'more') !== '' ? html` open` : null}><summary>What else is known of it</summary><div class="fields">${isLaunch ? number('summit', 'High ground behind it, m', 'Above sea level.') : null}${inputField(field('rules', 'Local rules, in a line', 'Stands under every brief.'))}</div>
<div class="field"><label for="more">${more.label}</label><textarea id="more" name="more" rows="6" spellcheck="false"${more.problems.length === 0 ? null : html` aria-invalid="true" aria-describedby="more-wrong"`}>${more.value}</textarea><p class="hint">sectors, localWind, pressureStep, daylight, notes${isLaunch ? ', trackDeg, distanceM' : ', lineTensionRatio, releaseAngleDeg'}.</p>${more.problems.length === 0 ? null : html`<p class="wrong" id="more-wrong">${problemWords(more.problems)}</p>`}</div></details>`;
}

function computedPart(rows: readonly ComputedRow[]): Html {
  const list = rows.map(({ what, value, note }) => html`<div><dt>${what}</dt><dd><strong>${value}</strong> <span>${note}</span></dd></div>`);
  return html`<section class="computed" data-computed aria-labelledby="computed-h" aria-live="polite"><h2 id="computed-h">What follows</h2>${rows.length === 0 ? html`<p class="hint">Track, distance, glide, declination and speed-up stand here as soon as the place is given.</p>` : html`<dl>${list}</dl>`}</section>`;
}

export function sitePage(page: SitePage): string {
  const count = page.fieldProblems.length;
  const own = html`${count === 0 ? null : html`<p class="day" role="alert">Not saved: ${count === 1 ? 'one entry' : `${count} entries`} cannot be used yet; what is wrong stands beside each.</p>`}
<form class="steps site-form" method="post" action="${page.action}" data-preview novalidate>${stamped(page.stamp)}<input type="hidden" name="etag" value="${page.etag}">
<div class="site-fields">${fieldsOf(page)}<div class="turn"><button class="next" name="to" value="save">Save</button><button class="back" name="to" value="look">Look at what follows</button></div></div>${computedPart(page.computed)}</form>`;
  const after = page.id === null ? null : html`${leaf('rehearse', 'Rehearse', 'with invented weather', html`<p>Judges this place now with weather that is invented, to see that its figures do what you expect. Nothing is kept, and nobody is told.</p>
<form class="act" method="get" action="/operator/sites/${encodeURIComponent(page.id)}/rehearse"><button type="submit">Rehearse a brief</button></form>`)}
${leaf('board', 'On the board', 'what everybody sees', page.board)}
${leaf('retire', 'Retire', 'its briefs stay', html`<p>It leaves the board, and nobody is told about it any more.</p><form class="act" method="post" action="${page.action}">${stamped(page.stamp)}<input type="hidden" name="etag" value="${page.etag}"><button name="to" value="retire">Retire this site</button></form>`)}`;
  return operatorPage(page, html`${own}${after}`);
}
