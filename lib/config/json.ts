/**
 * JSON (RFC 8259) from outside, read strictly: what JSON.parse lets pass in silence is an issue here. A key that comes
 * twice, a number too large for a double, `__proto__`, too many levels and too many bytes are all reported with their
 * path; broken JSON with line and column. A byte order mark is accepted. Nothing read here can reach a prototype.
 */
import { failure, success, type Issue, type Result } from '../result.ts';
import { capped } from './check.ts';
import { Reader, Unreadable } from './json-reader.ts';

export interface JsonBounds {
  /** Of UTF-8. */
  readonly maxBytes: number;
  /** Lists and objects inside one another; the outermost counts. */
  readonly maxDepth: number;
}

/** What a request or a configuration file may be: 256 KiB, 12 levels. */
export const DEFAULT_BOUNDS: JsonBounds = { maxBytes: 256 * 1024, maxDepth: 12 };

export function parseJsonStrict(text: string, bounds: JsonBounds = DEFAULT_BOUNDS): Result<unknown, Issue[]> {
  if (isLongerThan(text, bounds.maxBytes)) {
    const allowed = `at most ${bounds.maxBytes} bytes`;
    return failure([{ path: '$', value: `${text.length} characters`, problem: 'the text is too long', allowed }]);
  }
  const reader = new Reader(text, bounds.maxDepth);
  try {
    const value = reader.document();
    return reader.issues.length === 0 ? success(value) : failure(capped(reader.issues));
  } catch (error) {
    if (!(error instanceof Unreadable)) throw error;
    return failure(capped([...reader.issues, error.issue]));
  }
}

function isLongerThan(text: string, maxBytes: number): boolean {
  if (text.length > maxBytes) return true;
  if (text.length * 3 <= maxBytes) return false;
  let bytes = 0;
  for (const character of text) {
    const code = character.codePointAt(0) ?? 0;
    bytes += code < 0x80 ? 1 : code < 0x800 ? 2 : code < 0x10000 ? 3 : 4;
  }
  return bytes > maxBytes;
}
