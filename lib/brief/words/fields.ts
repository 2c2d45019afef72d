/** What a forecast gives, named as a person would ask for it; and which of it is missing. */
import { CONDITION_FIELDS, type ConditionField } from '../../forecast/conditions.ts';
import { listed, plainText } from './plain.ts';

export function fieldName(field: ConditionField): string {
  switch (field) {
    case 'wind10m': return 'wind at 10 m';
    case 'gustMps': return 'gust';
    case 'nearGround': return 'wind near the ground';
    case 'levels': return 'wind and air aloft';
    case 'temperature2mC': return 'temperature';
    case 'dewPoint2mC': return 'dew point';
    case 'surfacePressureHpa': return 'surface pressure';
    case 'seaLevelPressureHpa': return 'sea-level pressure';
    case 'referencePressureHpa': return 'pressure at the two reference points';
    case 'mixedLayerM': return 'depth of the mixed layer';
    case 'shortwaveWm2': return 'sunshine';
    case 'sensibleHeatWm2': return 'heat flux';
    case 'capeJkg': return 'CAPE';
    case 'precipitationMm': return 'rain';
    case 'precipitationProbabilityPct': return 'chance of rain';
    case 'weatherCode': return 'weather code';
    case 'visibilityM': return 'visibility';
    case 'lowCloudPct': return 'low cloud';
  }
}

function isField(name: string): name is ConditionField {
  return (CONDITION_FIELDS as readonly string[]).includes(name);
}

/** A missing input by name: `levels 850 hPa.speedMps` is wind and air aloft, whichever part of it is missing. */
function missingName(name: string): string {
  const [head = ''] = /^\w*/.exec(name) ?? [];
  if (head === 'gridElevationM') return 'height of the model ground';
  if (name === 'levels (do not reach)') return 'wind and air at that height';
  return isField(head) ? fieldName(head) : plainText(name) || 'an input';
}

/** "gust and CAPE missing"; "an input missing" when nobody said which. */
export function missingPhrase(missing: readonly string[]): string {
  const names = [...new Set(missing.map(missingName))];
  return `${names.length === 0 ? 'an input' : listed(names)} missing`;
}
