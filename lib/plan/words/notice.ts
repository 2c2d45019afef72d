/** What a plan's holder is told when planned blocks have turned: the blocks first, then the days as they are judged now. */
import type { JudgedDay } from '../../brief/day.ts';
import { briefText, capital, CLOSING, counted, dateName, INVENTED, mostRestrictive, verdictPhrase, type Reader } from '../../brief/words/index.ts';
import { restrictiveness } from '../../brief/words/verdicts.ts';
import type { TurnedPlan } from '../turned.ts';
import { noticeSentence } from './plan.ts';

/** `days` are those of the blocks, for their cautions, rules, sources and ages. */
export function turnedNotice(plans: readonly TurnedPlan[], { date, days, reader }: { readonly date: string; readonly days: readonly JudgedDay[]; readonly reader: Reader }): { readonly title: string; readonly text: string } {
  const turned = plans.flatMap((plan) => plan.notices.map((notice) => ({ plan, notice }))).sort((a, b) => restrictiveness(b.notice.verdict) - restrictiveness(a.notice.verdict));
  const worst = verdictPhrase(mostRestrictive(turned.map(({ notice }) => notice.verdict)));
  const isDemo = plans.some(({ demo }) => demo);
  const mark = isDemo ? `${INVENTED}: ` : '';
  const title = `${mark}${isDemo ? worst : capital(worst)}: ${counted(turned.length, 'planned block', 'planned blocks')}, training day, ${dateName(date, 'short')}`;
  const said = turned.map(({ plan, notice }) => `${plan.demo ? `${INVENTED}, ` : ''}${noticeSentence(notice, plan, reader)}`);
  const ask = 'These blocks do not keep any more to what their groups take: plan the day again on its page, or call them off.';
  return { title, text: `${said.join('\n')}\n${ask}\n\n${days.length === 0 ? `${CLOSING}\n` : briefText(days, reader)}` };
}
