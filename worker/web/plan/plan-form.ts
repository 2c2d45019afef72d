/** The day as a form: edited in place, one row more than there are, everything in it sent with every button. */
import { MOST_GROUPS, MOST_PLAN_SITES, type PlanContext } from '../../../lib/config/plan.ts';
import { WING_CLASSES } from '../../../lib/config/wing.ts';
import { placeName, plainText } from '../../../lib/brief/words/index.ts';
import { html, type Html } from '../html.ts';
import { fieldIn, listIn, textIn } from './form-data.ts';

const MOST_MOVES = 12;

interface Option {
  readonly id: string;
  readonly name: string;
}

export function planForm(json: unknown, known: PlanContext, action: string): Html {
  const places = known.sites.map(({ id, name }) => ({ id, name: placeName({ name, id }) }));
  const sites = withOneMore(listIn(json, 'sites'), Math.min(MOST_PLAN_SITES, places.length));
  const moves = withOneMore(listIn(json, 'moves'), MOST_MOVES);
  const used = places.filter(({ id }) => sites.some((site) => textIn(site, 'id') === id));
  return html`<form class="plan-form" id="plan-form" method="post" action="${action}">
<fieldset class="plan-day"><legend>The day</legend><label>Date <input type="date" name="date" value="${textIn(json, 'date')}"></label>${numberField('instructors', 'Instructors there are', json)}${numberField('movingMin', 'Minutes between two sites', json)}</fieldset>
<fieldset><legend>Groups</legend><p class="hint">A group without a name is left out. Hours are those of the local clock.</p>${withOneMore(listIn(json, 'groups'), MOST_GROUPS).map((group, index) => groupFields(group, `g${index}.`, { places: used.length === 0 ? places : used, known, nth: index + 1 }))}</fieldset>
<fieldset><legend>Sites</legend>${sites.map((site, index) => html`<div class="plan-row" role="group" aria-label="Site ${index + 1}">${select(`s${index}.id`, 'Site', [NONE, ...places], textIn(site, 'id'))}${numberField(`s${index}.capacity`, 'Groups at once', site, '1')}${numberField(`s${index}.openFromHour`, 'Open from', site, '0')}${numberField(`s${index}.openToHour`, 'to', site, '24')}</div>`)}</fieldset>
<fieldset><legend>Ways that take other than that</legend>${moves.map((move, index) => html`<div class="plan-row" role="group" aria-label="Way ${index + 1}">${select(`m${index}.from`, 'Between', [NONE, ...places], textIn(move, 'from'))}${select(`m${index}.to`, 'and', [NONE, ...places], textIn(move, 'to'))}${numberField(`m${index}.minutes`, 'Minutes', move)}</div>`)}</fieldset>
${lostFields(json, places)}<button type="submit">Plan this day</button></form>`;
}

const NONE: Option = { id: '', name: '–' };

function groupFields(group: unknown, row: string, { places, known, nth }: { readonly places: readonly Option[]; readonly known: PlanContext; readonly nth: number }): Html {
  const chosen = fieldIn(group, 'sites');
  const sites = Array.isArray(chosen) ? chosen : [];
  return html`<div class="plan-row" role="group" aria-label="Group ${nth}"><label>Group <input name="${row}name" maxlength="40" size="16" autocomplete="off" value="${textIn(group, 'name')}"></label>
${select(`${row}sheet`, 'Limit sheet', known.sheets.map(({ id, name }) => ({ id, name: plainText(name) })), textIn(group, 'sheet'))}${select(`${row}wing`, 'Wing', WING_CLASSES.map((id) => ({ id, name: id })), textIn(group, 'wing'))}
${numberField(`${row}minHours`, 'Hours at least', group, '1')}${numberField(`${row}wishHours`, 'at most', group, '3')}${numberField(`${row}earliestHour`, 'From', group, '6')}${numberField(`${row}latestHour`, 'to', group, '20')}${numberField(`${row}instructors`, 'Instructors', group, '1')}
<span class="plan-checks" role="group" aria-label="Sites of group ${nth}">${places.map(({ id, name }) => box(`${row}sites`, { id, name }, sites.includes(id)))}</span>${box(`${row}close`, { id: '1', name: 'hours close to a limit too' }, fieldIn(group, 'close') === true)}</div>`;
}

/** Hours taken out by hand, each with a button that gives it back. */
function lostFields(json: unknown, places: readonly Option[]): Html | null {
  const lost = listIn(json, 'lost');
  if (lost.length === 0) return null;
  return html`<fieldset><legend>Hours taken out</legend>${lost.map((item) => {
    const value = `${textIn(item, 'site')} ${textIn(item, 'hour')}`;
    const name = places.find(({ id }) => id === textIn(item, 'site'))?.name ?? textIn(item, 'site');
    return html`<span class="plan-lost"><input type="hidden" name="lost" value="${value}">${name}, ${textIn(item, 'hour')} h <button name="give" value="${value}">Put back</button></span> `;
  })}</fieldset>`;
}

function withOneMore(rows: readonly unknown[], most: number): readonly unknown[] {
  return rows.length < most ? [...rows, {}] : rows;
}

function numberField(name: string, label: string, json: unknown, fallback = ''): Html {
  const typed = textIn(json, name.replace(/^\w\d+\./, ''));
  return html`<label>${label} <input name="${name}" inputmode="numeric" size="3" maxlength="4" autocomplete="off" value="${typed === '' ? fallback : typed}"></label>`;
}

function select(name: string, label: string, options: readonly Option[], selected: string): Html {
  const list = selected === '' || options.some(({ id }) => id === selected) ? options : [{ id: selected, name: selected }, ...options];
  return html`<label>${label} <select name="${name}">${list.map(({ id, name: text }) => html`<option value="${id}"${id === selected ? html` selected` : null}>${text}</option>`)}</select></label>`;
}

function box(name: string, { id, name: label }: Option, checked: boolean): Html {
  return html`<label class="plan-box"><input type="checkbox" name="${name}" value="${id}"${checked ? html` checked` : null}> ${label}</label>`;
}
