/** Retry-After (RFC 9110, 10.2.3): seconds or a date. null when it is absent or neither. */
export function retryAfterMs(header: string | null, nowMs: number): number | null {
  if (header === null) return null;
  const text = header.trim();
  if (/^\d{1,9}$/.test(text)) return Number(text) * 1000;
  const at = /^[A-Z][a-z]{2}, \d{2} [A-Z][a-z]{2} \d{4} \d{2}:\d{2}:\d{2} GMT$/.test(text) ? Date.parse(text) : NaN;
  return Number.isFinite(at) ? Math.max(0, at - nowMs) : null;
}
