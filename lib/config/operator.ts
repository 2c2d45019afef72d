/** What an operator hands in besides sites and sheets: the pairs that the board shows, and whom to forget. */
import * as z from 'zod/mini';
import { failure, success, type Issue, type Result } from '../result.ts';
import { check, issue } from './check.ts';
import { fields, list, once, oneOf, trueOrFalse } from './fields.ts';
import { kebabId } from './text.ts';
import { WING_CLASSES } from './wing.ts';

export interface OperatorPair {
  readonly site: string;
  readonly wing: string;
  readonly sheet: string;
}

export const pairsSchema = once(() => list(fields({ site: kebabId(), wing: oneOf(WING_CLASSES), sheet: kebabId() }), { min: 0, max: 1000 }));

export const forgetSchema = once(() => fields({
  address: z.string({ error: () => 'a mail address' }).check(z.maxLength(254, { error: () => 'at most 254 characters' })),
  /** Never to be written to again, also if somebody asks for it. */
  forGood: z.optional(trueOrFalse()),
}));

interface Kinded {
  readonly id: string;
  readonly kind: 'launch' | 'strip';
}

/** Every pair must name a site that is there and a sheet for its kind. */
export function parsePairs(json: unknown, known: { readonly sites: readonly Kinded[]; readonly sheets: readonly Kinded[] }): Result<OperatorPair[], Issue[]> {
  const shape = check(pairsSchema(), json, []);
  if (!shape.ok) return shape;
  const issues = shape.value.flatMap(({ site, sheet }, index) => {
    const place = known.sites.find(({ id }) => id === site);
    const limits = known.sheets.find(({ id }) => id === sheet);
    return [
      ...(place === undefined ? [issue([index, 'site'], site, { problem: 'no site has this id', allowed: 'the id of a site' })] : []),
      ...(limits === undefined || (place !== undefined && place.kind !== limits.kind) ? [issue([index, 'sheet'], sheet, { problem: 'no sheet for this kind of site has this id', allowed: 'the id of a sheet' })] : []),
    ];
  });
  return issues.length > 0 ? failure(issues) : success(shape.value);
}
