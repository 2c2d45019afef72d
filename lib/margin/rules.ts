import { arrivalRule } from './arrival-rule.ts';
import { forwardRules } from './forward-rules.ts';
import { groundRules, landingGradientRule } from './ground-rules.ts';
import type { Rule } from './rule.ts';
import { skyRules } from './sky-rules.ts';
import { stripRules } from './strip-rules.ts';
import { launchWindRules, sectorRule, stripWindRules } from './wind-rules.ts';

/** Every margin a launch and a strip can be judged on. `agreement` is not an hour's own: see agreement.ts. */
export const LAUNCH_RULES: readonly Rule[] = [...launchWindRules, ...forwardRules, arrivalRule, ...groundRules, ...skyRules, sectorRule];
export const STRIP_RULES: readonly Rule[] = [...stripWindRules, ...stripRules, landingGradientRule, ...skyRules, sectorRule];

export function rulesFor(kind: 'launch' | 'strip'): readonly Rule[] {
  return kind === 'launch' ? LAUNCH_RULES : STRIP_RULES;
}
