/**
 * Why a source has no vote. Evidence is numbers and words of ours only: nothing a provider wrote is ever kept here,
 * so that none of it can reach a page or a message.
 */
export type SourceFailure =
  | { readonly kind: 'unreachable' }
  | { readonly kind: 'timeout'; readonly afterMs: number }
  | { readonly kind: 'too-large'; readonly limitBytes: number }
  | { readonly kind: 'redirected' }
  | { readonly kind: 'refused'; readonly status: number }
  | { readonly kind: 'rate-limited'; readonly retryAfterS: number | null }
  | { readonly kind: 'server-error'; readonly status: number }
  | { readonly kind: 'breaker-open'; readonly until: string }
  | { readonly kind: 'not-json' }
  | { readonly kind: 'content-type' }
  | { readonly kind: 'shape'; readonly path: string }
  | { readonly kind: 'unit'; readonly field: string; readonly expected: string; readonly found: string | null }
  | { readonly kind: 'times'; readonly why: 'unsorted' | 'duplicate' | 'gap' | 'not-hourly' | 'not-utc' | 'wrong-day' | 'empty' }
  | { readonly kind: 'run-missing' }
  | { readonly kind: 'run-old'; readonly ageHours: number }
  | { readonly kind: 'run-future'; readonly aheadHours: number }
  | { readonly kind: 'place'; readonly distanceKm: number }
  /** `byM`: how far the model's ground moved since it was stored, or how far it lies above the site. */
  | { readonly kind: 'ground'; readonly why: 'missing' | 'changed' | 'above-site'; readonly byM: number | null }
  | { readonly kind: 'constant'; readonly field: 'wind10m' | 'gustMps' | 'temperature2mC' }
  | { readonly kind: 'withheld' }
  | { readonly kind: 'not-covered' }
  | { readonly kind: 'not-fetched' };

/** Failures that say something about the host. A refusal is about what was asked; the host is well. */
export function isOfTheHost(failed: SourceFailure): boolean {
  switch (failed.kind) {
    case 'unreachable':
    case 'timeout':
    case 'too-large':
    case 'redirected':
    case 'rate-limited':
    case 'server-error':
    case 'breaker-open':
    case 'not-json':
    case 'content-type':
      return true;
    case 'refused':
    case 'shape':
    case 'unit':
    case 'times':
    case 'run-missing':
    case 'run-old':
    case 'run-future':
    case 'place':
    case 'ground':
    case 'constant':
    case 'withheld':
    case 'not-covered':
    case 'not-fetched':
      return false;
  }
}
