/** Cautions: one plain sentence each, with its number and its hours. None is ever left out or hidden. */
import type { Caution } from '../cautions.ts';
import type { JudgedDay } from '../day.ts';
import { quantityText } from '../units-out.ts';
import { clockTime, hourName, hourSpan } from './clock.ts';
import { listed, plainText, sentence } from './plain.ts';
import type { Reader } from './reader.ts';
import { sourceName } from './sources.ts';

type Day = Pick<JudgedDay, 'timeZone'>;

/** ", 13 to 16 h"; nothing for the whole day. */
function hours(caution: Caution, day: Day): string {
  const { from, to } = caution;
  if (from !== null && to !== null) return `, ${hourSpan({ from, to }, day.timeZone)}`;
  if (from !== null) return `, from ${hourName(from, day.timeZone)}`;
  return to === null ? '' : `, until ${hourName(to, day.timeZone)}`;
}

/** Hours of cautions about one moment, such as the wind after a window: " after 12 h". */
function after(caution: Caution, day: Day): string {
  return caution.from === null ? ' within two hours after a window' : ` after ${hourName(caution.from, day.timeZone)}`;
}

function about(caution: Caution): string {
  return caution.subject === null ? '' : ` (${plainText(caution.subject)})`;
}

/** The caution as a sentence, most of it said before its hours. */
export function cautionSentence(caution: Caution, day: Day, reader: Reader): string {
  return sentence(caution.id === 'demo' ? demoWords() : `${words(caution, day, reader)}`);
}

/** All cautions of a day as sentences; the sources without a vote share one. The mark of invented weather stands elsewhere. */
export function cautionSentences(cautions: readonly Caution[], day: Day, reader: Reader): string[] {
  const silent = [...new Set(cautions.filter(({ id }) => id === 'noVote').map(({ subject }) => (subject === null ? 'a source' : sourceName(subject))))];
  const rest = cautions.filter(({ id }) => id !== 'noVote' && id !== 'demo').map((caution) => cautionSentence(caution, day, reader));
  return silent.length === 0 ? rest : [sentence(`No vote: ${listed(silent)}`), ...rest];
}

function demoWords(): string {
  return 'Invented weather: this is a demonstration and says nothing about any real place';
}

function words(caution: Caution, day: Day, reader: Reader): string {
  const { value, unit } = caution;
  const number = value === null || unit === null ? null : quantityText({ value, unit, asIs: caution.id === 'strongThermals' || caution.id === 'lineDrift' || caution.subject === 'visibility' }, reader.units);
  /** The number with its joint, or what to say without one. */
  const by = (joint: string, without = '') => (number === null ? without : `${joint}${number}`);
  const when = hours(caution, day);
  switch (caution.id) {
    case 'storm': return unit === 'J/kg' ? `Storms can form: CAPE${by(' reaches ')}${when}` : `Thunderstorm signalled${when}`;
    case 'strongThermals': return `Strong thermals for this sheet${by(': up to ')}${when}`;
    case 'windAloft': return `Wind from behind or across above the launch${by(', up to ')}${when}`;
    case 'landingGradient': return `Wind gradient at the landing${by(': the wind drops by ')}${when}; keep speed for the last metres`;
    case 'windRising': return `Wind rises fast${by(', by ')}${after(caution, day)}`;
    case 'windTurning': return `Wind turns fast${by(', by ')}${after(caution, day)}`;
    case 'front': return `A front may pass${unit === 'hPa' ? by(': pressure falls by ') : by(': wind veers by ')}${when}`;
    case 'foehn': return `Foehn: pressure step${about(caution)}${by(' of ')}${when}`;
    case 'lowCloud': return `Low cloud or fog at launch${caution.subject === 'visibility' ? by(': visibility ') : unit === '%' ? by(': cover ') : by(': base ', '')}${when}`;
    case 'rainNear': return `Rain near a window${by(': ')}${when}`;
    case 'wet': return `Wing and slope may be wet${when}`;
    case 'localWind': return `Local wind${by(' of ')} usual at the landing${localHours(caution, day)}; the forecast does not show it`;
    case 'lineDrift': return `A released line falls outside the clear strip${by(', ')} aside${when}`;
    case 'noVote': return `No vote: ${caution.subject === null ? 'a source' : sourceName(caution.subject)}${when}`;
    case 'thinAir': return `Thin air: longer run, faster landing${by('; density altitude ')}${when}`;
    case 'lightWind': return `Nil or light variable wind at launch${by(', under ')}${when}`;
    case 'disagree': return `Sources disagree${by(' by ')}${about(caution)}${when}`;
    case 'oldForecast': return `Old forecast${caution.subject === null ? '' : ` from ${sourceName(caution.subject)}`}${by(': run ', '')}${number === null ? '' : ' old'}`;
    case 'singleSource': return `Only one source has a vote${caution.subject === null ? '' : `: ${sourceName(caution.subject)}`}; nothing checks it`;
    case 'noRunTime': return `Age of the forecast not known${caution.subject === null ? '' : `: ${sourceName(caution.subject)} gives no run time`}`;
    case 'cold': return `Cold: wind chill${by(' down to ', ' low')}${when}`;
    case 'lowSun': return `Low sun in the launch direction${by(', ')}${number === null ? '' : ' above the horizon'}${when}`;
    case 'lastLight': return `Last light${lastLightAt(caution, day)}: be on the ground before it`;
    case 'lowQualityGust': return `Gust forecast below the mean wind${by(' by ')}${when}: counted as equal, of low quality`;
    case 'demo': return demoWords();
  }
}

function localHours(caution: Caution, day: Day): string {
  if (caution.from === null) return '';
  return caution.to === null ? ` from ${hourName(caution.from, day.timeZone)}` : ` ${hourSpan({ from: caution.from, to: caution.to }, day.timeZone)}`;
}

function lastLightAt(caution: Caution, day: Day): string {
  const at = caution.to ?? caution.from;
  return at === null ? '' : ` at ${clockTime(at, day.timeZone)}`;
}
