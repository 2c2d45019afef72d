import type { Forecast } from '../../lib/forecast/conditions.ts';
import type { SourceFailure } from '../../lib/forecast/failure.ts';
import type { Database, Statement } from './database.ts';

/** How a fetch of one source for one site-day ended; kept with its run. */
export type FetchOutcome =
  | { readonly ok: true; readonly runAt: number }
  | { readonly ok: false; readonly error: SourceFailure };

/** Stands for a run time where the service gives none, in keys only. */
const NO_RUN_TIME = -1;

/** What a source said about a site-day, as stored: the text is parsed by whoever needs it. */
export interface StoredAnswer {
  readonly source: string;
  readonly outcome: string;
  /** The forecast of that run, null when there is none. */
  readonly body: string | null;
  readonly finishedAtMs: number;
}

/** A forecast that no brief of today or tomorrow can need any more. */
const KEPT_MS = 48 * 3_600_000;

export function runKeyOf(forecast: Forecast): number {
  return forecast.runAt === null ? NO_RUN_TIME : Date.parse(forecast.runAt);
}

export function forecastStore(db: Database) {
  return {
    /** A statement each: an ensemble may be half a megabyte, and a parameter may hold two. */
    put(forecasts: readonly { readonly siteId: string; readonly forecast: Forecast }[], nowMs: number): Statement[] {
      return forecasts.map(({ siteId, forecast }) => ({
        sql: `INSERT INTO forecast (source, site_id, run_at, fetched_at, body) VALUES (?, ?, ?, ?, ?)
          ON CONFLICT (source, site_id, run_at) DO UPDATE SET fetched_at = excluded.fetched_at, body = excluded.body`,
        values: [forecast.source, siteId, runKeyOf(forecast), nowMs, JSON.stringify(forecast)],
      }));
    },
    /** The newest answer of every source that was asked about a site-day. */
    answers(siteId: string, localDate: string): Promise<StoredAnswer[]> {
      const sql = `SELECT r.source, r.outcome, f.body, r.finished_at AS finishedAtMs FROM run AS r
        LEFT JOIN forecast AS f ON f.source = r.source AND f.site_id = r.site_id AND f.run_at = r.outcome ->> 'runAt'
        WHERE r.site_id = ? AND r.local_date = ? AND r.step = 'fetch' AND r.outcome IS NOT NULL`;
      return db.read<StoredAnswer>(sql, siteId, localDate);
    },
    /** When each source last gave a forecast, and the newest run it gave. */
    ages(): Promise<{ source: string; fetchedAtMs: number; runAtMs: number; sites: number }[]> {
      return db.read(`SELECT source, MAX(fetched_at) AS fetchedAtMs, MAX(run_at) AS runAtMs, COUNT(DISTINCT site_id) AS sites
        FROM forecast GROUP BY source ORDER BY source`);
    },
    dropOld(nowMs: number): Statement {
      return { sql: 'DELETE FROM forecast WHERE fetched_at < ?', values: [nowMs - KEPT_MS] };
    },
  };
}

export type ForecastStore = ReturnType<typeof forecastStore>;
