/**
 * One model of the Open-Meteo interface as a source. The model is always named, never a mixture; what it lacks is not
 * filled from another one. Credit: weather data by Open-Meteo.com, CC BY 4.0.
 */
import { forecastUrl, metaUrl } from './address.ts';
import { readAnswer, type AnswerLocation } from './read-answer.ts';
import { fetchReferencePressures, type ReferencePressures } from './reference-pressure.ts';
import { olderRun, runAtOf } from './run-time.ts';
import { toMembers, type Ask } from './to-hours.ts';
import { columnsFor } from './variables.ts';
import type { Host } from '../host.ts';
import { requestWeight } from '../quota.ts';
import type { Source, SourceAnswer, SourceRequest } from '../source.ts';
import { coversPlace, type OpenMeteoSource } from '../../../lib/config/source-order.ts';
import type { ConditionField, Forecast } from '../../../lib/forecast/conditions.ts';
import { isOfTheHost, type SourceFailure } from '../../../lib/forecast/failure.ts';
import { gridDistanceM } from '../../../lib/forecast/place.ts';
import { failure, success, type Result } from '../../../lib/result.ts';
import type { Site } from '../../../lib/site.ts';
import { epochOf, HOUR_MS, isoUtc } from '../../../lib/time.ts';

export function createOpenMeteo(entry: OpenMeteoSource, host: Host, key: string | null = null): Source {
  const headers: Readonly<Record<string, string>> = key === null ? {} : { 'x-api-key': key };
  const covers: Source['covers'] = (place) => coversPlace(entry, place);
  const weightPerSite = requestWeight({ variables: columnsFor(entry).size, members: entry.members, days: 2 });

  async function runAt(): Promise<Result<string | null, SourceFailure>> {
    const runs: (string | null)[] = [];
    for (const name of entry.runTimeNames) {
      const meta = await host.ask({ path: metaUrl('', name), headers });
      if (!meta.ok && isOfTheHost(meta.error)) return meta;
      runs.push(meta.ok ? runAtOf(meta.value.json, host.now()) : null);
    }
    return success(olderRun(runs));
  }

  async function locationsOf(sites: readonly Site[], ask: Ask): Promise<ReadonlyMap<string, Result<AnswerLocation, SourceFailure>>> {
    // An hour more on each side: gusts and rain of the last instant are stamped with the hour after it.
    const path = forecastUrl({
      origin: '', path: pathOf(entry), model: entry.model, points: sites, variables: columnsFor(ask).keys(),
      fromMs: ask.fromMs - HOUR_MS, toMs: ask.toMs + HOUR_MS,
    });
    const answer = await host.ask({ path, headers, weight: weightPerSite * sites.length });
    const read = answer.ok ? readAnswer(answer.value.json, sites.length) : answer;
    if (!read.ok && read.error.kind === 'refused' && read.error.status === 400 && sites.length > 1) return onePerRequest(sites, ask);
    return new Map(sites.map((site, i) => [site.id, read.ok ? present(read.value[i]) : read]));
  }

  /** One place outside the model costs the whole batch; asked one by one it costs itself. */
  async function onePerRequest(sites: readonly Site[], ask: Ask): Promise<ReadonlyMap<string, Result<AnswerLocation, SourceFailure>>> {
    const answers = new Map<string, Result<AnswerLocation, SourceFailure>>();
    let hostFault: SourceFailure | null = null;
    for (const site of sites) {
      const answer: Result<AnswerLocation, SourceFailure> | undefined = hostFault === null ? (await locationsOf([site], ask)).get(site.id) : failure(hostFault);
      if (answer === undefined) continue;
      answers.set(site.id, answer);
      if (!answer.ok && isOfTheHost(answer.error)) hostFault = answer.error;
    }
    return answers;
  }

  return {
    id: entry.id,
    kind: entry.kind,
    host: host.origin,
    covers,
    weightPerSite,
    async fetch(request: SourceRequest) {
      const answers = new Map<string, SourceAnswer>();
      for (const site of request.sites) answers.set(site.id, failure({ kind: 'not-covered' }));
      const sites = request.sites.filter(covers);
      const give = (list: readonly Site[], why: SourceFailure) => list.forEach((site) => answers.set(site.id, failure(why)));
      if (sites.length === 0) return answers;

      const run = await runAt();
      if (!run.ok) give(sites, run.error);
      else if (run.value === null && !entry.trustWithoutRunTime) give(sites, { kind: 'run-missing' });
      if (!run.ok || (run.value === null && !entry.trustWithoutRunTime)) return answers;

      const ask: Ask = { ...entry, declares: [...entry.declares, ...entry.mayGive], fromMs: epochOf(request.fromUtc), toMs: epochOf(request.toUtc) };
      const locations = await locationsOf(sites, ask);
      const isAnswered = [...locations.values()].some((location) => location.ok);
      const hasPressure = isAnswered && entry.kind === 'deterministic' && entry.declares.includes('referencePressureHpa');
      const pressures = await fetchReferencePressures(host, hasPressure ? sites : [], { ...ask, path: '/v1/forecast', covers, headers });
      const common = { runAt: run.value, fetchedAt: isoUtc(host.now()) };
      for (const site of sites) {
        const location = locations.get(site.id) ?? failure({ kind: 'shape', path: '$' });
        answers.set(site.id, location.ok ? forecastOf(entry, site, { ...common, location: location.value, ask, pressures }) : location);
      }
      return answers;
    },
  };
}

function pathOf(entry: OpenMeteoSource): '/v1/forecast' | '/v1/ensemble' {
  return entry.kind === 'ensemble' ? '/v1/ensemble' : '/v1/forecast';
}

function present(location: AnswerLocation | undefined): Result<AnswerLocation, SourceFailure> {
  return location === undefined ? failure({ kind: 'shape', path: '$' }) : success(location);
}

export interface ForecastParts {
  readonly location: AnswerLocation;
  readonly ask: Ask;
  readonly pressures: ReferencePressures;
  readonly runAt: string | null;
  readonly fetchedAt: string;
}

/** What an answer is worth for a site, without asking anyone: pure. */
export function forecastOf(entry: OpenMeteoSource, site: Site, parts: ForecastParts): Result<Forecast, SourceFailure> {
  const { location, ask, pressures } = parts;
  const distanceM = gridDistanceM(site, { latDeg: location.latDeg ?? NaN, lonDeg: location.lonDeg ?? NaN });
  if (distanceM === null) return failure({ kind: 'shape', path: '$.latitude' });
  const members = toMembers(location, ask);
  if (!members.ok) return members;
  const hasStep = site.pressureStep !== null && entry.declares.includes('referencePressureHpa');
  const given = entry.mayGive.filter((field) => members.value.some((hours) => hours.some((hour) => hour[field] !== null && hour[field] !== undefined)));
  const declares: readonly ConditionField[] = [...entry.declares, ...given].filter((field) => field !== 'referencePressureHpa' || hasStep);
  return success({
    source: entry.id,
    kind: entry.kind,
    runAt: parts.runAt,
    fetchedAt: parts.fetchedAt,
    declares,
    ...(entry.stepHours > 1 ? { stepHours: entry.stepHours } : {}),
    members: hasStep ? members.value.map((hours) => hours.map((hour) => ({ ...hour, referencePressureHpa: pressures(site, hour.validAt) }))) : members.value,
    gridDistanceM: distanceM,
    demo: false,
    trustedWithoutRunTime: entry.trustWithoutRunTime && parts.runAt === null,
  });
}
