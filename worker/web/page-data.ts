/** The pages' questions answered from the tables: stored briefs as they were issued, other wings and sheets judged now. */
import type { DayInput } from '../../lib/brief/day-input.ts';
import type { JudgedDay } from '../../lib/brief/day.ts';
import { isCalendarDate } from '../../lib/time.ts';
import { answersFor } from '../morning/answers.ts';
import { dayInput } from '../morning/assess.ts';
import { placesOf } from '../morning/places.ts';
import { judgedDate } from '../morning/times.ts';
import type { Place, DeskServices } from '../service-set.ts';
import type { Pair } from '../store/published.ts';
import { hourDetail } from './hour-detail.ts';
import type { BoardSite, Choices, DayAnswer, DayQuery, PageServices } from './page-services.ts';

const FALLBACK_WING = 'EN B';
const FALLBACK_SHEET = { launch: 'descent-new', strip: 'solo-tow' } as const;

function parsed(body: string): JudgedDay | null {
  try {
    return JSON.parse(body) as JudgedDay;
  } catch {
    return null;
  }
}

function wingJson(body: string): unknown {
  try {
    return JSON.parse(body) as unknown;
  } catch {
    return null;
  }
}

async function boardSites(services: DeskServices): Promise<BoardSite[]> {
  const pairs = await services.stores.published.all();
  const places = await placesOf(services, [...new Set(pairs.map(({ siteId }) => siteId))]);
  const nowMs = services.clock.nowMs();
  const wanted = pairs.flatMap((pair) => {
    const place = places.get(pair.siteId);
    return place === undefined ? [] : [{ ...pair, localDate: judgedDate(place.site, nowMs) }];
  });
  const bodies = await services.stores.brief.bodies(wanted);
  return [...places.values()].map(({ site }) => ({
    siteId: site.id, siteName: site.name, kind: site.kind, timeZone: site.timeZone,
    days: bodies.filter(({ siteId }) => siteId === site.id).map(({ body }) => parsed(body)).filter((day) => day !== null),
  }));
}

interface Chosen {
  readonly pair: Pair;
  readonly choices: Choices;
  readonly problems: readonly string[];
  /** The wing as a request would give it. */
  readonly wing: unknown;
  readonly input: (parts: { readonly place: Place; readonly localDate: string }) => Promise<DayInput | null>;
}

/** The wing and the sheet that were asked for, else the pair that the operator publishes for the site. */
async function chosenPair(services: DeskServices, place: Place, query: DayQuery): Promise<Chosen> {
  const { site } = place;
  const [published, wings, sheets] = await Promise.all([services.stores.published.all(), services.stores.wing.all(), services.stores.sheet.newest()]);
  const own = published.find(({ siteId }) => siteId === site.id);
  const fitting = sheets.flatMap((row) => {
    const sheet = services.read.sheet(row);
    return sheet.ok && sheet.value.kind === site.kind ? [sheet.value] : [];
  });
  const wingKey = query.wing ?? own?.wingKey ?? FALLBACK_WING;
  const sheetId = query.sheet ?? own?.sheetId ?? FALLBACK_SHEET[site.kind];
  const wingRow = wings.find(({ key }) => key === wingKey);
  const sheet = fitting.find(({ id }) => id === sheetId);
  return {
    pair: { siteId: site.id, wingKey, sheetId },
    choices: { wings: wings.map(({ key, name }) => ({ id: key, name })), sheets: fitting.map(({ id, name }) => ({ id, name })) },
    problems: [
      ...(wingRow === undefined ? [`The wing is not known here; known are ${wings.map(({ key }) => key).join(', ')}.`] : []),
      ...(sheet === undefined ? [`The limit sheet is not known for a ${site.kind}; known are ${fitting.map(({ id }) => id).join(', ')}.`] : []),
    ],
    wing: wingRow === undefined ? null : wingJson(wingRow.body),
    async input(parts) {
      const wing = wingRow === undefined ? null : services.read.wing(wingRow);
      if (wingRow === undefined || sheet === undefined || wing === null || !wing.ok) return null;
      const answers = await answersFor(services, parts.place, parts.localDate);
      return dayInput({ ...parts, run: { wingKey }, wing: wing.value, wingName: wingRow.name, sheet, answers, nowMs: services.clock.nowMs() });
    },
  };
}

interface FoundDay {
  readonly kind: 'found';
  readonly day: JudgedDay;
  readonly input: DayInput;
  readonly chosen: Chosen;
}

type NotFound = Extract<DayAnswer, { kind: 'no-site' | 'bad-query' }>;

export async function findDay(services: DeskServices, query: DayQuery): Promise<FoundDay | NotFound> {
  const place = (await placesOf(services, [query.siteId])).get(query.siteId);
  if (place === undefined) return { kind: 'no-site' };
  const chosen = await chosenPair(services, place, query);
  const problems = query.date === null || isCalendarDate(query.date) ? chosen.problems : ['The date is not one; it is written 2027-05-14.', ...chosen.problems];
  if (problems.length > 0) return { kind: 'bad-query', problems };
  const localDate = query.date ?? judgedDate(place.site, services.clock.nowMs());
  const [stored, input] = await Promise.all([services.stores.brief.newest({ ...chosen.pair, localDate }), chosen.input({ place, localDate })]);
  if (input === null) return { kind: 'bad-query', problems: ['The wing or the limit sheet cannot be read.'] };
  const day = (stored === null ? null : parsed(stored.body)) ?? services.judge(input);
  return { kind: 'found', day, input, chosen };
}

async function siteDay(services: DeskServices, query: DayQuery): Promise<DayAnswer> {
  const found = await findDay(services, query);
  return found.kind === 'found' ? { kind: 'day', day: found.day, detail: hourDetail(found.input), choices: found.chosen.choices } : found;
}

export function pageServices(services: DeskServices): PageServices {
  return {
    now: () => new Date(services.clock.nowMs()),
    board: () => boardSites(services),
    day: (query) => siteDay(services, query),
  };
}
