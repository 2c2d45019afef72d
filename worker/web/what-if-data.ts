/** "What if": the hour of a forecast with a visitor's numbers in it, sent through the same request that programs send. */
import { judgeHours } from '../../lib/brief/judge-hours.ts';
import { pollSources, speaks } from '../../lib/brief/voters.ts';
import type { DayInput } from '../../lib/brief/day-input.ts';
import { parseAssessRequest } from '../../lib/config/assess-request.ts';
import { setUp } from '../../lib/margin/setup.ts';
import { HOUR_MS, epochOf } from '../../lib/time.ts';
import type { DeskServices } from '../service-set.ts';
import { chosenHour } from './chosen-hour.ts';
import { hourDetail } from './hour-detail.ts';
import { withOwnNumbers, type OwnNumbers } from './own-numbers.ts';
import { findDay } from './page-data.ts';
import type { WhatIf, WhatIfAnswer, WhatIfQuery, WhatIfServices } from './page-services.ts';

/** The request that programs would send to /api/v1/assess for the same question; null without a forecast to start from. */
function whatIfRequest(input: DayInput, question: { readonly validAt: string; readonly numbers: OwnNumbers; readonly wing: unknown }): { readonly source: string; readonly body: Record<string, unknown> } | null {
  const poll = pollSources(input, setUp(input), []);
  const voter = poll.deterministic.find(speaks);
  const hours = voter?.forecast.members[0] ?? [];
  const atMs = epochOf(question.validAt);
  const first = hours.find((hour) => epochOf(hour.validAt) === atMs);
  if (voter === undefined || first === undefined) return null;
  // The two hours after it are as forecast: a thunderstorm in them counts now.
  const next = hours.filter((hour) => { const ahead = epochOf(hour.validAt) - atMs; return ahead > 0 && ahead <= 2 * HOUR_MS; });
  const { numbers } = question;
  const wing = numbers.trim === undefined ? question.wing : { trimMps: numbers.trim, glideAtTrim: numbers.glide, minSinkMps: numbers.sink };
  return {
    source: voter.source,
    body: { site: { id: input.site.id }, sheet: { id: input.sheet.id }, wing, declares: voter.forecast.declares, hours: [withOwnNumbers(first, numbers), ...next] },
  };
}

function judgeWhatIf(services: Pick<DeskServices, 'wingClasses' | 'clock'>, input: DayInput, question: { readonly validAt: string; readonly numbers: OwnNumbers; readonly wing: unknown }): WhatIf {
  const asked = whatIfRequest(input, question);
  if (asked === null) return { kind: 'problems', problems: ['No source with a vote has a forecast of this hour to start from.'] };
  const request = parseAssessRequest(asked.body, { sites: [input.site], sheets: [input.sheet], wingClasses: services.wingClasses(), nowMs: services.clock.nowMs() });
  if (!request.ok) return { kind: 'problems', problems: request.error.map(({ path, problem, allowed }) => `${path}: ${problem}; right would be ${allowed}.`) };
  const [hour] = judgeHours(request.value).hours;
  return hour === undefined ? { kind: 'problems', problems: ['There was no hour to judge.'] } : { kind: 'judged', hour, source: asked.source };
}

async function answerOf(services: DeskServices, query: WhatIfQuery): Promise<WhatIfAnswer> {
  const found = await findDay(services, query);
  if (found.kind !== 'found') return found;
  const { day, input, chosen } = found;
  const hour = chosenHour(day, query.hour);
  if (hour === null) return { kind: 'bad-query', problems: ['There is no judged hour on this day.'] };
  const answer = query.problems.length > 0 ? { kind: 'problems' as const, problems: query.problems } : judgeWhatIf(services, input, { validAt: hour.validAt, numbers: query.numbers, wing: chosen.wing });
  return { kind: 'answer', day, hour: hour.validAt, given: hourDetail(input)(hour).given ?? {}, answer };
}

export function whatIfServices(services: DeskServices): WhatIfServices {
  return {
    now: () => new Date(services.clock.nowMs()),
    whatIf: (query) => answerOf(services, query),
  };
}
