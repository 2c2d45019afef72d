/** How the lines of a calendar are written (RFC 5545), whatever stands in them. */

/** TEXT of RFC 5545, 3.3.11; control characters have no place in it. */
export function icalText(text: string): string {
  return text
    .replaceAll(/\r\n?/g, '\n').replaceAll(/[^\P{Cc}\n]/gu, ' ')
    .replaceAll('\\', '\\\\').replaceAll(';', '\\;').replaceAll(',', '\\,').replaceAll('\n', '\\n');
}

const encoder = new TextEncoder();

/** Lines of at most 75 octets (RFC 5545, 3.1), never cut through a character. */
export function folded(line: string): string {
  const parts: string[] = [];
  let part = '';
  let octets = 0;
  for (const character of line) {
    const size = encoder.encode(character).length;
    if (octets + size > 75) {
      parts.push(part);
      part = ' ';
      octets = 1;
    }
    part += character;
    octets += size;
  }
  return [...parts, part].join('\r\n');
}
