import type { CautionThresholds } from './thresholds.ts';
import type { Forecast } from '../forecast/conditions.ts';
import type { SourceFailure } from '../forecast/failure.ts';
import type { LimitSheet } from '../margin/sheet.ts';
import type { Result } from '../result.ts';
import type { Site } from '../site.ts';
import type { Wing } from '../wing/wing.ts';

/** Everything a judged day is computed from. */
export interface DayInput {
  readonly site: Site;
  readonly wing: Wing;
  /** Stable key of the wing in tables and links: `EN B`, or `own-<hash>`. */
  readonly wingKey: string;
  readonly wingName: string;
  readonly sheet: LimitSheet;
  /** yyyy-mm-dd in the site's zone. */
  readonly localDate: string;
  readonly issuedAt: string;
  readonly validUntil: string;
  /** Every source that was asked, in the order of config: its forecast, or why there is none. */
  readonly answers: readonly {
    readonly source: string;
    readonly kind: 'deterministic' | 'ensemble';
    readonly outcome: Result<Forecast, SourceFailure>;
  }[];
  /** The sources asked make invented weather: said on everything, also where they give nothing. */
  readonly demo: boolean;
  readonly thresholds: CautionThresholds;
  /** Model ground last stored for a source at this site, to notice that a grid point jumped. */
  readonly storedGroundM: Readonly<Record<string, number>>;
}
