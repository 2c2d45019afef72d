import type { Site } from '../site.ts';
import { legalDay, type LegalDay } from '../sky/sun.ts';
import { localDate } from '../time.ts';
import { polarFrom, type Polar } from '../wing/polar.ts';
import type { Wing } from '../wing/wing.ts';
import type { LimitSheet } from './sheet.ts';

/** What stays the same over all hours, sources and members of one judged day: the place, the wing's polar, the sheet. */
export interface Setup {
  readonly site: Site;
  readonly wing: Wing;
  readonly polar: Polar;
  readonly sheet: LimitSheet;
  /** The legal day of a local date, computed once. */
  legalDayOf(date: string): LegalDay;
  /** The legal day of the local date an instant lies in. */
  legalDayAt(epochMs: number): LegalDay;
}

export function setUp(given: { readonly site: Site; readonly wing: Wing; readonly sheet: LimitSheet }): Setup {
  const { site, wing, sheet } = given;
  if (sheet.kind !== site.kind) throw new Error(`sheet "${sheet.id}" is for a ${sheet.kind}, the site "${site.id}" is a ${site.kind}: choose a sheet of the site's kind`);
  const polar = polarFrom(wing);
  if (!polar.ok) throw new Error(`a wing reached the judge that no polar fits: ${polar.error}`);
  const legalDays = new Map<string, LegalDay>();
  /** By instant: asking a zone for its date costs more than most margins. */
  const byInstant = new Map<number, LegalDay>();
  const legalDayOf = (date: string): LegalDay => {
    const day = legalDays.get(date) ?? legalDay(site, date);
    legalDays.set(date, day);
    return day;
  };
  return {
    site, wing, polar: polar.value, sheet, legalDayOf,
    legalDayAt(epochMs) {
      const known = byInstant.get(epochMs);
      if (known !== undefined) return known;
      const day = legalDayOf(localDate(epochMs, site.timeZone));
      byInstant.set(epochMs, day);
      return day;
    },
  };
}
