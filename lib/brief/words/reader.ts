/** For whom words are made: language and units. Hours are always those of the site's zone, which the day carries. */
import { SI_UNITS, type DisplayUnits } from '../units-out.ts';

/** English now. A second language is a second member here and a second arm of every switch in this folder. */
export type Language = 'en';

export interface Reader {
  readonly units: DisplayUnits;
  readonly language?: Language;
}

/** Metres a second and metres, as on the pages, for whoever has not chosen. */
export const READER: Reader = { units: SI_UNITS };
