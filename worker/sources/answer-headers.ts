/** The few headers of an answer that are read. Each comes out as a number of ours or not at all; texts are not kept. */
const httpDate =
  /^(?:Mon|Tue|Wed|Thu|Fri|Sat|Sun), \d{2} (?:Jan|Feb|Mar|Apr|May|Jun|Jul|Aug|Sep|Oct|Nov|Dec) \d{4} \d{2}:\d{2}:\d{2} GMT$/;

/** RFC 9110 IMF-fixdate as epoch ms; writing it back with toUTCString gives the same text. */
export function httpDateMs(text: string | null): number | null {
  if (text === null || !httpDate.test(text)) return null;
  const ms = Date.parse(text);
  return Number.isFinite(ms) && new Date(ms).toUTCString() === text ? ms : null;
}

/** Retry-After in seconds from `nowMs`, which may be given as seconds or as a date; null when absent or unreadable. */
export function retryAfterS(text: string | null, nowMs: number): number | null {
  if (text === null) return null;
  if (/^\d{1,7}$/.test(text)) return Number(text);
  const ms = httpDateMs(text);
  return ms === null ? null : Math.max(0, Math.ceil((ms - nowMs) / 1000));
}

/** JSON by its content type, in UTF-8 or without a word about its encoding. */
export function isJsonType(contentType: string | null): boolean {
  const [type = '', ...parameters] = (contentType ?? '').toLowerCase().split(';').map((part) => part.trim());
  const isJson = type === 'application/json' || /^application\/[a-z0-9.-]+\+json$/.test(type);
  const charset = parameters.find((parameter) => parameter.startsWith('charset='));
  return isJson && (charset === undefined || /^charset="?utf-8"?$/.test(charset));
}
