/** Who is told when a planned block turns: a subscription, by the link with which its holder changes it. */
import { html, type Html } from '../html.ts';

export function tellForm(action: string, isTold: boolean): Html {
  const body = isTold
    ? html`<p>A subscription is told when a planned block turns, the way its briefs go.</p><button name="stop" value="1">Tell it no more</button>`
    : html`<p class="hint">When a planned block turns, a notice can go the way your briefs go. Every brief carries a link to change its subscription: paste it here. <a href="/subscribe">Subscribe</a> first where there is none.</p>
<label>Link to change your subscription <input name="manage" size="40" maxlength="300" autocomplete="off" required></label> <button>Tell me when a block turns</button>`;
  return html`<section class="plan-tell" aria-labelledby="tell-h"><h2 id="tell-h">When a block turns</h2><form method="post" action="${action}/notice">${body}</form></section>`;
}
