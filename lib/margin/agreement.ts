import { quantile } from '../numeric/quantile.ts';
import type { HourView } from './hour-view.ts';
import type { Margin, MarginId, MarginUnit, Verdict } from './ids.ts';
import { measure } from './judge-member.ts';
import { closeBand, margin } from './margin.ts';
import type { Rule } from './rule.ts';
import { worstVerdict } from './verdict.ts';

/** More unknown members than this share make the agreement unknown. */
const UNKNOWN_SHARE = 0.2;

export interface MemberSpread {
  readonly id: MarginId;
  readonly unit: MarginUnit;
  readonly medianSpare: number;
  /** The spare that nine members in ten exceed. */
  readonly adverseSpare: number;
}

export interface EnsembleHour {
  /** null when the ensemble's fields feed no margin of this sheet, or the sheet asks for no agreement. */
  readonly agreement: Margin | null;
  /** The margins its fields can feed: what the members agree about. */
  readonly about: readonly MarginId[];
  readonly spreads: readonly MemberSpread[];
}

/**
 * One hour of an ensemble: the share of members neither beyond nor unknown over the margins its declared fields can
 * feed, and for display the median and adverse decile of each spare (Hyndman & Fan 1996, type 8).
 */
export function ensembleHour(rules: readonly Rule[], members: readonly HourView[], minAgreement: number | undefined): EnsembleHour {
  const statuses: Verdict[] = [];
  const spares = new Map<MarginId, { unit: MarginUnit; values: number[] }>();
  // What the first member's fields cannot feed the others' cannot either; what needs no field is no matter of agreement.
  // A margin that does not apply to the first (its wind blows from no sector) may still apply to another.
  const [first] = members;
  const fed = first === undefined ? [] : rules.filter((rule) => rule.needs(first).length > 0 && measure(rule, first)?.noVote !== true);
  for (const view of members) {
    const margins = fed.flatMap((rule) => measure(rule, view) ?? []).filter(({ noVote }) => !noVote);
    statuses.push(worstVerdict(margins.map(({ status }) => status)));
    for (const { id, unit, spare } of margins) {
      const entry = spares.get(id) ?? { unit, values: [] };
      if (spare !== null) entry.values.push(spare);
      spares.set(id, entry);
    }
  }
  const about = [...spares.keys()];
  return {
    agreement: about.length === 0 || minAgreement === undefined ? null : agreementMargin(statuses, minAgreement, members[0]?.setup.sheet.closeBands.agreement),
    about,
    spreads: [...spares].flatMap(([id, { unit, values }]) => (values.length === 0 ? [] : [{ id, unit, medianSpare: quantile(values, 0.5), adverseSpare: quantile(values, 0.1) }])),
  };
}

function agreementMargin(statuses: readonly Verdict[], minAgreement: number, sheetBand: number | undefined): Margin {
  const unknown = statuses.filter((status) => status === 'unknown').length;
  const agreeing = statuses.filter((status) => status === 'within' || status === 'close').length;
  const demand = statuses.length === 0 || unknown / statuses.length > UNKNOWN_SHARE ? NaN : agreeing / statuses.length;
  const band = closeBand('agreement', { unit: 'share', limit: minAgreement, sheetBand });
  const { spare, status } = margin({ demand, limit: minAgreement, sense: 'atLeast', band });
  return { id: 'agreement', spare, limit: minAgreement, demand: Number.isNaN(demand) ? null : demand, unit: 'share', status, missing: status === 'unknown' ? [`${unknown} of ${statuses.length} members`] : [], noVote: false };
}
