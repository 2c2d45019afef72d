declare module 'geomagnetism/lib/model.js' {
  export interface TimedModel {
    /** Latitude and longitude in degrees, height in km; declination in degrees, east positive. */
    point(place: readonly number[]): { readonly decl: number };
  }

  /** The package's own solver, on whichever coefficients it is handed. Throws outside their years. */
  export default class Model {
    constructor(coefficients: unknown);
    getTimedModel(date: Date): TimedModel;
  }
}
