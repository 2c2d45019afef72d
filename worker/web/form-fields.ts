/** Parts of a form: what was typed stays in its field, and what is wrong with it stands beside it. */
import { capital, plainText } from '../../lib/brief/words/index.ts';
import type { Issue } from '../../lib/result.ts';
import { html, type Html, type Piece } from './html.ts';

export interface Option {
  readonly id: string;
  readonly name: string;
}

export interface Field {
  readonly name: string;
  readonly label: string;
  /** What was typed, else what stands there at first. */
  readonly value: string;
  readonly problems: readonly Issue[];
  readonly hint?: string;
}

/** The problems of the places that a field stands for. */
export function problemsOf(problems: readonly Issue[], place: RegExp): Issue[] {
  return problems.filter(({ path }) => place.test(path));
}

export function problemWords(problems: readonly Issue[]): Piece {
  return problems.map(({ problem, allowed }) => `${capital(plainText(problem, 200))}; allowed: ${plainText(allowed, 200)}. `);
}

/** `control` gets the attributes that tie it to its label, its hint and its problems. */
function field({ name, label, problems, hint }: Field, control: (attributes: Html) => Html): Html {
  const [about, wrong] = [`${name}-hint`, `${name}-wrong`];
  const described = [...(hint === undefined ? [] : [about]), ...(problems.length === 0 ? [] : [wrong])].join(' ');
  const attributes = html`id="${name}" name="${name}"${described === '' ? null : html` aria-describedby="${described}"`}${problems.length === 0 ? null : html` aria-invalid="true"`}`;
  return html`<div class="field"><label for="${name}">${label}</label> ${control(attributes)}${hint === undefined ? null : html`<p class="hint" id="${about}">${hint}</p>`}
${problems.length === 0 ? null : html`<p class="wrong" id="${wrong}">${problemWords(problems)}</p>`}</div>`;
}

export function inputField(given: Field, kind: { readonly type?: string; readonly mode?: string; readonly most?: number; readonly complete?: string; readonly isRequired?: boolean; /** Filled with the reader's own where it is empty and scripts run. */ readonly isZone?: boolean } = {}): Html {
  return field(given, (attributes) => html`<input ${attributes} type="${kind.type ?? 'text'}" value="${given.value}" maxlength="${kind.most ?? 254}"${kind.mode === undefined ? null : html` inputmode="${kind.mode}"`} autocomplete="${kind.complete ?? 'off'}"${kind.isRequired === true ? html` required` : null}${kind.isZone === true ? html` data-zone` : null}>`);
}

export function selectField(given: Field, options: readonly Option[]): Html {
  const list = options.map(({ id, name }) => html`<option value="${id}"${id === given.value ? html` selected` : null}>${plainText(name)}</option>`);
  return field(given, (attributes) => html`<select ${attributes}>${list}</select>`);
}

export function checkboxes(name: string, options: readonly Option[], chosen: readonly string[]): Html {
  return html`<ul class="boxes">${options.map(({ id, name: label }) => html`<li><label><input type="checkbox" name="${name}" value="${id}"${chosen.includes(id) ? html` checked` : null}> ${plainText(label)}</label></li>`)}</ul>`;
}
