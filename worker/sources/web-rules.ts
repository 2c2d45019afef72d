/** Where a forecast may be asked for: https and the configured origins only; plain http to this machine with LOCAL=1. */
const loopback: ReadonlySet<string> = new Set(['127.0.0.1', '[::1]', 'localhost']);

/** The origin of a setting such as OPEN_METEO_URL, normalised by the URL parser; null when it is not allowed. */
function originOf(setting: string, local: boolean): string | null {
  const url = parsed(setting);
  if (url === null || url.username !== '' || url.password !== '') return null;
  if (url.protocol === 'https:') return url.origin;
  return local && url.protocol === 'http:' && loopback.has(url.hostname) ? url.origin : null;
}

/** Whether an address may be asked, judged on what the URL parser makes of it, never on the text. */
export function isAllowedUrl(address: string, rules: { readonly origins: readonly string[]; readonly local: boolean }): boolean {
  const origin = originOf(address, rules.local);
  return origin !== null && rules.origins.some((allowed) => originOf(allowed, rules.local) === origin);
}

function parsed(text: string): URL | null {
  try {
    return new URL(text);
  } catch {
    return null;
  }
}
