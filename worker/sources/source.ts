import type { Forecast } from '../../lib/forecast/conditions.ts';
import type { SourceFailure } from '../../lib/forecast/failure.ts';
import type { Result } from '../../lib/result.ts';
import type { Site } from '../../lib/site.ts';

/** What the morning asks of a source: some sites of one region and the instants it needs, both ends included, on the hour, UTC. */
export interface SourceRequest {
  readonly sites: readonly Site[];
  readonly fromUtc: string;
  readonly toUtc: string;
}

export type SourceAnswer = Result<Forecast, SourceFailure>;

/**
 * A forecast service behind one question. A source turns payloads into Forecasts or tagged failures; it never judges
 * and never throws for anything the world did. The answer has one entry for every site asked.
 */
export interface Source {
  /** Stable id that appears in briefs and tables: `open-meteo:icon_d2`. */
  readonly id: string;
  readonly kind: 'deterministic' | 'ensemble';
  /** Whether the service's region holds this place at all. */
  covers(place: { readonly latDeg: number; readonly lonDeg: number }): boolean;
  fetch(request: SourceRequest): Promise<ReadonlyMap<string, SourceAnswer>>;
}
