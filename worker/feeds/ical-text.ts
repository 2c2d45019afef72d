/** How the lines of a calendar are written (RFC 5545), whatever stands in them. */

/** TEXT of RFC 5545, 3.3.11; control characters have no place in it. */
export function icalText(text: string): string {
  return text
    .replaceAll(/\r\n?/g, '\n').replaceAll(/[^\P{Cc}\n]/gu, ' ')
    .replaceAll('\\', '\\\\').replaceAll(';', '\\;').replaceAll(',', '\\,').replaceAll('\n', '\\n');
}

/** Lines of at most 75 octets (RFC 5545, 3.1), never cut through a character. */
export function folded(line: string): string {
  const parts: string[] = [];
  let begin = 0;
  let at = 0;
  let octets = 0;
  for (const character of line) {
    const size = octetsOf(character.codePointAt(0) ?? 0);
    if (octets + size > 75) {
      parts.push(line.slice(begin, at));
      begin = at;
      // The space that begins the next line.
      octets = 1;
    }
    at += character.length;
    octets += size;
  }
  return [...parts, line.slice(begin)].join('\r\n ');
}

/** In UTF-8. */
function octetsOf(codePoint: number): number {
  if (codePoint < 0x80) return 1;
  if (codePoint < 0x800) return 2;
  return codePoint < 0x10000 ? 3 : 4;
}
