/**
 * JSON from a provider. The platform's parser builds the value (a provider's answer is large and the free plan has 10 ms);
 * one pass over the text finds what it lets through in silence: a key that comes twice (the second value would win) and
 * lists inside lists without end. Numbers beyond a double become Infinity here and missing values later.
 */
const MAX_DEPTH = 32;

/** The value, or undefined when the text is not one JSON value with unique keys and bounded depth. */
export function readJson(text: string): unknown {
  try {
    const value: unknown = JSON.parse(text);
    return hasUniqueKeys(text) ? value : undefined;
  } catch {
    return undefined;
  }
}

const BACKSLASH = 0x5c;

/** Where something opens or closes, and the commas before a string: the rest of a long list of numbers is jumped over. */
const turningPoint = /["[\]{}]|,(?=\s*")/g;

/** Of a text that is JSON already. */
function hasUniqueKeys(text: string): boolean {
  /** The keys of each object we are inside of; null for a list. */
  const inside: (Set<string> | null)[] = [];
  let keys: Set<string> | null = null;
  let isKeyNext = false;
  turningPoint.lastIndex = 0;
  for (let found = turningPoint.exec(text); found !== null; found = turningPoint.exec(text)) {
    const mark = found[0];
    if (mark === '"') {
      const end = endOfString(text, found.index);
      if (isKeyNext && keys !== null) {
        const key = keyOf(text.slice(found.index, end + 1));
        if (keys.has(key)) return false;
        keys.add(key);
      }
      isKeyNext = false;
      turningPoint.lastIndex = end + 1;
    } else if (mark === ',') {
      isKeyNext = keys !== null;
    } else if (mark === '{' || mark === '[') {
      if (inside.length >= MAX_DEPTH) return false;
      keys = mark === '{' ? new Set() : null;
      inside.push(keys);
      isKeyNext = keys !== null;
    } else {
      inside.pop();
      keys = inside.at(-1) ?? null;
      isKeyNext = false;
    }
  }
  return true;
}

/** Where the string that opens at `start` closes. */
function endOfString(text: string, start: number): number {
  let end = text.indexOf('"', start + 1);
  while (isEscaped(text, end)) end = text.indexOf('"', end + 1);
  return end;
}

function isEscaped(text: string, at: number): boolean {
  let before = at - 1;
  while (text.charCodeAt(before) === BACKSLASH) before -= 1;
  return (at - before) % 2 === 0;
}

/** Two spellings of one key are one key: "wind_gusts" and "wind\u005fgusts". */
function keyOf(quoted: string): string {
  return quoted.includes('\\') ? String(JSON.parse(quoted)) : quoted.slice(1, -1);
}
