/** The reader's units travel in the query, so that no cookie is needed: ?speed=kt&height=ft. */
import { HEIGHT_UNITS, SI_UNITS, SPEED_UNITS, type DisplayUnits } from '../../lib/brief/units-out.ts';

/** `km/h` is spelt `kmh` in an address. */
function inAddress(unit: string): string {
  return unit.replace('/', '');
}

function chosen<T extends string>(units: readonly T[], text: string | undefined, fallback: T): T {
  return units.find((unit) => inAddress(unit) === text) ?? fallback;
}

export function unitsFrom(query: { readonly speed?: string | undefined; readonly height?: string | undefined }): DisplayUnits {
  return { speed: chosen(SPEED_UNITS, query.speed, SI_UNITS.speed), height: chosen(HEIGHT_UNITS, query.height, SI_UNITS.height) };
}

/** The part of a query that keeps the units; nothing for the units that hold anyway. */
export function unitsPart(units: DisplayUnits): Record<string, string> {
  return {
    ...(units.speed === SI_UNITS.speed ? {} : { speed: inAddress(units.speed) }),
    ...(units.height === SI_UNITS.height ? {} : { height: inAddress(units.height) }),
  };
}

export function address(path: string, query: Readonly<Record<string, string | null>>, fragment = ''): string {
  const parts = Object.entries(query).filter((entry): entry is [string, string] => entry[1] !== null && entry[1] !== '');
  const text = new URLSearchParams(parts).toString();
  return `${path}${text === '' ? '' : `?${text}`}${fragment}`;
}
