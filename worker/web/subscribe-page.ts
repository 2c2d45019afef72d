/** The form to subscribe, in three steps on one page: where, when and how, to whom. It needs no script. */
import { HEIGHT_UNITS, SPEED_UNITS } from '../../lib/brief/units-out.ts';
import { CLOSING, placeName } from '../../lib/brief/words/index.ts';
import { WING_CLASSES } from '../../lib/config/wing.ts';
import type { LimitSheet } from '../../lib/margin/sheet.ts';
import type { Issue } from '../../lib/result.ts';
import type { Site } from '../../lib/site.ts';
import { checkboxes, inputField, problemsOf, problemWords, selectField, type Field } from './form-fields.ts';
import { html, type Piece } from './html.ts';
import { layout } from './layout.ts';

export interface SubscribeView {
  readonly sites: readonly Site[];
  readonly sheets: readonly LimitSheet[];
  readonly problems: readonly Issue[];
  /** The form as it was sent; null when it is seen first. */
  readonly typed: FormData | null;
}

const named = (words: readonly string[]) => words.map((word) => ({ id: word, name: word }));

/** Where in a request the problems of a field stand. */
const PLACES: Readonly<Record<string, RegExp>> = {
  site: /^\$\.sites$|^\$\.sites\[\d+\](\.id)?$/, sheet: /^\$\.sites\[\d+\]\.sheet/, wing: /^\$\.wing(\.class)?$/, mass: /^\$\.wing\.(allUpMassKg|referenceMassKg)/,
  at: /^\$\.deliver\.at/, zone: /^\$\.deliver\.timeZone/, speed: /^\$\.units\.speed/, height: /^\$\.units\.height/, address: /^\$\.channels/,
};

export function subscribePage({ sites, sheets, problems, typed }: SubscribeView): string {
  const text = (name: string, first: string): string => {
    const value = typed?.get(name);
    return typeof value === 'string' ? value.slice(0, 254) : first;
  };
  const field = (name: string, label: string, first: string, more: { readonly hint?: string; readonly place?: string } = {}): Field => ({
    name, label, value: text(name, first), problems: problemsOf(problems, PLACES[more.place ?? name] ?? /^$/), ...(more.hint === undefined ? {} : { hint: more.hint }),
  });
  const sheetOf = (kind: Site['kind'], label: string, usual: string): Piece => sites.some((site) => site.kind === kind)
    ? selectField(field(`sheet-${kind}`, label, usual, { place: 'sheet' }), sheets.filter((sheet) => sheet.kind === kind)) : null;
  const siteProblems = problemsOf(problems, PLACES['site'] ?? /^$/);
  const elsewhere = problems.filter(({ path }) => Object.values(PLACES).every((place) => !place.test(path)));
  const count = problems.length === 1 ? 'One entry' : `${problems.length} entries`;
  const body = html`<div class="top"><h1>The brief, every morning</h1><p class="lede">Three steps, no account. What you type is kept for your brief alone, and goes when you leave.</p></div>
${problems.length === 0 ? null : html`<p class="day" role="alert">${count} cannot be used yet; what is wrong stands beside each.</p>`}
<form class="steps" method="post">${elsewhere.length === 0 ? null : html`<p class="wrong">${problemWords(elsewhere)}</p>`}
<fieldset${siteProblems.length === 0 ? null : html` aria-describedby="site-wrong"`}><legend>1. Where</legend>${siteProblems.length === 0 ? null : html`<p class="wrong" id="site-wrong">${problemWords(siteProblems)}</p>`}
${checkboxes('site', sites.map((site) => ({ id: site.id, name: placeName(site) })), typed === null ? [] : typed.getAll('site').map(String))}</fieldset>
<fieldset><legend>2. For which wing, when, in which units</legend><div class="fields">
${selectField(field('wing', 'Wing', 'EN B'), named(WING_CLASSES))}${inputField(field('mass', 'All-up mass, kg', '', { hint: 'If you like: speeds are scaled to it.' }), { mode: 'decimal' })}
${sheetOf('launch', 'Limit sheet at launches', 'descent-new')}${sheetOf('strip', 'Limit sheet on tow', 'solo-tow')}
${inputField(field('at', 'Brief at', '05:30'), { type: 'time', isRequired: true })}${inputField(field('zone', 'Time zone', sites[0]?.timeZone ?? 'Europe/Vienna', { hint: 'As Area/City.' }), { isRequired: true })}
${selectField(field('speed', 'Speeds in', 'm/s'), named(SPEED_UNITS))}${selectField(field('height', 'Heights in', 'm'), named(HEIGHT_UNITS))}</div></fieldset>
<fieldset><legend>3. To whom</legend><div class="fields">${inputField(field('address', 'Mail address', '', { hint: 'Nothing is sent before you confirm it by the link of a mail. Each brief has a link that ends it.' }), { type: 'email', complete: 'email', isRequired: true })}</div>
<button type="submit">Subscribe</button></fieldset></form>`;
  return layout({
    title: problems.length === 0 ? 'Subscribe - Dawnmargin' : `${count} cannot be used yet - Dawnmargin`, demo: false, credits: [], keep: '', body,
    description: `Subscribe to the morning margin brief for your launches and strips. ${CLOSING}`,
  });
}
