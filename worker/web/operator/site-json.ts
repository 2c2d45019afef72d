/** A site as fields and as a GeoJSON feature: what no field shows stays as it is. Checks are those of lib/config alone. */
import { parseJsonStrict } from '../../../lib/config/json.ts';
import { numberAt, valueAt } from '../../../lib/config/path.ts';
import type { Issue } from '../../../lib/result.ts';
import type { Site } from '../../../lib/site.ts';
import { textIn } from '../forms/wishes.ts';

type Json = Readonly<Record<string, unknown>>;

/** The properties that the fields hold; all others stand in one text. */
const IN_FIELDS = new Set(['kind', 'name', 'timeZone', 'headingReference', 'facingDeg', 'slopeDeg', 'hill', 'landing', 'localRules', 'headingDeg', 'usableBothWays', 'lineLengthM', 'roughnessM', 'lineClearM', 'summitElevationM']);

/** "47.2692, 11.4041, 1240" as a map gives it: latitude first; [longitude, latitude, metres], or null. */
function placeOf(text: string): [number, number, number] | null {
  const parts = text.replace(/[°()]/g, ' ').trim().split(/\s*[,;]\s*|\s+/).filter((part) => part !== '' && !/^m$/i.test(part));
  const numbers = parts.map((part) => {
    const found = /^([+-]?\d+(?:\.\d+)?)([NSEW]?|m)$/i.exec(part);
    return found === null ? NaN : Number(found[1]) * (/^[SW]$/i.test(found[2] ?? '') ? -1 : 1);
  });
  const [latDeg, lonDeg, elevationM] = numbers;
  return numbers.length === 3 && latDeg !== undefined && lonDeg !== undefined && elevationM !== undefined && numbers.every(Number.isFinite) ? [lonDeg, latDeg, elevationM] : null;
}

function placeText(coordinates: unknown): string {
  const [lonDeg, latDeg, elevationM] = [0, 1, 2].map((at) => numberAt(coordinates, [at]));
  return lonDeg === undefined || latDeg === undefined ? '' : `${latDeg}, ${lonDeg}${elevationM === undefined ? '' : `, ${elevationM}`}`;
}

export function kebab(name: string): string {
  return name.normalize('NFD').replace(/\p{M}/gu, '').replaceAll('ß', 'ss').toLowerCase().replace(/[^a-z0-9]+/g, '-').replace(/^-|-$/g, '').slice(0, 64).replace(/-$/, '');
}

/** A number as people type it; what is none stays as it was typed, and is refused by its type. */
function numberOf(form: FormData, name: string): number | string | undefined {
  const text = textIn(form, name).replace(',', '.');
  return text === '' ? undefined : Number.isFinite(Number(text)) ? Number(text) : text;
}

const PLACE_FORM = 'latitude, longitude and metres above sea level, as in 47.2692, 11.4041, 1240';

function placeIssues(form: FormData, name: string, path: string): Issue[] {
  const text = textIn(form, name);
  return placeOf(text) === null ? [{ path, value: JSON.stringify(text.slice(0, 60)), problem: text === '' ? 'this is missing' : 'not three numbers of a place', allowed: PLACE_FORM }] : [];
}

/** The feature of the fields, and what of them cannot even be written as one. `before`: the feature that is edited. */
export function featureOf(form: FormData, kind: Site['kind'], before: unknown): { readonly feature: Json; readonly issues: readonly Issue[] } {
  const more = textIn(form, 'more') === '' ? { ok: true as const, value: {} as unknown } : parseJsonStrict(textIn(form, 'more'), { maxBytes: 64 * 1024, maxDepth: 10 });
  const rest: Json = more.ok && typeof more.value === 'object' && more.value !== null && !Array.isArray(more.value) ? Object.fromEntries(Object.entries(more.value).filter(([name]) => !IN_FIELDS.has(name))) : {};
  const text = (name: string): string | undefined => (textIn(form, name) === '' ? undefined : textIn(form, name));
  const common = { kind, name: text('name'), timeZone: text('zone'), headingReference: text('reference') ?? 'magnetic', localRules: text('rules') ?? null };
  const own = kind === 'launch'
    ? {
      facingDeg: numberOf(form, 'heading'), slopeDeg: numberOf(form, 'slope'), hill: { form: text('form'), heightM: numberOf(form, 'hill'), halfLengthM: numberOf(form, 'half') },
      landing: { coordinates: placeOf(textIn(form, 'landing')) ?? undefined, roughnessM: numberOf(form, 'rough') }, summitElevationM: numberOf(form, 'summit') ?? null,
    }
    : { headingDeg: numberOf(form, 'heading'), usableBothWays: form.get('both') === '1', lineLengthM: numberOf(form, 'line'), roughnessM: numberOf(form, 'rough'), lineClearM: numberOf(form, 'clear') ?? null };
  const id = valueAt(before, ['id']) ?? kebab(textIn(form, 'name'));
  const feature = { type: 'Feature', id, geometry: { type: 'Point', coordinates: placeOf(textIn(form, 'place')) ?? undefined }, properties: { ...common, ...own, ...rest } };
  return {
    // Written and read back: what is undefined is missing.
    feature: JSON.parse(JSON.stringify(feature)) as Json,
    issues: [
      ...placeIssues(form, 'place', '$.geometry.coordinates'), ...(kind === 'launch' ? placeIssues(form, 'landing', '$.properties.landing.coordinates') : []),
      ...(more.ok ? [] : more.error.map((issue) => ({ ...issue, path: '$.more' }))),
    ],
  };
}

/** The fields of a feature, as its form would have sent them. */
export function formOfFeature(feature: unknown): FormData {
  const form = new FormData();
  const set = (name: string, path: readonly (string | number)[]): void => {
    const value = valueAt(feature, ['properties', ...path]);
    if (typeof value === 'string' || typeof value === 'number') form.set(name, String(value));
  };
  form.set('place', placeText(valueAt(feature, ['geometry', 'coordinates'])));
  form.set('landing', placeText(valueAt(feature, ['properties', 'landing', 'coordinates'])));
  const isLaunch = valueAt(feature, ['properties', 'kind']) === 'launch';
  for (const [name, ...path] of [['name', 'name'], ['zone', 'timeZone'], ['reference', 'headingReference'], ['rules', 'localRules'], ['heading', isLaunch ? 'facingDeg' : 'headingDeg'], ['slope', 'slopeDeg'], ['summit', 'summitElevationM'], ['line', 'lineLengthM'], ['clear', 'lineClearM']] as const) set(name, path);
  for (const [name, key] of [['form', 'form'], ['hill', 'heightM'], ['half', 'halfLengthM']] as const) set(name, ['hill', key]);
  set('rough', isLaunch ? ['landing', 'roughnessM'] : ['roughnessM']);
  if (textIn(form, 'reference') === '') form.set('reference', 'true');
  if (valueAt(feature, ['properties', 'usableBothWays']) === true) form.set('both', '1');
  const properties = valueAt(feature, ['properties']);
  const more = Object.entries(typeof properties === 'object' && properties !== null ? properties : {}).filter(([name]) => !IN_FIELDS.has(name));
  if (more.length > 0) form.set('more', JSON.stringify(Object.fromEntries(more), null, 1));
  return form;
}

/** What stands in the fields of a new site. */
export function newSiteForm(kind: Site['kind']): FormData {
  const form = new FormData();
  for (const [name, value] of Object.entries({ reference: 'magnetic', rough: '0.03', ...(kind === 'launch' ? { form: 'ridge' } : {}) })) form.set(name, value);
  return form;
}
