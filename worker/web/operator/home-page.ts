/** The operator's sites and what the board shows of them. */
import { placeName, plainText } from '../../../lib/brief/words/index.ts';
import { WING_CLASSES } from '../../../lib/config/wing.ts';
import type { LimitSheet } from '../../../lib/margin/sheet.ts';
import type { Site } from '../../../lib/site.ts';
import type { Pair } from '../../store/published.ts';
import { html, type Html, type Piece } from '../html.ts';
import { operatorPage, stamped, type OperatorFrame } from './frame.ts';

export interface HomePage extends OperatorFrame {
  readonly sites: readonly { readonly id: string; /** null where the row cannot be read. */ readonly site: Site | null; readonly demo: boolean }[];
  readonly published: readonly Pair[];
}

export function homePage(page: HomePage): string {
  const rows = page.sites.map(({ id, site, demo }) => {
    const pairs = page.published.filter(({ siteId }) => siteId === id);
    const shown = pairs.length === 0 ? 'not on the board' : pairs.map(({ wingKey, sheetId }) => `${wingKey}, ${sheetId}`).join('; ');
    return html`<tr><th scope="row"><a href="/operator/sites/${encodeURIComponent(id)}">${site === null ? id : placeName(site)}</a></th><td>${site === null ? 'cannot be read' : site.kind}${demo ? ', invented weather' : null}</td><td>${shown}</td></tr>`;
  });
  const list: Piece = rows.length === 0
    ? html`<p class="day">No site is set up yet. Add the first: nine entries, and its brief can be rehearsed at once.</p>`
    : html`<div class="scroll" tabindex="0" role="region" aria-label="Sites"><table><thead><tr><th scope="col">Site</th><th scope="col">Kind</th><th scope="col">On the board, for</th></tr></thead><tbody>${rows}</tbody></table></div>`;
  return operatorPage(page, html`${list}<div class="turn"><a class="button" href="/operator/new/launch">Add a launch</a><a class="button" href="/operator/new/strip">Add a strip</a></div>`);
}

/** Which wing and sheet the board shows of one site. */
export function boardForm({ id, kind, sheets, pairs, stamp }: { readonly id: string; readonly kind: Site['kind']; readonly sheets: readonly LimitSheet[]; readonly pairs: readonly Pair[]; readonly stamp: string }): Html {
  const taken = pairs.map((pair) => html`<li class="way"><p>${plainText(pair.wingKey)}, held to ${plainText(sheets.find((sheet) => sheet.id === pair.sheetId)?.name ?? pair.sheetId)}</p><form class="act" method="post" action="/operator/board">${stamped(stamp)}<input type="hidden" name="site" value="${id}"><input type="hidden" name="wing" value="${pair.wingKey}"><input type="hidden" name="sheet" value="${pair.sheetId}"><button name="to" value="hide">Take off the board</button></form></li>`);
  const usual = kind === 'launch' ? 'descent-new' : 'solo-tow';
  return html`${pairs.length === 0 ? html`<p>It is not on the board yet.</p>` : html`<ul class="ways">${taken}</ul>`}
<form class="act" method="post" action="/operator/board">${stamped(stamp)}<input type="hidden" name="site" value="${id}"><label>Wing <select name="wing">${WING_CLASSES.map((name) => html`<option${name === 'EN B' ? html` selected` : null}>${name}</option>`)}</select></label>
<label>Limit sheet <select name="sheet">${sheets.filter((sheet) => sheet.kind === kind).map((sheet) => html`<option value="${sheet.id}"${sheet.id === usual ? html` selected` : null}>${plainText(sheet.name)}</option>`)}</select></label><button name="to" value="show">Show on the board</button></form>`;
}
