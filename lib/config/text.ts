/** Text that will be printed in messages, calendars and pages: what may stand in it, and how long it may be. */
import * as z from 'zod/mini';

/**
 * Control characters, line and paragraph separators, halves of pairs, private use, and everything that prints nothing
 * or turns the direction of what follows (category Cf: zero width, bidi overrides, soft hyphen, tags), with the fillers
 * that print as blank.
 */
const unprintable = /[\p{Cc}\p{Cf}\p{Zl}\p{Zp}\p{Cs}\p{Co}\u{115f}\u{1160}\u{2800}\u{3164}\u{ffa0}]/u;

/** One line of at most `most` characters, not blank. */
export function line(most: number): z.ZodMiniString {
  const allowed = `1 to ${most} characters on one line`;
  const error = (): string => allowed;
  return z.string({ error }).check(
    z.refine((text) => text.trim() !== '', { error, params: { problem: 'this text is empty' } }),
    z.refine((text) => Array.from(text).length <= most, { error, params: { problem: 'this text is too long' } }),
    z.refine((text) => !unprintable.test(text), {
      error: () => `${allowed}, all of them printable`,
      params: { problem: 'this text holds a line break, a control, a zero-width or a direction-turning character' },
    }),
  );
}

/** Like a line, but it may be empty. */
export function lineOrNothing(most: number): z.ZodMiniUnion<readonly [z.ZodMiniLiteral<''>, z.ZodMiniString]> {
  return z.union([z.literal(''), line(most)]);
}

/** An id: kebab-case, so that it can stand in paths, file names, links and tables as it is. */
export function kebabId(): z.ZodMiniString {
  const error = (): string => 'lower-case letters and digits in words joined by single hyphens (kebab-case), at most 64 characters';
  return z.string({ error }).check(z.regex(/^[a-z0-9]+(?:-[a-z0-9]+)*$/, { error }), z.maxLength(64, { error }));
}
