/** The hatches that pictures share, defined once a page. Colours come from the style sheet, so both themes have theirs. */
import { html, type Html } from '../html.ts';

export const HATCHES: Html = html`<svg class="hatches" width="0" height="0" aria-hidden="true" focusable="false"><defs>
<pattern id="h-crab" width="4" height="4" patternUnits="userSpaceOnUse" patternTransform="rotate(45)"><path class="slate" d="M0 0V4" stroke-width="3"/></pattern>
<pattern id="h-reserve" width="4" height="4" patternUnits="userSpaceOnUse"><path class="ochre" d="M0 2H4" stroke-width="2"/></pattern>
<pattern id="h-close" width="7" height="7" patternUnits="userSpaceOnUse" patternTransform="rotate(45)"><path class="ink" d="M0 0V7" stroke-width="1.2"/></pattern>
<pattern id="h-beyond" width="4" height="4" patternUnits="userSpaceOnUse" patternTransform="rotate(45)"><path class="ink" d="M0 0V4M0 0H4" stroke-width="1.1"/></pattern>
<pattern id="h-unknown" width="6" height="6" patternUnits="userSpaceOnUse"><circle class="dot" cx="1.5" cy="1.5" r=".9"/><circle class="dot" cx="4.5" cy="4.5" r=".9"/></pattern>
</defs></svg>`;
