// Pages: markup of the board and of a day, against parsing a payload of 150 kB.
import { judgeDay } from '../../lib/brief/judge-day.ts';
import { boardPage } from '../../worker/web/board.ts';
import { dayPage } from '../../worker/web/day-page.ts';
import { hourDetail } from '../../worker/web/hour-detail.ts';
import { DAYS, fixtureServices, MORNING } from '../support/page-fixtures.ts';
import { calibrationPayload, dayInputs } from './days.ts';
import { inTurns, say } from './turns.ts';

const payload = calibrationPayload();
const yard = { yardstick: 'one parse of 150 kB', yard: (): unknown => JSON.parse(payload) as unknown };
const reader = { units: { speed: 'm/s', height: 'm' } } as const;
const sites = await fixtureServices().board();
say(await inTurns({ name: `board, ${Object.keys(DAYS).length} sites`, ...yard, own: () => boardPage(sites, { reader, now: MORNING }) }));
for (const input of dayInputs()) {
  const day = judgeDay(input);
  const detail = hourDetail(input);
  say(await inTurns({ name: `day page, ${input.site.id}`, ...yard, own: () => dayPage(day, { reader, now: MORNING, hour: null, detail, choices: { wings: [], sheets: [] } }) }));
}
