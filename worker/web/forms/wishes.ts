/** What somebody wishes to be told, as fields: where and which wing and sheets, when and in which units. Both forms hold them. */
import { HEIGHT_UNITS, SPEED_UNITS } from '../../../lib/brief/units-out.ts';
import { placeName, plainText } from '../../../lib/brief/words/index.ts';
import { DAYS, DEFAULT_SHEETS } from '../../../lib/config/subscription.ts';
import { WING_CLASSES } from '../../../lib/config/wing.ts';
import type { LimitSheet } from '../../../lib/margin/sheet.ts';
import type { Issue } from '../../../lib/result.ts';
import type { Site } from '../../../lib/site.ts';
import { checkboxes, inputField, problemsOf, problemWords, selectField, type Field } from '../form-fields.ts';
import { html, type Html, type Piece } from '../html.ts';

export interface WishesView {
  readonly sites: readonly Site[];
  readonly sheets: readonly LimitSheet[];
  /** What stands in the fields. */
  readonly form: FormData;
  readonly problems: readonly Issue[];
  /** Keeps the ids of two forms on one page apart. */
  readonly own?: { readonly wing: string };
}

export const OWN_WING = 'own';

/** More than any field may hold is cut to what is still too long: an address that was cut might be another one. */
export const MOST_TYPED = 2100;

export function textIn(form: FormData, name: string): string {
  const value = form.get(name);
  return typeof value === 'string' ? value.trim().slice(0, MOST_TYPED) : '';
}

function listIn(form: FormData, name: string): string[] {
  return form.getAll(name).filter((value) => typeof value === 'string').slice(0, 60);
}

/** A key is the id of a site, or `id~1` where one site is held to a second sheet. */
function siteIdOf(key: string): string {
  return key.replace(/~\d+$/, '');
}

const named = (words: readonly string[]) => words.map((word) => ({ id: word, name: word }));
export const DAY_NAMES: Readonly<Record<(typeof DAYS)[number], string>> = { mon: 'Monday', tue: 'Tuesday', wed: 'Wednesday', thu: 'Thursday', fri: 'Friday', sat: 'Saturday', sun: 'Sunday' };

/** Where in a request the problems of a field stand. */
const WISH_PLACES: Readonly<Record<string, RegExp>> = {
  sites: /^\$\.sites$/, site: /^\$\.sites\[\d+\]/, wing: /^\$\.wing(?!\.allUpMassKg)/, mass: /^\$\.wing\.allUpMassKg/,
  at: /^\$\.deliver\.at/, zone: /^\$\.deliver\.timeZone/, days: /^\$\.deliver\.days/, speed: /^\$\.units\.speed/, height: /^\$\.units\.height/,
};

function placeOf(name: string): RegExp {
  return WISH_PLACES[name] ?? /^$/;
}

function field({ form, problems }: WishesView, name: string, label: string, hint?: string): Field {
  return { name, label, value: textIn(form, name), problems: problemsOf(problems, placeOf(name)), ...(hint === undefined ? {} : { hint }) };
}

function wrong(id: string, problems: readonly Issue[]): Piece {
  return problems.length === 0 ? null : html`<p class="wrong" id="${id}">${problemWords(problems)}</p>`;
}

/** Each site with the sheet it is judged by; of one that is left out the sheet says nothing. */
export function siteRows(view: WishesView): Html {
  const { sites, sheets, form, problems } = view;
  const chosen = listIn(form, 'site');
  const keys = [...sites.map(({ id }) => id), ...chosen.filter((key) => key.includes('~'))];
  const rows = keys.map((key) => {
    const site = sites.find(({ id }) => id === siteIdOf(key));
    if (site === undefined) return null;
    const own = problems.filter(({ path }) => path.startsWith(`$.sites[${chosen.indexOf(key)}]`));
    const sheet = textIn(form, `sheet.${key}`) || DEFAULT_SHEETS[site.kind];
    const name = placeName(site);
    return html`<li><label class="pick"><input type="checkbox" name="site" value="${key}"${chosen.includes(key) ? html` checked` : null}${own.length === 0 ? null : html` aria-describedby="wrong-${key}" aria-invalid="true"`}> <span>${name}</span></label>
<select name="sheet.${key}" aria-label="Limit sheet at ${name}">${sheets.filter(({ kind }) => kind === site.kind).map(({ id, name: text }) => html`<option value="${id}"${id === sheet ? html` selected` : null}>${plainText(text)}</option>`)}</select>${wrong(`wrong-${key}`, own)}</li>`;
  });
  return html`${wrong('sites-wrong', problemsOf(problems, placeOf('sites')))}<ul class="wanted">${rows}</ul>`;
}

export function wingFields(view: WishesView): Html {
  const own = view.own === undefined ? [] : [{ id: OWN_WING, name: view.own.wing }];
  return html`${selectField(field(view, 'wing', 'Wing'), [...own, ...named(WING_CLASSES)])}
${inputField(field(view, 'mass', 'All-up mass, kg', 'If you like: speeds are scaled to it.'), { mode: 'decimal' })}`;
}

export function whenFields(view: WishesView): Html {
  const chosen = listIn(view.form, 'day');
  return html`<div class="fields">${inputField(field(view, 'at', 'Brief at'), { type: 'time', isRequired: true })}${inputField(field(view, 'zone', 'Time zone', 'As Area/City.'), { isRequired: true })}
${selectField(field(view, 'speed', 'Speeds in'), named(SPEED_UNITS))}${selectField(field(view, 'height', 'Heights in'), named(HEIGHT_UNITS))}</div>
<div class="week" role="group" aria-label="Days"${chosen.length === 0 ? html` aria-describedby="days-wrong"` : null}>${checkboxes('day', DAYS.map((day) => ({ id: day, name: DAY_NAMES[day] })), chosen)}</div>${wrong('days-wrong', problemsOf(view.problems, placeOf('days')))}`;
}

/** The fields as the API takes them: whatever is wrong in them is found there. */
export function wishesJson(form: FormData, kept: { readonly wing: unknown } | null = null) {
  const mass = textIn(form, 'mass').replace(',', '.');
  const wingClass = textIn(form, 'wing');
  const keptClass = typeof kept?.wing === 'object' && kept.wing !== null && 'class' in kept.wing && kept.wing.class === wingClass ? { ...kept.wing } : {};
  return {
    sites: listIn(form, 'site').map((key) => { const sheet = textIn(form, `sheet.${key}`); return { id: siteIdOf(key), ...(sheet === '' ? {} : { sheet }) }; }),
    wing: wingClass === OWN_WING && kept !== null ? kept.wing : { ...keptClass, class: wingClass, allUpMassKg: mass === '' ? null : Number.isFinite(Number(mass)) ? Number(mass) : mass },
    deliver: { at: textIn(form, 'at'), timeZone: textIn(form, 'zone'), days: listIn(form, 'day') },
    units: { speed: textIn(form, 'speed'), height: textIn(form, 'height') },
  };
}
