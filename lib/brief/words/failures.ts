/** Why a source has no vote, in words of ours. Each reads after the source's name: "Demo weather: its data is withheld". */
import type { SourceFailure } from '../../forecast/failure.ts';
import { clockTime } from './clock.ts';
import { fieldName } from './fields.ts';

/** Unit spellings that may be repeated; any other is a provider's text and stays out. */
const KNOWN_UNITS = ['m/s', 'km/h', 'mph', 'kn', 'kt', '°C', '°F', 'K', 'hPa', 'Pa', 'mm', 'inch', 'm', 'ft', '%', '°', 'J/kg', 'W/m²', 'unixtime', 'iso8601'];

function unitName(unit: string | null): string {
  if (unit === null || unit === '' || unit === 'undefined') return 'unit not given';
  return KNOWN_UNITS.includes(unit) ? `in ${unit}` : 'in another unit';
}

function ownWord(text: string): string {
  return /^[\w$°%][\w.$[\]°/%-]{0,59}$/u.test(text) ? text : 'a field';
}

export function failureSentence(failure: SourceFailure): string {
  switch (failure.kind) {
    case 'unreachable': return 'it could not be reached';
    case 'timeout': return `no answer within ${Math.max(1, Math.round(failure.afterMs / 1000))} s`;
    case 'too-large': return `its answer was larger than ${Math.round(failure.limitBytes / 1000)} kB`;
    case 'redirected': return 'it sent us to another address, which is not followed';
    case 'refused': return `it refused the question (status ${failure.status})`;
    case 'rate-limited': return failure.retryAfterS === null
      ? 'it asked for fewer questions'
      : `it asked for a pause of ${Math.max(1, Math.ceil(failure.retryAfterS / 60))} min`;
    case 'server-error': return `it failed (status ${failure.status})`;
    case 'breaker-open': return `it failed before and is not asked again until ${clockTime(failure.until, 'UTC')} UTC`;
    case 'not-json': return 'its answer could not be read';
    case 'content-type': return 'its answer was not of the kind asked for';
    case 'shape': return `its answer lacked what was asked for (${ownWord(failure.path)})`;
    case 'unit': return `${ownWord(failure.field)}: ${unitName(failure.found)}, ${ownWord(failure.expected)} was asked for`;
    case 'times': return timesSentence(failure.why);
    case 'run-missing': return 'it does not say when its run was made';
    case 'run-old': return `its run is ${Math.floor(failure.ageHours)} h old`;
    case 'run-future': return `its run lies ${Math.ceil(failure.aheadHours)} h in the future`;
    case 'place': return `its grid point is ${Math.round(failure.distanceKm)} km away`;
    case 'ground': return groundSentence(failure);
    case 'constant': return `the same ${fieldName(failure.field)} in every hour`;
    case 'withheld': return 'its data is withheld';
    case 'not-covered': return 'it does not cover this place';
    case 'not-fetched': return 'it was not asked yet';
  }
}

function timesSentence(why: Extract<SourceFailure, { kind: 'times' }>['why']): string {
  switch (why) {
    case 'unsorted': return 'its hours are out of order';
    case 'duplicate': return 'an hour comes twice';
    case 'gap': return 'hours are missing in the middle';
    case 'not-hourly': return 'its hours are not an hour apart';
    case 'not-utc': return 'its hours are not in UTC';
    case 'wrong-day': return 'its hours are of another day';
    case 'empty': return 'it gave no hours';
  }
}

function groundSentence(failure: Extract<SourceFailure, { kind: 'ground' }>): string {
  if (failure.why === 'missing') return 'it does not say how high its ground is';
  return failure.byM === null
    ? 'the height of its ground changed'
    : `the height of its ground changed by ${Math.round(Math.abs(failure.byM))} m`;
}
