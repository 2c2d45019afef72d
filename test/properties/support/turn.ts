// A site and its winds turned about the vertical, or seen in a mirror along the axis: nothing a judge says may change.
import { normalDeg } from '../../../lib/angles.ts';
import type { Conditions, Wind } from '../../../lib/forecast/conditions.ts';
import type { Site } from '../../../lib/site.ts';

type Map = (deg: number) => number;

function windMapped<T extends Wind>(wind: T, map: Map): T {
  return wind.fromDeg === null || wind.fromDeg < 0 || wind.fromDeg > 360 ? wind : { ...wind, fromDeg: normalDeg(map(wind.fromDeg)) };
}

function hourMapped(hour: Conditions, map: Map): Conditions {
  const { wind10m, nearGround, levels } = hour;
  return {
    ...hour,
    ...(wind10m ? { wind10m: windMapped(wind10m, map) } : {}),
    ...(nearGround ? { nearGround: nearGround.map((wind) => windMapped(wind, map)) } : {}),
    ...(levels ? { levels: levels.map((level) => windMapped(level, map)) } : {}),
  };
}

/** `flips`: a mirror exchanges the two edges of a sector. */
function siteMapped(site: Site, map: Map, flips: boolean): Site {
  const turned = (deg: number) => normalDeg(map(deg));
  const sectors = site.sectors.map((sector) => ({ ...sector, fromDeg: turned(flips ? sector.toDeg : sector.fromDeg), toDeg: turned(flips ? sector.fromDeg : sector.toDeg) }));
  if (site.kind === 'strip') return { ...site, sectors, headingDeg: turned(site.headingDeg) };
  return { ...site, sectors, facingDeg: turned(site.facingDeg), trackDeg: turned(site.trackDeg) };
}

export function turned<T extends { readonly site: Site; readonly hours: readonly Conditions[] }>(given: T, byDeg: number): T {
  const map: Map = (deg) => deg + byDeg;
  return { ...given, site: siteMapped(given.site, map, false), hours: given.hours.map((hour) => hourMapped(hour, map)) };
}

export function mirrored<T extends { readonly site: Site; readonly hours: readonly Conditions[] }>(given: T): T {
  const axisDeg = given.site.kind === 'launch' ? given.site.facingDeg : given.site.headingDeg;
  const map: Map = (deg) => 2 * axisDeg - deg;
  return { ...given, site: siteMapped(given.site, map, true), hours: given.hours.map((hour) => hourMapped(hour, map)) };
}
