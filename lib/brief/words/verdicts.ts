/** The four verdicts. These phrases stand only for hours, windows and days that have the verdict. */
import type { Verdict } from '../../margin/ids.ts';

export function verdictPhrase(verdict: Verdict): string {
  switch (verdict) {
    case 'within': return 'within limits';
    case 'close': return 'close to a limit';
    case 'beyond': return 'beyond a limit';
    case 'unknown': return 'cannot say';
  }
}

/** From most permissive (0) to most restrictive: beyond is proven, unknown is not. */
export function restrictiveness(verdict: Verdict): number {
  switch (verdict) {
    case 'within': return 0;
    case 'close': return 1;
    case 'unknown': return 2;
    case 'beyond': return 3;
  }
}

export function mostRestrictive(verdicts: readonly Verdict[]): Verdict {
  // Of nothing, nothing can be said.
  return verdicts.reduce<Verdict | null>(
    (worst, verdict) => (worst === null || restrictiveness(verdict) > restrictiveness(worst) ? verdict : worst), null,
  ) ?? 'unknown';
}

export function isOpen(verdict: Verdict): boolean {
  return verdict === 'within' || verdict === 'close';
}
