/** Names of the margins, and which way each is counted: against a largest allowed value or a least one asked. */
import type { MarginId } from '../../margin/ids.ts';

/** The margin as the head of a row. */
export function marginName(id: MarginId): string {
  switch (id) {
    case 'meanWind': return 'Mean wind at launch';
    case 'gust': return 'Gust at launch';
    case 'gustSpread': return 'Gust above mean wind';
    case 'crosswind': return 'Wind across the launch';
    case 'tailwind': return 'Wind from behind at launch';
    case 'offAxis': return 'Wind off the launch axis';
    case 'forwardLaunch': return 'Forward speed at launch';
    case 'forwardAloft': return 'Airspeed left above launch';
    case 'upperWind': return 'Upper wind';
    case 'overTheBack': return 'Wind over the back';
    case 'arrival': return 'Height on arrival';
    case 'landingGradient': return 'Speed left in the landing gradient';
    case 'run': return 'Speed of the take-off run';
    case 'slope': return 'Steepness of the slope';
    case 'thermal': return 'Thermal strength';
    case 'cloudBase': return 'Cloud base';
    case 'storm': return 'Storm';
    case 'rain': return 'Rain';
    case 'rainChance': return 'Chance of rain';
    case 'visibility': return 'Visibility';
    case 'daylight': return 'Legal day';
    case 'pressureStep': return 'Pressure step';
    case 'sector': return 'Wind from a sheltered sector';
    case 'ridgeLift': return 'Lift of the ridge';
    case 'agreement': return 'Agreement of the forecasts';
    case 'stripWind': return 'Mean wind on the strip';
    case 'stripGust': return 'Gust on the strip';
    case 'stripCross': return 'Wind across the strip';
    case 'stripTail': return 'Wind from behind on the strip';
    case 'climbShear': return 'Wind shear in the climb';
    case 'towHeight': return 'Release height';
    case 'forwardAtRelease': return 'Airspeed left at release';
  }
}

/** Distances and climbs keep their unit: visibility is no height, a thermal is no wind. */
export function keepsUnit(id: MarginId): boolean {
  return id === 'visibility' || id === 'thermal' || id === 'ridgeLift';
}

/** Whose limit it is that the margin is held against. */
export type LimitOwner = 'sheet' | 'site' | 'law';

export function limitOwner(id: MarginId): LimitOwner {
  return id === 'sector' ? 'site' : id === 'daylight' ? 'law' : 'sheet';
}

/** `most`: the limit is the largest value allowed; `least`: the smallest one asked. */
export function limitSense(id: MarginId): 'most' | 'least' {
  switch (id) {
    case 'meanWind': case 'gust': case 'gustSpread': case 'crosswind': case 'tailwind': case 'offAxis': case 'upperWind':
    case 'overTheBack': case 'run': case 'thermal': case 'storm': case 'rain': case 'rainChance': case 'pressureStep':
    case 'sector': case 'stripWind': case 'stripGust': case 'stripCross': case 'stripTail': case 'climbShear':
      return 'most';
    case 'forwardLaunch': case 'forwardAloft': case 'arrival': case 'landingGradient': case 'slope': case 'cloudBase':
    case 'visibility': case 'daylight': case 'ridgeLift': case 'agreement': case 'towHeight': case 'forwardAtRelease':
      return 'least';
  }
}
