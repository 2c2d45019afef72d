import { HOUR_MS, MINUTE_MS } from '../time.ts';
import type { Verdict } from './ids.ts';
import { isOpen, worstVerdict } from './verdict.ts';

/** An hour as the windows see it. */
export interface WindowHour {
  readonly validAtMs: number;
  readonly verdict: Verdict;
  /** How long a flight begun then lasts at trim, s; NaN when it cannot be said. */
  readonly flightS: number;
}

export interface Window {
  readonly fromMs: number;
  readonly toMs: number;
  /** Last moment to launch so that the flight ends inside the window, whole minutes; null when the flight time is unknown or longer than the window. */
  readonly lastLaunchMs: number | null;
  readonly verdict: Verdict;
}

/** Maximal runs of consecutive judged instants that are within or close, first to last. One instant makes no window. */
export function windowsOf(hours: readonly WindowHour[]): Window[] {
  const sorted = [...hours].sort((a, b) => a.validAtMs - b.validAtMs);
  const runs: WindowHour[][] = [];
  for (const hour of sorted) {
    if (!isOpen(hour.verdict)) continue;
    const run = runs.at(-1);
    if (run !== undefined && hour.validAtMs - (run.at(-1)?.validAtMs ?? 0) === HOUR_MS) run.push(hour);
    else runs.push([hour]);
  }
  return runs.filter((run) => run.length > 1).map(windowOf);
}

function windowOf(run: readonly WindowHour[]): Window {
  const fromMs = run[0]!.validAtMs;
  const { validAtMs: toMs, flightS } = run.at(-1)!;
  const lastMs = Math.floor((toMs - flightS * 1000) / MINUTE_MS) * MINUTE_MS;
  return { fromMs, toMs, lastLaunchMs: lastMs >= fromMs ? lastMs : null, verdict: worstVerdict(run.map(({ verdict }) => verdict)) };
}
