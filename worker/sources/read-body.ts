import { before, PASSED, type Deadline } from './deadline.ts';
import type { SourceFailure } from '../../lib/forecast/failure.ts';
import { failure, success, type Result } from '../../lib/result.ts';

/**
 * The text of an answer, read as UTF-8 while counting bytes. The platform has unpacked it by now, so the count is of
 * unpacked bytes and a small bomb is as large as what it hides. A body that breaks off never gives a part of itself.
 */
export async function readBody(
  response: Response,
  bounds: { readonly maxBytes: number; readonly deadline: Deadline; readonly timeoutMs: number },
): Promise<Result<string, SourceFailure>> {
  if (response.body === null) return failure({ kind: 'not-json' });
  const reader: ReadableStreamDefaultReader<Uint8Array> = response.body.getReader();
  const giveUp = (why: SourceFailure): Result<string, SourceFailure> => {
    reader.cancel().catch(() => undefined);
    return failure(why);
  };
  const decoder = new TextDecoder('utf-8', { fatal: true, ignoreBOM: false });
  let text = '';
  let bytes = 0;
  for (;;) {
    const step = await before(reader.read(), bounds.deadline);
    if (step === PASSED) return giveUp({ kind: 'timeout', afterMs: bounds.timeoutMs });
    const decoded = decode(decoder, step.done ? undefined : step.value);
    if (decoded === null) return giveUp({ kind: 'not-json' });
    text += decoded;
    if (step.done) return success(text);
    bytes += step.value.byteLength;
    if (bytes > bounds.maxBytes) return giveUp({ kind: 'too-large', limitBytes: bounds.maxBytes });
  }
}

/** The next characters, null when the bytes are not UTF-8. The last call has no bytes. */
function decode(decoder: TextDecoder, bytes: Uint8Array | undefined): string | null {
  try {
    return bytes === undefined ? decoder.decode() : decoder.decode(bytes, { stream: true });
  } catch {
    return null;
  }
}
