/** A limit sheet as fields, and what a new version of it would change: what loosens comes first. */
import { capital, plainText } from '../../../lib/brief/words/index.ts';
import type { SheetChange } from '../../../lib/config/sheet-change.ts';
import { rangeText } from '../../../lib/config/fields.ts';
import { LIMIT_RANGES, PARAMETER_DEFAULTS, PARAMETER_RANGES } from '../../../lib/config/sheet-ranges.ts';
import { LIMIT_NAMES, PARAMETER_NAMES, type LimitName, type LimitSheet, type ParameterName } from '../../../lib/margin/sheet.ts';
import type { Issue } from '../../../lib/result.ts';
import { isoUtc } from '../../../lib/time.ts';
import type { StoredSheetChange } from '../../store/sheet-history.ts';
import { inputField, problemsOf, problemWords } from '../form-fields.ts';
import { textIn } from '../forms/wishes.ts';
import { html, type Html, type Piece } from '../html.ts';
import { leaf, operatorPage, stamped, type OperatorFrame } from './frame.ts';

export interface SheetPage extends OperatorFrame {
  readonly sheet: LimitSheet;
  readonly form: FormData;
  readonly fieldProblems: readonly Issue[];
  /** Of what stands in the fields against what counts now; null before it was looked at. */
  readonly changes: readonly SheetChange[] | null;
  readonly etag: string;
  readonly history: readonly StoredSheetChange[];
  /** What stands in the fields needs the second key besides. */
  readonly asksSecond: boolean;
  /** Subscribers who are held to it. */
  readonly held: number;
  /** The fields are those of a new sheet, begun from this one. */
  readonly isCopy: boolean;
}

export const SHEET_NAMES = [...LIMIT_NAMES, ...PARAMETER_NAMES] as const;

/** Limits that say nothing of the other kind of place. */
const OF_LAUNCH = new Set<string>(['maxOffAxisDeg', 'maxBackMps', 'maxUpperMps', 'minArrivalM', 'minLandingReserveMps', 'slopeBufferDeg', 'minSlopeDeg', 'minLiftMps', 'bandM']);
const OF_STRIP = new Set<string>(['maxClimbShearMps', 'minReleaseM']);

/** "Largest mean wind" and "least forward speed" from the name of a limit. */
function limitWords(name: LimitName | ParameterName): string {
  switch (name) {
    case 'maxMeanMps': return 'Mean wind, at most';
    case 'maxGustMps': return 'Gust, at most';
    case 'maxGustSpreadMps': return 'Gust above the mean, at most';
    case 'maxCrossMps': return 'Wind across, at most';
    case 'maxTailMps': return 'Wind from behind, at most';
    case 'maxOffAxisDeg': return 'Wind off the axis, at most';
    case 'minForwardMps': return 'Forward speed left, at least';
    case 'minForwardAloftMps': return 'Airspeed left above launch, at least';
    case 'maxUpperMps': return 'Upper wind, at most';
    case 'maxBackMps': return 'Wind over the back, at most';
    case 'minArrivalM': return 'Height on arrival, at least';
    case 'minLandingReserveMps': return 'Speed left in the landing gradient, at least';
    case 'maxRunMps': return 'Speed of the take-off run, at most';
    case 'slopeBufferDeg': return 'Slope steeper than the glide, by at least';
    case 'minSlopeDeg': return 'Slope, at least';
    case 'maxThermalMps': return 'Thermals, at most';
    case 'minCloudBaseM': return 'Cloud base above launch, at least';
    case 'maxCapeJkg': return 'CAPE, at most';
    case 'maxRainMm': return 'Rain, at most';
    case 'maxRainChancePct': return 'Chance of rain, at most';
    case 'minVisibilityM': return 'Visibility, at least';
    case 'maxPressureStepHpa': return 'Pressure step, at most';
    case 'minLiftMps': return 'Lift of the ridge, at least';
    case 'minAgreement': return 'Agreement of the forecasts, at least';
    case 'maxClimbShearMps': return 'Wind shear in the climb, at most';
    case 'minReleaseM': return 'Release height, at least';
    case 'lightWindMps': return 'Light wind below';
    case 'bandM': return 'Height of flight above launch';
    case 'sinkMps': return 'Sink allowed for';
    case 'sinkPerThermal': return 'Sink allowed for, by thermal';
  }
}

function isLimit(name: LimitName | ParameterName): name is LimitName {
  return name in LIMIT_RANGES;
}

function rangeOf(name: LimitName | ParameterName) {
  return isLimit(name) ? LIMIT_RANGES[name] : PARAMETER_RANGES[name];
}

export function formOfSheet({ name, for: whom, limits, parameters }: LimitSheet): FormData {
  const form = new FormData();
  form.set('name', name);
  form.set('for', whom);
  for (const key of SHEET_NAMES) {
    const value = isLimit(key) ? limits[key] : parameters[key];
    if (value !== undefined) form.set(`limit.${key}`, String(value));
  }
  return form;
}

function row(name: LimitName | ParameterName, { form, fieldProblems, sheet }: SheetPage): Html {
  const range = rangeOf(name);
  const problems = problemsOf(fieldProblems, new RegExp(`^\\$\\.limits\\.${name}$`));
  const basis = sheet.basis[name];
  const about = `about-${name}`;
  return html`<li><label for="limit.${name}">${limitWords(name)}</label><span class="value"><input id="limit.${name}" name="limit.${name}" inputmode="decimal" size="8" maxlength="12" autocomplete="off" value="${textIn(form, `limit.${name}`)}" aria-describedby="${about}"${problems.length === 0 ? null : html` aria-invalid="true"`}> <span>${range.unit.replace(/^\((.*)\)$/, '$1')}</span></span>
<p class="hint" id="${about}">${capital(rangeText(range).replace(/ [^0-9]*$/, ''))}${isLimit(name) ? ', or empty: not judged' : `; ${PARAMETER_DEFAULTS[name]} where it is empty`}.${basis === undefined ? null : ` ${capital(plainText(basis, 200))}`}</p>${problems.length === 0 ? null : html`<p class="wrong">${problemWords(problems)}</p>`}</li>`;
}

function nameOf(what: string): string {
  const known = SHEET_NAMES.find((name) => name === what);
  return known === undefined ? what : limitWords(known);
}

function changeItem({ what, before, after }: SheetChange): Html {
  const said = (value: SheetChange['before']): string => (value === null ? 'not judged' : String(value));
  return html`<li>${nameOf(what)}: ${said(before)} → ${said(after)}</li>`;
}

function changesPart(page: SheetPage): Piece {
  const { changes, held, asksSecond, isCopy, sheet } = page;
  const than = isCopy ? plainText(sheet.name) : 'before';
  if (changes === null) return null;
  if (changes.length === 0) return html`<p>${isCopy ? `What is judged is as in ${than}.` : 'Nothing would change in what is judged.'}</p>`;
  const [looser, tighter] = [changes.filter(({ loosens }) => loosens), changes.filter(({ loosens }) => !loosens)];
  return html`${looser.length === 0 ? null : html`<section class="loosens" aria-labelledby="loosens-h"><h2 id="loosens-h">Lets more pass than ${than}</h2><ul>${looser.map(changeItem)}</ul><p>${isCopy ? 'Nobody is held to the new sheet yet.' : held === 0 ? 'Nobody who subscribed is held to this sheet now.' : `${held} who subscribed ${held === 1 ? 'is' : 'are'} held to this sheet; the next brief tells each of them what was loosened.`}</p>
<label class="pick"><input type="checkbox" name="aware" value="1"> <span>I mean to let this pass</span></label>${asksSecond ? html`<div class="field"><label for="second">Token of the second key</label> <input id="second" type="password" name="second" maxlength="200" autocomplete="off"></div>` : null}</section>`}
${tighter.length === 0 ? null : html`<section class="tightens" aria-labelledby="tightens-h"><h2 id="tightens-h">Holds tighter than ${than}</h2><ul>${tighter.map(changeItem)}</ul></section>`}`;
}

export function sheetPage(page: SheetPage): string {
  const { sheet, form, history, changes, isCopy } = page;
  const path = `/operator/sheets/${encodeURIComponent(sheet.id)}`;
  const names = SHEET_NAMES.filter((name) => sheet.limits[name as LimitName] !== undefined || !(sheet.kind === 'launch' ? OF_STRIP : OF_LAUNCH).has(name));
  const past = history.map((change) => html`<li class="way"><h3>Version ${change.version}, ${isoUtc(change.storedAtMs).slice(0, 10)}</h3>${change.changes.length === 0 ? html`<p>The first that is kept here, or without a change in what is judged.</p>` : html`<ul>${change.changes.map((one) => html`<li>${one.loosens ? 'Loosened. ' : 'Tightened. '}${nameOf(one.what)}: ${one.before ?? 'not judged'} → ${one.after ?? 'not judged'}</li>`)}</ul>`}</li>`);
  return operatorPage(page, html`<p class="day">${plainText(sheet.for, 500)}</p><p class="ages">${isCopy ? 'Begun from version' : 'Version'} ${sheet.version}, for a ${sheet.kind}.</p>
<form class="steps sheet-form" method="post" action="${path}${isCopy ? '/copy' : null}" novalidate>${stamped(page.stamp)}<input type="hidden" name="etag" value="${page.etag}">
${changesPart(page)}${changes === null ? null : html`<div class="turn"><button class="next" name="to" value="save">${isCopy ? 'Save as a new sheet' : `Save as version ${sheet.version + 1}`}</button></div>`}
<fieldset><legend>Name</legend><div class="fields">${inputField({ name: 'name', label: 'Name', value: textIn(form, 'name'), problems: problemsOf(page.fieldProblems, /^\$\.(?:name|id)$/) }, { most: 80 })}<div class="field"><label for="for">For whom</label> <input id="for" name="for" maxlength="500" value="${textIn(form, 'for')}"></div></div></fieldset>
<fieldset><legend>Limits, and what they are reckoned with</legend><ul class="limits">${names.map((name) => row(name, page))}</ul></fieldset>
<div class="turn"><button class="${changes === null ? 'next' : 'back'}" name="to" value="look">${isCopy ? 'Look at what differs' : 'Look at what changes'}</button></div></form>${isCopy ? null : html`<div class="turn"><a class="button" href="${path}/copy">Begin a new sheet from this one</a></div>`}
${past.length === 0 ? null : leaf('history', 'Earlier', 'what each version changed', html`<ol class="ways">${past}</ol>`)}`);
}

export function sheetsPage(page: OperatorFrame & { readonly sheets: readonly LimitSheet[] }): string {
  const rows = page.sheets.map(({ id, name, version, kind, for: whom }) => html`<tr><th scope="row"><a href="/operator/sheets/${encodeURIComponent(id)}">${plainText(name)}</a></th><td>${kind}</td><td>${version}</td><td>${plainText(whom, 160)}</td></tr>`);
  return operatorPage(page, html`<p class="lede">What a wing is held to. A change makes a new version; what it loosens is told to everyone who is held to it. A new sheet begins as a copy: open the one that is nearest to it.</p><div class="scroll" tabindex="0" role="region" aria-label="Limit sheets"><table><thead><tr><th scope="col">Sheet</th><th scope="col">For a</th><th scope="col">Version</th><th scope="col">For whom</th></tr></thead><tbody>${rows}</tbody></table></div>`);
}
