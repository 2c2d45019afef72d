// Words that must never stand in a text of ours, and the marks of a value that slipped through.
const FORBIDDEN = /\b(safe|safely|good|go|ok|okay|green|red|fly|no-fly|stars?|scores?|thumbs?|ticks?|perfect|ideal|excellent)\b/giu;
const LEAKS = /\b(undefined|NaN|null|Infinity|true|false)\b|\[object/gu;
const SPACING = / {2,}(?!\S)|\S {2,}| [,;.:]|\.\.|,,/gu;

/** Everything wrong with a text, or nothing. */
export function blemishes(text: string): string[] {
  return [FORBIDDEN, LEAKS, SPACING].flatMap((pattern) => [...text.matchAll(pattern)].map((match) => `"${match[0]}" in "${text}"`));
}
