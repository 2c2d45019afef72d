// flight-model.md section 6 (status, close band) and section 7 (hour, window).
import { known } from './numbers.ts';
import { defaultCloseBand } from './tables.ts';
import type { HourAnswer, Margin, Sheet, Verdict } from './types.ts';

export type Finding = { id: string; unit: string; limit: number | null; demand: number | null; spare: number | null };

// "the smaller of the default for its unit and a quarter of the limit's size ..., unless the sheet gives one". `daylight` has no limit to
// take a quarter of and `slope` has its band printed: both as they stand.
function closeBand(finding: Finding, sheet: Sheet): number {
  const own = sheet.closeBands?.[finding.id];
  if (own !== undefined) return own;
  const usual = defaultCloseBand(finding.id, finding.unit);
  if (finding.limit === null || finding.id === 'slope' || finding.id === 'daylight') return usual;
  return Math.min(usual, Math.abs(finding.limit) / 4);
}

// `spare` NaN: unknown. `spare` null: no solution, beyond. Otherwise "beyond below 0, close below the close band, else within".
export function judge(finding: Finding, sheet: Sheet): Margin {
  const shown = (value: number | null) => (value !== null && known(value) ? value : null);
  const base = { id: finding.id, unit: finding.unit, limit: shown(finding.limit), demand: shown(finding.demand) };
  if (finding.spare === null) return { ...base, spare: null, status: 'beyond' };
  if (!known(finding.spare)) return { ...base, spare: null, status: 'unknown' };
  if (finding.spare < 0) return { ...base, spare: finding.spare, status: 'beyond' };
  if (finding.spare < closeBand(finding, sheet)) return { ...base, spare: finding.spare, status: 'close' };
  return { ...base, spare: finding.spare, status: 'within' };
}

// "any margin beyond -> beyond; else any unknown -> unknown; else any close -> close; else within. No margins: unknown."
export function hourVerdict(margins: Margin[]): { verdict: Verdict; causes: string[] } {
  const causes: string[] = [];
  for (const status of ['beyond', 'unknown', 'close'] as const) {
    for (const margin of margins) {
      if (margin.status === status && !causes.includes(margin.id)) causes.push(margin.id);
    }
  }
  if (margins.length === 0) return { verdict: 'unknown', causes };
  for (const status of ['beyond', 'unknown', 'close'] as const) {
    if (margins.some((margin) => margin.status === status)) return { verdict: status, causes };
  }
  return { verdict: 'within', causes };
}

// "a maximal run of consecutive judged instants that are within or close ...; one instant makes none"
export function windowsOf(hours: HourAnswer[]): { first: HourAnswer; last: HourAnswer; verdict: 'within' | 'close' }[] {
  const inOrder = [...hours].sort((one, other) => Date.parse(one.validAt) - Date.parse(other.validAt));
  const windows: { first: HourAnswer; last: HourAnswer; verdict: 'within' | 'close' }[] = [];
  let run: HourAnswer[] = [];
  function finish() {
    const first = run[0];
    const last = run[run.length - 1];
    if (first !== undefined && last !== undefined && run.length >= 2) {
      windows.push({ first, last, verdict: run.some((hour) => hour.verdict === 'close') ? 'close' : 'within' });
    }
    run = [];
  }
  for (const hour of inOrder) {
    const before = run[run.length - 1];
    if (before !== undefined && Date.parse(hour.validAt) - Date.parse(before.validAt) !== 3_600_000) finish();
    if (hour.verdict === 'within' || hour.verdict === 'close') run.push(hour);
    else finish();
  }
  finish();
  return windows;
}
