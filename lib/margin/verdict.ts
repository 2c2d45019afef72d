import type { Margin, Verdict } from './ids.ts';

/** From statuses to verdicts. The order of severity is beyond, unknown, close, within; nothing at all is unknown. */
const SEVERITY: Readonly<Record<Verdict, number>> = { within: 0, close: 1, unknown: 2, beyond: 3 };

/** Positive when `a` is the more severe. */
export function moreSevere(a: Verdict, b: Verdict): number {
  return SEVERITY[a] - SEVERITY[b];
}

/** The most severe of some verdicts: of an hour over its margins, of a day over its hours. None: unknown. */
export function worstVerdict(verdicts: readonly Verdict[]): Verdict {
  let worst: Verdict | null = null;
  for (const verdict of verdicts) if (worst === null || moreSevere(verdict, worst) > 0) worst = verdict;
  return worst ?? 'unknown';
}

/** Margins that make a verdict, beyond first, then unknown, then close; in the order given within each. */
export function causesOf(margins: readonly { readonly id: Margin['id']; readonly status: Verdict }[]): Margin['id'][] {
  return (['beyond', 'unknown', 'close'] as const).flatMap((status) => margins.filter((each) => each.status === status).map(({ id }) => id));
}

/** Whether an hour may be part of a window. */
export function isOpen(verdict: Verdict): boolean {
  return verdict === 'within' || verdict === 'close';
}
