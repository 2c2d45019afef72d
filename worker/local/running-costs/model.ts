/** From counts of a measured day to what a house of any size needs of the platform, and what that costs a month. */

/** How a count grows: so much a day for the house itself, a site, a subscriber, and a wing of somebody's own. */
export interface Growth {
  readonly house: number;
  readonly site: number;
  readonly subscriber: number;
  readonly ownWing: number;
  /** For each site and subscriber at once: what is looked through for everybody while each site is worked on. */
  readonly siteAndSubscriber?: number;
}

export interface Load {
  readonly sites: number;
  readonly subscribers: number;
  readonly ownWings: number;
  readonly pageViewsPerSubscriber: number;
}

/** Counts that are measured, per day unless the name says otherwise. */
export const COUNTED = ['invocations', 'queueOperations', 'rowsRead', 'rowsWritten', 'storedBytes'] as const;
export type Counted = (typeof COUNTED)[number];

export interface Counts {
  readonly growth: Readonly<Record<Counted, Growth>>;
  /** The most calls of database, queue and fetch that one invocation made, at any size. */
  readonly mostCalls: number;
  /** How many days of briefs and deliveries are kept. */
  readonly keptDays: number;
  readonly crons: number;
}

export interface Line {
  readonly name: string;
  readonly need: number;
  readonly limit: number;
}

export interface Needs extends Readonly<Record<Counted, number>> {
  readonly requests: number;
  readonly databaseBytes: number;
}

export function needsOf(counts: Counts, { sites, subscribers, ownWings, pageViewsPerSubscriber }: Load): Needs {
  const of = ({ house, site, subscriber, ownWing, siteAndSubscriber = 0 }: Growth): number =>
    Math.ceil(house + site * sites + subscriber * subscribers + ownWing * ownWings + siteAndSubscriber * sites * subscribers);
  const { invocations, queueOperations, rowsRead, rowsWritten, storedBytes } = counts.growth;
  return {
    invocations: of(invocations),
    queueOperations: of(queueOperations),
    rowsRead: of(rowsRead),
    rowsWritten: of(rowsWritten),
    storedBytes: of(storedBytes),
    requests: of(invocations) + Math.ceil(subscribers * pageViewsPerSubscriber),
    databaseBytes: of(storedBytes) * counts.keptDays,
  };
}

/** What a plan gives; a count that a plan does not bound is left out. */
export interface Plan {
  readonly callsAnInvocation: number;
  readonly crons: number;
  readonly databaseBytes: number;
  readonly requestsADay?: number;
  readonly queueOperationsADay?: number;
  readonly rowsReadADay?: number;
  readonly rowsWrittenADay?: number;
}

export function linesOf(plan: Plan, counts: Counts, needs: Needs, weather: Line): Line[] {
  const bounded: readonly (readonly [string, number, number | undefined])[] = [
    ['calls in one invocation', counts.mostCalls, plan.callsAnInvocation],
    ['cron triggers', counts.crons, plan.crons],
    ['requests and invocations a day', needs.requests, plan.requestsADay],
    ['queue operations a day', needs.queueOperations, plan.queueOperationsADay],
    ['database rows read a day', needs.rowsRead, plan.rowsReadADay],
    ['database rows written a day', needs.rowsWritten, plan.rowsWrittenADay],
    ['database size, bytes', needs.databaseBytes, plan.databaseBytes],
  ];
  return [...bounded.flatMap(([name, need, limit]) => (limit === undefined ? [] : [{ name, need, limit }])), weather];
}

/** How much of what the plan gives is needed: above 1 it does not fit. */
export function shareOf({ need, limit }: Line): number {
  return need / limit;
}

/** The line that gives way first; the most heavily used one when all hold. */
export function bindingLine(lines: readonly Line[]): Line | undefined {
  return [...lines].sort((one, other) => shareOf(other) - shareOf(one))[0];
}

/** A month's charge beyond what the plan includes. */
export interface Meter {
  readonly name: string;
  readonly of: keyof Needs;
  readonly includedAMonth: number;
  readonly usdPerMillion: number;
}

export interface Prices {
  readonly baseUsd: number;
  readonly meters: readonly Meter[];
}

export interface Charge {
  readonly name: string;
  readonly amountAMonth: number;
  readonly usd: number;
}

const DAYS_A_MONTH = 31;

/** Every charge of the longest month. What is stored is not used up: it counts once, not per day. */
export function chargesOf({ baseUsd, meters }: Prices, needs: Needs): Charge[] {
  const metered = meters.map(({ name, of, includedAMonth, usdPerMillion }) => {
    const amountAMonth = needs[of] * (of === 'databaseBytes' ? 1 : DAYS_A_MONTH);
    return { name, amountAMonth, usd: (Math.max(0, amountAMonth - includedAMonth) / 1e6) * usdPerMillion };
  });
  return [{ name: 'the plan itself', amountAMonth: 1, usd: baseUsd }, ...metered];
}
