/** Names and lists as text: what a person outside typed is made inert, and short enough to leave room for the verdict. */

const NAME_LENGTH = 80;

/** Controls, line and paragraph separators, bidi controls, zero-width and invisible characters, lone surrogates. */
const INVISIBLE = /[\p{Cc}\p{Cf}\p{Cs}\p{Co}\p{Zl}\p{Zp}\u115f\u1160\u3164\uffa0]+/gu;

/** A name or note that somebody typed, on one line, without anything that could move or hide its neighbours. */
export function plainText(text: string, length: number = NAME_LENGTH): string {
  const flat = text.replace(INVISIBLE, ' ').replace(/\s+/gu, ' ').trim();
  const points = Array.from(flat);
  return points.length > length ? `${points.slice(0, length - 1).join('').trimEnd()}…` : flat;
}

/** A name stands before its verdict, so it may not sound like one. */
const SOUNDS_LIKE_A_VERDICT = /within\s+limits|close\s+to\s+a\s+limit|beyond\s+a\s+limit|cannot\s+say/iu;

/** The name of a place; a nameless one, or one named like a verdict, is called by its id. */
export function placeName(place: { readonly name: string; readonly id: string }): string {
  const usable = [place.name, place.id].map((text) => plainText(text)).filter((text) => text !== '' && !SOUNDS_LIKE_A_VERDICT.test(text));
  return usable[0] ?? 'a site without a name';
}

/** a, b and c. */
export function listed(items: readonly string[], joint: 'and' | 'or' = 'and'): string {
  if (items.length < 2) return items[0] ?? '';
  return `${items.slice(0, -1).join(', ')} ${joint} ${items[items.length - 1]}`;
}

export function counted(count: number, one: string, many: string): string {
  return `${count} ${count === 1 ? one : many}`;
}

export function capital(text: string): string {
  return text.slice(0, 1).toUpperCase() + text.slice(1);
}

/** One sentence with a full stop. */
export function sentence(text: string): string {
  const trimmed = text.trim();
  return /[.!?…]$/u.test(trimmed) ? capital(trimmed) : `${capital(trimmed)}.`;
}
