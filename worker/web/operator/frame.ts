/** The frame of the operator's pages: where else there is to look, and what each form of a session carries. */
import type { Issue } from '../../../lib/result.ts';
import { problemWords } from '../form-fields.ts';
import { html, type Html, type Piece } from '../html.ts';
import { layout } from '../layout.ts';

export interface OperatorFrame {
  readonly title: string;
  readonly stamp: string;
  readonly said?: string | null;
  /** What is wrong and belongs to no field. */
  readonly problems?: readonly Issue[];
}

export function stamped(stamp: string): Html {
  return html`<input type="hidden" name="stamp" value="${stamp}">`;
}

export function leaf(id: string, title: string, aside: Piece, body: Piece): Html {
  return html`<section class="leaf" id="${id}" aria-labelledby="${id}-h"><div class="margin"><h2 id="${id}-h">${title}</h2><p class="aside">${aside}</p></div><div class="body">${body}</div></section>`;
}

export function operatorPage({ title, stamp, said = null, problems = [] }: OperatorFrame, body: Piece): string {
  const nav = html`<nav class="desk-nav" aria-label="Operator"><a href="/operator">Sites</a><a href="/operator/sheets">Limit sheets</a><a href="/operator/import">In and out</a><a href="/operator/status">Status</a>
<form class="act" method="post" action="/operator/sign-out">${stamped(stamp)}<button type="submit">Sign out</button></form></nav>`;
  return layout({
    title: `${title} - Operator - Dawnmargin`, description: 'For whoever runs this service.', demo: false, credits: [], keep: '',
    body: html`<link rel="stylesheet" href="/desk.css"><script src="/desk.js" defer></script>${nav}<div class="top"><h1>${title}</h1></div>
${problems.length === 0 ? null : html`<p class="wrong" role="alert">${problemWords(problems)}</p>`}${said === null ? null : html`<p class="said" role="status">${said}</p>`}${body}`,
  });
}

export function signInPage({ said, isPossible }: { readonly said: string | null; readonly isPossible: boolean }): string {
  return layout({
    title: 'Sign in - Operator - Dawnmargin', description: 'For whoever runs this service.', demo: false, credits: [], keep: '',
    body: html`<link rel="stylesheet" href="/desk.css"><div class="top"><h1>For whoever runs this service</h1><p class="lede">The operator token opens this desk for an hour, in this browser only.</p></div>
${isPossible ? html`<form class="act" method="post" action="/operator/sign-in"><label>Operator token <input type="password" name="token" size="48" maxlength="200" autocomplete="current-password" required${said === null ? null : html` aria-invalid="true" aria-describedby="token-wrong"`}></label><button type="submit">Sign in</button></form>${said === null ? null : html`<p class="wrong" id="token-wrong" role="alert">${said}</p>`}`
      : html`<p class="day">Nobody can sign in here: the settings OPERATOR_TOKEN_SHA256 and LINK_KEY are needed for it.</p>`}`,
  });
}
