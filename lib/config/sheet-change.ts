/** What one version of a sheet changes against another, and which of it lets more pass than before. */
import { LIMIT_NAMES, PARAMETER_NAMES, type LimitSheet } from '../margin/sheet.ts';
import { MARGIN_IDS } from '../margin/ids.ts';

export interface SheetChange {
  /** Name of a limit or parameter, `closeBands.<margin>`, or `kind`. */
  readonly what: string;
  readonly before: number | string | null;
  readonly after: number | string | null;
  readonly loosens: boolean;
}

/** Of a limit that must not be passed the smaller number holds people tighter, of one that must be reached the larger. */
export function sheetChanges(before: LimitSheet, after: LimitSheet): SheetChange[] {
  const limits = LIMIT_NAMES.flatMap((name) => change(name, [before.limits[name], after.limits[name]], isFloor(name) ? 'smaller' : 'larger'));
  const parameters = PARAMETER_NAMES.flatMap((name) => change(name, [before.parameters[name], after.parameters[name]], name === 'lightWindMps' ? 'any' : 'smaller'));
  const bands = MARGIN_IDS.flatMap((id) => change(`closeBands.${id}`, [before.closeBands[id], after.closeBands[id]], 'any'));
  const kind = before.kind === after.kind ? [] : [{ what: 'kind', before: before.kind, after: after.kind, loosens: true }];
  return [...kind, ...limits, ...parameters, ...bands];
}

function isFloor(name: string): boolean {
  return name.startsWith('min') || name === 'slopeBufferDeg';
}

type Looser = 'smaller' | 'larger' | 'any';

function change(what: string, [before, after]: readonly [number | undefined, number | undefined], looser: Looser): SheetChange[] {
  if (before === after) return [];
  return [{ what, before: before ?? null, after: after ?? null, loosens: loosens([before, after], looser) }];
}

/** A limit that is gone lets everything pass; one that is new only holds tighter. */
function loosens([before, after]: readonly [number | undefined, number | undefined], looser: Looser): boolean {
  if (after === undefined) return true;
  if (before === undefined) return looser === 'any';
  return looser === 'any' || (looser === 'larger' ? after > before : after < before);
}
