import { parseJsonStrict } from '../../lib/config/json.ts';
import type { Result } from '../../lib/result.ts';
import { problem } from './problem.ts';

/** The JSON of a request, read strictly and only up to a size; or the answer that says what is wrong with it. */
export async function jsonBody(request: Request, maxBytes: number): Promise<Result<unknown, Response>> {
  const type = request.headers.get('content-type') ?? '';
  if (!/^application\/(?:geo\+)?json\s*(;|$)/i.test(type)) return { ok: false, error: problem('wrong-type', { detail: 'content-type must be application/json (or application/geo+json)' }) };
  const tooLarge = (): Result<never, Response> => ({ ok: false, error: problem('too-large', { detail: `at most ${maxBytes} bytes are read` }) });
  if (Number(request.headers.get('content-length') ?? 0) > maxBytes) return tooLarge();
  const bytes = await readUpTo(request.body, maxBytes);
  if (bytes === null) return tooLarge();
  let text: string;
  try {
    text = new TextDecoder('utf-8', { fatal: true, ignoreBOM: false }).decode(bytes);
  } catch {
    const issue = { path: '$', value: `${bytes.length} bytes`, problem: 'the text is not UTF-8', allowed: 'UTF-8' };
    return { ok: false, error: problem('bad-input', { problems: [issue] }) };
  }
  const value = parseJsonStrict(text, { maxBytes, maxDepth: 12 });
  return value.ok ? value : { ok: false, error: problem('bad-input', { problems: value.error }) };
}

export async function readUpTo(body: ReadableStream<Uint8Array> | null, maxBytes: number): Promise<Uint8Array | null> {
  if (body === null) return new Uint8Array();
  const parts: Uint8Array[] = [];
  let length = 0;
  for await (const part of body) {
    length += part.length;
    // Leaving the loop cancels the stream.
    if (length > maxBytes) return null;
    parts.push(part);
  }
  const whole = new Uint8Array(length);
  let at = 0;
  for (const part of parts) {
    whole.set(part, at);
    at += part.length;
  }
  return whole;
}
