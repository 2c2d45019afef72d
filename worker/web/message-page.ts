/** Pages that say what went wrong: no such site, a query that cannot be. */
import { html } from './html.ts';
import { layout } from './layout.ts';

export function messagePage(message: { readonly title: string; readonly sentences: readonly string[] }): string {
  return layout({
    title: `${message.title} - Dawnmargin`, description: message.title, demo: false, credits: [], keep: '',
    body: html`<div class="top"><h1>${message.title}</h1></div>${message.sentences.map((text) => html`<p class="day">${text}</p>`)}<p><a href="/">To the board</a></p>`,
  });
}
