import { airAt, densityAt, type AirAt, type Column } from '../air/column.ts';
import { convectiveVelocityMps, richardsonDepthM, SHORTWAVE_TO_HEAT } from '../air/convection.ts';
import { isCalm } from '../air/gust.ts';
import { dewPointC } from '../air/moist-air.ts';
import { topM, type Profile } from '../air/profile.ts';
import { vectorOf } from '../air/wind.ts';
import type { ConditionField } from '../forecast/conditions.ts';
import type { CheckedHour, CheckedWind } from '../forecast/ranges.ts';
import { speedFactor } from '../wing/scaling.ts';
import { launchWinds, stripWind, type Estimate } from './launch-wind.ts';
import type { Setup } from './setup.ts';
import { towOf, towOnSetHeading, type ChosenTow } from './tow-heading.ts';

/** Higher than any node: stands for winds a source gives but did not deliver this hour. */
const OUT_OF_SIGHT_M = 100_000;
/** Pressure levels this close above the highest near-ground wind add nothing. */
const LEVEL_CLEARANCE_M = 50;

export interface HourContext {
  readonly declares: ReadonlySet<ConditionField>;
  /** The next two hours of the same member where there are any: a thunderstorm in them counts now. */
  readonly next: readonly CheckedHour[];
  /** The highest altitude at which this member gives a wind in any hour: a declared wind that is missing is a hole, not an end. */
  readonly reachM: number;
  /** The heading another source has chosen for the hour; null to choose one's own. Strips only. */
  readonly setHeading: { readonly headingDeg: number; readonly by: string } | null;
  /** Mixed-layer depth of another source, used when this one does not declare its own. */
  readonly borrowedMixedLayer: { readonly depthM: number; readonly source: string } | null;
}

/**
 * One hour of one member over one setup: the air, the wind estimates and the wing's speeds in it, each computed when a
 * margin first asks and then kept. NaN is unknown throughout.
 */
export class HourView {
  readonly setup: Setup;
  readonly hour: CheckedHour;
  readonly context: HourContext;
  #profile: Profile | undefined;
  #column: Column | undefined;
  #winds: readonly Estimate[] | undefined;
  #windNeeds: readonly ConditionField[] | undefined;
  #gustNeeds: readonly ConditionField[] | undefined;
  #mixedLayer: { readonly depthM: number; readonly origin: string } | undefined;
  #thermalMps: number | undefined;
  #tow: ChosenTow | undefined;
  #factors: Map<number, number> | undefined;

  constructor(setup: Setup, hour: CheckedHour, context: HourContext) {
    this.setup = setup;
    this.hour = hour;
    this.context = context;
  }

  declares(field: ConditionField): boolean {
    return this.context.declares.has(field);
  }

  /** The wind profile over the site, heights above mean sea level. */
  get profile(): Profile {
    this.#profile ??= profileOf(this.hour, this.context.declares);
    return this.#profile;
  }

  get column(): Column {
    this.#column ??= columnOf(this.hour, this.context.declares);
    return this.#column;
  }

  /** Whether the winds this source declares reach a height. */
  reaches(altitudeM: number): boolean {
    return this.context.reachM >= altitudeM;
  }

  airAt(altitudeM: number): AirAt {
    return airAt(this.column, altitudeM);
  }

  /** What every speed and sink of the wing is multiplied by at a height. */
  factorAt(altitudeM: number): number {
    this.#factors ??= new Map();
    let factor = this.#factors.get(altitudeM);
    if (factor === undefined) {
      factor = speedFactor({ densityKgm3: densityAt(this.column, altitudeM), allUpMassKg: this.setup.wing.allUpMassKg, referenceMassKg: this.setup.wing.referenceMassKg });
      this.#factors.set(altitudeM, factor);
    }
    return factor;
  }

  trimAt(altitudeM: number): number {
    return this.setup.polar.trimMps * this.factorAt(altitudeM);
  }

  stallAt(altitudeM: number): number {
    return this.setup.polar.stallMps * this.factorAt(altitudeM);
  }

  /** Kept estimates of the wind where the wing is launched; empty when none can be made. */
  get winds(): readonly Estimate[] {
    const { site } = this.setup;
    this.#winds ??= site.kind === 'launch' ? launchWinds(this, site) : [stripWind(this)];
    return this.#winds;
  }

  /** Fields behind the wind estimates. A launch that no estimate reaches needs levels the source does not give. */
  get windNeeds(): readonly ConditionField[] {
    this.#windNeeds ??= windFields(this.winds, this.context.declares);
    return this.#windNeeds;
  }

  get gustNeeds(): readonly ConditionField[] {
    this.#gustNeeds ??= [...this.windNeeds, 'gustMps'];
    return this.#gustNeeds;
  }

  /** Speed of the gust above the mean, never negative; NaN when either is unknown. */
  get gustIncrementMps(): number {
    return Math.max(0, this.hour.gustMps - this.hour.wind10m.speedMps);
  }

  /** Upward heat flux at the ground, W/m2: the source's own, else a part of the shortwave. */
  get heatFluxWm2(): number {
    if (this.declares('sensibleHeatWm2')) return this.hour.sensibleHeatWm2;
    return this.declares('shortwaveWm2') ? SHORTWAVE_TO_HEAT * Math.max(0, this.hour.shortwaveWm2) : NaN;
  }

  /** Mixed-layer depth above the model's ground and where it is from. */
  get mixedLayer(): { readonly depthM: number; readonly origin: string } {
    this.#mixedLayer ??= this.#findMixedLayer();
    return this.#mixedLayer;
  }

  #findMixedLayer(): { readonly depthM: number; readonly origin: string } {
    if (this.declares('mixedLayerM')) return { depthM: this.hour.mixedLayerM, origin: 'mixed-layer depth of the forecast' };
    const borrowed = this.context.borrowedMixedLayer;
    if (borrowed !== null) return { depthM: borrowed.depthM, origin: `mixed-layer depth of ${borrowed.source}` };
    return { depthM: richardsonDepthM(this.column, this.profile), origin: 'mixed-layer depth by the bulk Richardson number of the column' };
  }

  /** Thermal strength w*, m/s. */
  get thermalMps(): number {
    this.#thermalMps ??= this.#findThermal();
    return this.#thermalMps;
  }

  #findThermal(): number {
    const heatFluxWm2 = this.heatFluxWm2;
    if (heatFluxWm2 <= 0) return 0;
    const densityKgm3 = densityAt(this.column, this.hour.gridElevationM);
    return convectiveVelocityMps({ temperatureC: this.hour.temperature2mC, densityKgm3, mixedLayerM: this.mixedLayer.depthM, heatFluxWm2 });
  }

  /** Strips: direction the wing is towed toward. */
  get headingDeg(): number {
    return this.context.setHeading?.headingDeg ?? this.tow.headingDeg;
  }

  /** Strips: the heading chosen and its climb. Throws for a launch, which has no tow. */
  get tow(): ChosenTow {
    this.#tow ??= this.context.setHeading === null ? towOf(this) : towOnSetHeading(this, this.context.setHeading);
    return this.#tow;
  }
}

function windFields(winds: readonly Estimate[], declares: ReadonlySet<ConditionField>): readonly ConditionField[] {
  if (winds.length === 0) return ['levels'];
  const aloft = winds.some(({ name }) => name === 'freeAir') ? (['nearGround', 'levels'] as const).filter((field) => declares.has(field)) : [];
  const onGround = declares.has('wind10m') || winds.some(({ name }) => name !== 'freeAir');
  return onGround ? ['wind10m', ...aloft] : aloft;
}

/** u and v of a checked wind; a calm has no direction and no components. */
function nodeVector(wind: CheckedWind): { readonly uMps: number; readonly vMps: number } {
  return isCalm(wind.speedMps) ? { uMps: 0, vMps: 0 } : vectorOf(wind.speedMps, wind.fromDeg);
}

/** The highest altitude at which any of these hours delivers a wind; out of sight when winds aloft are declared and none ever came. */
export function reachOf(hours: readonly CheckedHour[], declares: ReadonlySet<ConditionField>): number {
  const aloft = (['levels', 'nearGround'] as const).find((field) => declares.has(field));
  const delivering = aloft === undefined ? hours : hours.filter((hour) => hour[aloft].length > 0);
  if (delivering.length === 0) return aloft === undefined ? -Infinity : OUT_OF_SIGHT_M;
  return delivering.reduce((highest, hour) => Math.max(highest, topOf(hour, declares)), -Infinity);
}

/** Height of the highest node that profileOf would make, without making it. */
function topOf(hour: CheckedHour, declares: ReadonlySet<ConditionField>): number {
  if (declares.has('levels')) return topM(profileOf(hour, declares));
  if (declares.has('nearGround')) return hour.gridElevationM + (hour.nearGround.at(-1)?.heightAglM ?? 10.5);
  return declares.has('wind10m') && !Number.isNaN(hour.gridElevationM) ? hour.gridElevationM + 10 : -Infinity;
}

function profileOf(hour: CheckedHour, declares: ReadonlySet<ConditionField>): Profile {
  const altitudeM: number[] = [];
  const uMps: number[] = [];
  const vMps: number[] = [];
  const add = (z: number, vector: { readonly uMps: number; readonly vMps: number }): void => {
    altitudeM.push(z);
    uMps.push(vector.uMps);
    vMps.push(vector.vMps);
  };
  const hole = { uMps: NaN, vMps: NaN };
  const groundM = hour.gridElevationM;
  if (Number.isNaN(groundM)) return { altitudeM, uMps, vMps };
  if (declares.has('wind10m')) add(groundM + 10, nodeVector(hour.wind10m));
  if (declares.has('nearGround')) {
    for (const wind of hour.nearGround) add(groundM + wind.heightAglM, nodeVector(wind));
    if (hour.nearGround.length === 0) add(groundM + 10.5, hole);
  }
  if (declares.has('levels')) {
    const clearM = (altitudeM.at(-1) ?? groundM) + (altitudeM.length > 0 ? LEVEL_CLEARANCE_M : 0);
    for (const level of hour.levels) if (level.altitudeM > clearM) add(level.altitudeM, nodeVector(level));
    if (hour.levels.length === 0) add(OUT_OF_SIGHT_M, hole);
  }
  return { altitudeM, uMps, vMps };
}

function columnOf(hour: CheckedHour, declares: ReadonlySet<ConditionField>): Column {
  const altitudeM = [hour.gridElevationM];
  const temperatureC = [hour.temperature2mC];
  const dewPoint = [hour.dewPoint2mC];
  const pressureHpa = [hour.surfacePressureHpa];
  const delivered = declares.has('levels') ? hour.levels : [];
  const carriesUp = !declares.has('levels') || (delivered.length > 0 && delivered.every((level) => level.altitudeM <= hour.gridElevationM + 10));
  for (const level of delivered) {
    if (level.altitudeM <= hour.gridElevationM + 10) continue;
    altitudeM.push(level.altitudeM);
    temperatureC.push(level.temperatureC);
    dewPoint.push(dewPointC(level.temperatureC, level.relativeHumidityPct));
    pressureHpa.push(level.pressureHpa);
  }
  return { altitudeM, temperatureC, dewPointC: dewPoint, pressureHpa, carriesUp };
}
