/** Small pages of a subscription: a question with a button, its own page. They work without scripts. */
import { html, type Piece } from '../web/html.ts';
import { layout } from '../web/layout.ts';

export function page(title: string, body: Piece): string {
  return layout({ title: `${title} - Dawnmargin`, description: title, demo: false, credits: [], keep: '', body: html`<div class="top"><h1>${title}</h1></div>${body}` });
}

/** A question and the button that answers it: looking at a page changes nothing. */
export function askPage(title: string, { text, button }: { readonly text: string; readonly button: string }): string {
  return page(title, html`<p class="day">${text}</p><form method="post"><input type="hidden" name="confirm" value="1"><button type="submit">${button}</button></form>`);
}
