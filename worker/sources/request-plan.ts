/**
 * How a morning's questions to the Open-Meteo interface fit into its free quota: what each source costs a site, how many
 * requests that makes, and when each may be sent. Pure; npm run quota prints it.
 */
import { columnsFor } from './open-meteo/variables.ts';
import { withCompanions } from './order.ts';
import { requestWeight, schedule, type Planned, type Quota } from './quota.ts';
import { sourcesFor, type OpenMeteoSource, type SourceOrder } from '../../lib/config/source-order.ts';

export interface PlanOptions {
  readonly sites: number;
  readonly place: { readonly latDeg: number; readonly lonDeg: number };
  /** Sites asked in one request. */
  readonly sitesPerRequest: number;
  /** How many of the sites have two reference points of their own for the pressure step: the dearest case is all of them. */
  readonly sitesWithStep: number;
  readonly fromMs: number;
  readonly quota: Quota;
  /** How long a request takes. */
  readonly gapMs: number;
}

export interface PlanLine {
  readonly source: string;
  readonly variables: number;
  readonly members: number;
  readonly weightPerSite: number;
  readonly requests: number;
  readonly weight: number;
}

export interface PlannedRequest {
  readonly source: string;
  readonly weight: number;
}

export interface RequestPlan {
  readonly lines: readonly PlanLine[];
  readonly requests: readonly Planned<PlannedRequest>[];
  readonly totalWeight: number;
}

/** A day's hours stay far below the fortnight beyond which the service charges more. */
const DAYS = 2;

export function planRequests(order: SourceOrder, options: PlanOptions): RequestPlan {
  const entries = withCompanions(sourcesFor(order, options.place)).filter((entry) => entry.provider === 'open-meteo');
  const lines = entries.flatMap((entry) => linesOf(entry, options));
  const wanted = lines.flatMap((line) => requestsOf(line));
  return {
    lines,
    requests: schedule(wanted, { fromMs: options.fromMs, quota: options.quota, gapMs: options.gapMs }),
    totalWeight: lines.reduce((sum, line) => sum + line.weight, 0),
  };
}

function linesOf(entry: OpenMeteoSource, options: PlanOptions): PlanLine[] {
  const variables = columnsFor(entry).size;
  const weightPerSite = requestWeight({ variables, members: entry.members, days: DAYS });
  const line = { source: entry.id, variables, members: entry.members, weightPerSite, requests: Math.ceil(options.sites / options.sitesPerRequest), weight: weightPerSite * options.sites };
  const asksPressure = entry.kind === 'deterministic' && entry.declares.includes('referencePressureHpa') && options.sitesWithStep > 0;
  if (!asksPressure) return [line];
  const requests = Math.ceil(options.sitesWithStep / options.sitesPerRequest);
  const pair = 2 * requestWeight({ variables: 1, members: 1, days: DAYS });
  return [line, { source: `${entry.id}, pressure step`, variables: 1, members: 1, weightPerSite: pair, requests, weight: pair * options.sitesWithStep }];
}

/** Equal shares: the last request of a list is never the heaviest. */
function requestsOf({ source, requests, weight }: PlanLine): PlannedRequest[] {
  return Array.from({ length: requests }, () => ({ source, weight: weight / requests }));
}
