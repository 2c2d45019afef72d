/** Forecast sources by name, their votes with ages, and whom to thank. */
import type { JudgedDay, SourceVote } from '../day.ts';
import type { Verdict } from '../../margin/ids.ts';
import { clockNote, momentName } from './clock.ts';
import { counted, listed, plainText, sentence } from './plain.ts';
import { restrictiveness } from './verdicts.ts';

/** Services whose ids begin like this, with the link they ask for. */
interface Service {
  readonly prefix: string;
  readonly name: string;
  readonly credit: { readonly text: string; readonly href: string } | null;
}

const SERVICES: readonly Service[] = [
  { prefix: 'demo', name: 'Demo weather', credit: null },
  { prefix: 'invented', name: 'Invented', credit: null },
  { prefix: 'open-meteo', name: 'Open-Meteo', credit: { text: 'Weather data by Open-Meteo.com', href: 'https://open-meteo.com/' } },
  { prefix: 'met-norway', name: 'MET Norway', credit: { text: 'Data from MET Norway', href: 'https://www.met.no/' } },
  { prefix: 'nws', name: 'US National Weather Service', credit: { text: 'Data from the US National Weather Service', href: 'https://www.weather.gov/' } },
];

function serviceOf(id: string): Service | undefined {
  return SERVICES.find(({ prefix }) => id === prefix || id.startsWith(`${prefix}:`) || id.startsWith(`${prefix}-`));
}

/** Models by the name their makers give them; a service with one product needs no second name. */
const MODELS: Readonly<Record<string, string>> = {
  icon_d2: 'ICON-D2', icon_eu: 'ICON-EU', icon_d2_eps: 'ICON-D2-EPS', icon_eu_eps: 'ICON-EU-EPS', meteofrance_arome_france: 'AROME France', gfs_global: 'GFS',
  ecmwf_ifs025: 'ECMWF IFS', ecmwf_ifs: 'ECMWF IFS 9 km', ecmwf_ifs025_ensemble: 'ECMWF ensemble', ncep_gefs025: 'GEFS', locationforecast: '', gridpoints: '',
};

/** `open-meteo:icon_d2` is "Open-Meteo ICON-D2". */
export function sourceName(id: string): string {
  const service = serviceOf(id);
  if (service === undefined) return plainText(id) || 'a source without a name';
  const model = id.includes(':') ? plainText(id.slice(id.indexOf(':') + 1)) : '';
  const name = Object.hasOwn(MODELS, model) ? MODELS[model] ?? '' : model.replaceAll('_', ' ');
  if (service.prefix === 'invented') return `Invented ${name || 'weather'} model`;
  return name === '' ? service.name : `${service.name} ${name}`;
}

/** What stands in brackets behind a source: why it has no vote, or how old its run is. */
function remark(vote: SourceVote): string {
  if (vote.state === 'no vote') return plainText(vote.why ?? 'no reason given', 200);
  const steps = vote.stepHours === undefined ? '' : `, interpolated from steps of ${vote.stepHours} h`;
  return `${vote.runAgeHours === null ? 'run time not given' : `run ${Math.floor(vote.runAgeHours)} h old`}${steps}`;
}

/** "Open-Meteo ICON-D2 (no answer within 10 s)". */
export function votePhrase(vote: SourceVote): string {
  return `${sourceName(vote.source)} (${remark(vote)})`;
}

/** Sources that share a remark share its brackets: "ICON-D2 and AROME (each run 3 h old)". */
export function votesPhrase(votes: readonly SourceVote[]): string {
  const groups = new Map<string, string[]>();
  for (const vote of votes) groups.set(remark(vote), [...(groups.get(remark(vote)) ?? []), sourceName(vote.source)]);
  return [...groups].map(([said, names]) => `${listed(names)} (${names.length > 1 ? (said.startsWith('run ') ? 'each ' : 'each: ') : ''}${said})`).join('; ');
}

/** A source in full: its vote, the time of its run and of the fetch, its ground. */
export function voteSentence(vote: SourceVote, day: Pick<JudgedDay, 'timeZone' | 'localDate'>): string {
  const name = sourceName(vote.source);
  if (vote.state === 'no vote') return sentence(`No vote: ${name}, ${plainText(vote.why ?? 'no reason given', 200)}`);
  const run = vote.runAt === null
    ? 'run time not given'
    : `run of ${momentName(vote.runAt, day)}${vote.runAgeHours === null ? '' : `, ${Math.floor(vote.runAgeHours)} h old`}`;
  const members = vote.kind === 'ensemble' ? `, ${counted(vote.members, 'member', 'members')}` : '';
  const fetched = vote.fetchedAt === null ? '' : `, fetched ${momentName(vote.fetchedAt, day)}`;
  const ground = vote.gridElevationM === null ? '' : `, its ground at ${Math.round(vote.gridElevationM)} m`;
  const steps = vote.stepHours === undefined ? '' : `, hours between its steps of ${vote.stepHours} h interpolated`;
  return sentence(`${name}${members}: ${run}${fetched}${ground}${steps}`);
}

/** Age and sources as one line, which stands with every verdict. */
export function provenance(day: Pick<JudgedDay, 'sources' | 'issuedAt' | 'timeZone' | 'localDate'>): string {
  const voted = day.sources.filter((source) => source.state === 'voted');
  const silent = day.sources.filter((source) => source.state === 'no vote');
  const note = clockNote();
  const parts = [
    ...(silent.length === 0 ? [] : [`without a vote: ${votesPhrase(silent)}`]),
    voted.length === 0 ? 'no source voted' : `from ${votesPhrase(voted)}`,
    `computed ${momentName(day.issuedAt, day)}`,
    ...(note === null ? [] : [note]),
  ];
  return sentence(parts.join('; '));
}

/** One source's view of an hour, in words that are not the hour's own verdict. */
function view(verdict: Verdict): string {
  switch (verdict) {
    case 'beyond': return 'sees a limit passed';
    case 'unknown': return 'gives no answer';
    case 'close': return 'sees a limit near';
    case 'within': return 'sees none near';
  }
}

/** How the sources differ about one hour, the most restrictive first; null when they do not. */
export function disagreement(bySource: JudgedDay['hours'][number]['bySource']): string | null {
  if (new Set(bySource.map(({ verdict }) => verdict)).size < 2) return null;
  const views = [...bySource]
    .sort((a, b) => restrictiveness(b.verdict) - restrictiveness(a.verdict))
    .map(({ source, verdict }) => `${sourceName(source)} ${view(verdict)}`);
  return sentence(`The sources differ: ${listed(views)}`);
}

/** The links that the sources of a day ask for. */
export function credits(day: Pick<JudgedDay, 'sources'>): { readonly text: string; readonly href: string }[] {
  const found = new Map<string, { readonly text: string; readonly href: string }>();
  for (const { source } of day.sources) {
    const credit = serviceOf(source)?.credit;
    if (credit !== undefined && credit !== null) found.set(credit.href, credit);
  }
  return [...found.values()];
}

