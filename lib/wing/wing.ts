/** A wing's figures at its reference mass in standard sea-level air (1.225 kg/m3). Airspeeds are true airspeeds. */
export type WingClass = 'EN A' | 'EN B' | 'EN C' | 'EN D' | 'tandem';

export interface Wing {
  /** The class, or null for a wing given by its own figures. */
  readonly class: WingClass | null;
  readonly trimMps: number;
  readonly glideAtTrim: number;
  readonly minSinkMps: number;
  readonly stallMps: number;
  readonly topMps: number;
  readonly referenceMassKg: number | null;
  readonly allUpMassKg: number | null;
}
