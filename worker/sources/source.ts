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
  /** The origin it is asked at: what hangs for one source of a host hangs for all. */
  readonly host?: string;
  /** How many sites may be asked in one go, where the service answers so much for each that fewer fit into a message. */
  readonly maxSites?: number;
  /** What one site costs of the service's quota, where it counts. */
  readonly weightPerSite?: number;
  /** Whether the service's region holds this place at all. */
  covers(place: { readonly latDeg: number; readonly lonDeg: number }): boolean;
  fetch(request: SourceRequest): Promise<ReadonlyMap<string, SourceAnswer>>;
}

/** Something an operator should know about a source that still works. */
export interface SourceNotice {
  readonly source: string;
  /** `deprecated`: the service says that this product is on its way out. */
  readonly notice: 'deprecated';
}

export type Report = (notice: SourceNotice) => void;
