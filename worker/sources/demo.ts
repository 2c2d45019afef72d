/**
 * The demo's sources: invented weather for the sites of config/demo.json and for no others. What they give is marked
 * `demo`, and nothing downstream takes the mark away.
 */
import { inventedForecast } from '../../lib/forecast/invented/forecast.ts';
import type { InventedSource, Scenario } from '../../lib/forecast/invented/scenario.ts';
import { isoUtc } from '../../lib/time.ts';
import type { Source, SourceAnswer, SourceRequest } from './source.ts';

/** All invented sources of the scenario, in its order. */
export function demoSources(scenario: Scenario, nowMs: () => number): Source[] {
  return scenario.sources.map((source) => demoSource(scenario, source, nowMs));
}

function demoSource(scenario: Scenario, source: InventedSource, nowMs: () => number): Source {
  const { id, kind } = source;
  return {
    id,
    kind,
    covers: () => true,
    fetch({ sites, fromUtc, toUtc }: SourceRequest): Promise<ReadonlyMap<string, SourceAnswer>> {
      const now = isoUtc(nowMs());
      return Promise.resolve(new Map(sites.map((site) => [site.id, inventedForecast(scenario, source, { site, fromUtc, toUtc, now })])));
    },
  };
}
