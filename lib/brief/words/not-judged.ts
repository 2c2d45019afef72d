/** What a brief does not judge, so that a limit left out is never silently absent. */
import type { JudgedDay } from '../day.ts';
import { marginName } from './margins.ts';
import { listed, plainText, sentence } from './plain.ts';

export interface NotJudgedGroup {
  readonly why: string;
  readonly names: readonly string[];
}

/** Margins that are not judged, grouped by reason. */
export function notJudgedGroups(day: Pick<JudgedDay, 'notJudged'>): NotJudgedGroup[] {
  const groups = new Map<string, string[]>();
  for (const { id, why } of day.notJudged) {
    // One limit name a reason would make a group of every margin; the margin's own name says which limit it is.
    const reason = /^the sheet has no \w+$/u.test(why) ? 'the sheet sets no limit' : plainText(why, 200);
    groups.set(reason, [...(groups.get(reason) ?? []), marginName(id)]);
  }
  return [...groups].map(([why, names]) => ({ why, names }));
}

export function notJudgedSentence(group: NotJudgedGroup): string {
  const names = group.names.map((name, index) => (index === 0 ? name : name.slice(0, 1).toLowerCase() + name.slice(1)));
  return sentence(`${listed(names)}${group.why === '' ? '' : `: ${group.why}`}`);
}
