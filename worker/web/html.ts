/**
 * The one encoder of markup, for HTML and the SVG in it. A template's own text is markup; everything put into it is
 * text and is escaped, whatever it is, unless it was made by a template too. Attribute values are always quoted.
 */

/** Markup that this module made, and nobody else can. */
export class Html {
  readonly #markup: string;
  private constructor(markup: string) {
    this.#markup = markup;
  }
  static ofTemplate(markup: string): Html {
    return new Html(markup);
  }
  toString(): string {
    return this.#markup;
  }
}

export type Piece = string | number | Html | null | false | readonly Piece[];

/** Controls, bidi and invisible characters: none may reach a page, whoever typed them. Line feed and tab are layout. */
const INVISIBLE = /[\p{Cf}\p{Cs}\p{Zl}\p{Zp}]|[^\P{Cc}\n\t]/gu;

const ENTITY: Readonly<Record<string, string>> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', "'": '&#39;', '`': '&#96;' };

function escapeText(text: string): string {
  return text.replace(INVISIBLE, ' ').replace(/[&<>"'`]/g, (character) => ENTITY[character] ?? '');
}

function piece(value: Piece): string {
  if (value === null || value === false) return '';
  if (typeof value === 'string') return escapeText(value);
  if (typeof value === 'number') return Number.isFinite(value) ? String(value) : 'not known';
  if (value instanceof Html) return value.toString();
  return value.map(piece).join('');
}

export function html(strings: TemplateStringsArray, ...values: readonly Piece[]): Html {
  let markup = strings[0] ?? '';
  values.forEach((value, index) => {
    markup += piece(value) + (strings[index + 1] ?? '');
  });
  return Html.ofTemplate(markup);
}

/** Coordinates in a picture: a tenth of a pixel is enough, and shorter. */
export function px(value: number): string {
  return Number.isFinite(value) ? String(Math.round(value * 10) / 10) : '0';
}
