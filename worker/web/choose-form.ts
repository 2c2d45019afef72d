/** Wing, sheet and units of choice: a plain GET form, so that every choice has an address. */
import type { JudgedDay } from '../../lib/brief/day.ts';
import { HEIGHT_UNITS, SPEED_UNITS } from '../../lib/brief/units-out.ts';
import { plainText, type Reader } from '../../lib/brief/words/index.ts';
import { html, type Html } from './html.ts';
import type { Choice, Choices } from './page-services.ts';

function options(choices: readonly Choice[], selected: string): Html[] {
  const known = choices.some(({ id }) => id === selected) ? choices : [{ id: selected, name: selected }, ...choices];
  return known.map(({ id, name }) => html`<option value="${id}"${id === selected ? html` selected` : null}>${plainText(name)}</option>`);
}

function select(name: string, label: string, list: Html[]): Html {
  return html`<label>${label} <select name="${name}">${list}</select></label>`;
}

const inAddress = (unit: string): Choice => ({ id: unit.replace('/', ''), name: unit });

export function chooseForm(
  day: JudgedDay, choices: Choices, options_: { readonly reader: Reader; readonly hour: string },
): Html {
  const { units } = options_.reader;
  return html`<form class="choose" method="get" action="/sites/${encodeURIComponent(day.siteId)}">
<input type="hidden" name="date" value="${day.localDate}"><input type="hidden" name="hour" value="${options_.hour}">
${select('wing', 'Wing', options(choices.wings, day.wingKey))} ${select('sheet', 'Limit sheet', options(choices.sheets, day.sheetId))}
${select('speed', 'Speeds in', options(SPEED_UNITS.map(inAddress), inAddress(units.speed).id))} ${select('height', 'Heights in', options(HEIGHT_UNITS.map(inAddress), units.height))}
<button type="submit">Judge with these</button></form>`;
}
