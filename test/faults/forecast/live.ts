// The live adapters against the test server, with a clock of our own and nothing kept but what a test keeps.
import { judge, order, site as alpineSite } from '../../lib/sources/pipeline.ts';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import type { SourceOrder } from '../../../lib/config/source-order.ts';
import type { Site } from '../../../lib/site.ts';
import { forgetful, liveSources, type SourceSettings, type SourceWorld } from '../../../worker/sources/order.ts';
import { BOUNDS, type Bounds } from '../../../worker/sources/safe-fetch.ts';
import type { Source, SourceAnswer, SourceNotice } from '../../../worker/sources/source.ts';

export { alpineSite };

/** For services that hang. Too short for a busy machine where an answer is awaited. */
export const SHORT: Bounds = { ...BOUNDS, totalMs: 500, firstTryMs: 200 };
const request = { fromUtc: '2027-05-13T21:00:00Z', toUtc: '2027-05-14T23:00:00Z' };
export const fetchMs = Date.parse('2027-05-14T02:40:00Z');

/** A site like the alpine one, somewhere else. */
export function siteAt(id: string, latDeg: number, lonDeg: number, changes: Partial<Site> = {}): Site {
  return { ...alpineSite, id, latDeg, lonDeg, ...changes } as Site;
}

/** Only some of the configured sources, so that a test counts what it looks at. */
export function onlySources(...ids: readonly string[]): SourceOrder {
  return { ...order, sources: order.sources.filter(({ id }) => ids.includes(id)) };
}

export interface Live {
  readonly sources: readonly Source[];
  readonly notices: SourceNotice[];
  source(id: string): Source;
  ask(id: string, ...sites: readonly Site[]): Promise<ReadonlyMap<string, SourceAnswer>>;
  one(id: string): Promise<SourceAnswer>;
  /** Asks every source of the alpine site in order and judges its day from what they say. */
  day(sheetId?: string): Promise<JudgedDay>;
}

export interface LiveOptions {
  readonly origin: string;
  readonly now?: () => number;
  readonly kept?: Pick<SourceWorld, 'cache' | 'breakers'>;
  readonly settings?: Partial<SourceSettings>;
  readonly order?: SourceOrder;
  readonly place?: Site;
  readonly fetch?: SourceWorld['fetch'];
  readonly bounds?: Bounds;
}

/** The sources of one invocation. */
export function live(options: LiveOptions): Live {
  const { origin, place = alpineSite } = options;
  const notices: SourceNotice[] = [];
  const settings: SourceSettings = {
    openMeteoUrl: origin, openMeteoEnsembleUrl: origin, metNorwayUrl: origin, nwsUrl: origin, openMeteoKey: null, contact: 'mailto:ops@club.example', ...options.settings,
  };
  const world: SourceWorld = {
    fetch: options.fetch ?? fetch, now: options.now ?? (() => fetchMs), local: true, bounds: options.bounds ?? BOUNDS, ...(options.kept ?? forgetful()),
    report: (notice) => notices.push(notice),
  };
  const sources = liveSources(options.order ?? order, settings, world)(place);
  const source = (id: string): Source => {
    const found = sources.find((candidate) => candidate.id === id);
    if (found === undefined) throw new Error(`no source "${id}" here, only ${sources.map((one) => one.id).join(', ')}`);
    return found;
  };
  const ask: Live['ask'] = (id, ...sites) => source(id).fetch({ ...request, sites });
  const one: Live['one'] = async (id) => (await ask(id, place)).get(place.id)!;
  return {
    sources, notices, source, ask, one,
    async day(sheetId = 'descent-experienced') {
      const answers: { source: string; kind: Source['kind']; outcome: SourceAnswer }[] = [];
      for (const { id, kind } of sources) answers.push({ source: id, kind, outcome: await one(id) });
      return judge(answers, { site: place, sheetId });
    },
  };
}
