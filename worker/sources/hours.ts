/** From all the hours a service gave to those that were asked for, with the fields that it is said to give. */
import type { ConditionField, Conditions } from '../../lib/forecast/conditions.ts';
import type { SourceFailure } from '../../lib/forecast/failure.ts';
import { failure, success, type Result } from '../../lib/result.ts';
import { epochOf } from '../../lib/time.ts';

export function chosenHours(
  hours: readonly Conditions[],
  wanted: { readonly fromUtc: string; readonly toUtc: string; readonly declares: readonly ConditionField[] },
): Result<readonly Conditions[], SourceFailure> {
  const [fromMs, toMs] = [epochOf(wanted.fromUtc), epochOf(wanted.toUtc)];
  const inside = hours.filter((hour) => epochOf(hour.validAt) >= fromMs && epochOf(hour.validAt) <= toMs);
  return inside.length === 0 ? failure({ kind: 'times', why: 'wrong-day' }) : success(inside.map((hour) => declaredOnly(hour, wanted.declares)));
}

/** A field that is not declared has no vote, so it is not kept at all. */
function declaredOnly(hour: Conditions, declares: readonly ConditionField[]): Conditions {
  const { validAt, gridElevationM } = hour;
  return { validAt, gridElevationM, ...Object.fromEntries(declares.map((field) => [field, hour[field] ?? null])) };
}
