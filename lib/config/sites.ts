/** Sites travel in a GeoJSON FeatureCollection (RFC 7946): a file of `config/`, or a club's own. */
import * as z from 'zod/mini';
import { failure, success, type Issue, type Result } from '../result.ts';
import type { Site } from '../site.ts';
import { check, issue, issuesIn } from './check.ts';
import { fields, list, once, oneOf } from './fields.ts';
import { valueAt, type Path } from './path.ts';
import { parseSiteFeature, type SiteContext } from './site.ts';

const collectionSchema = once(() => fields({ type: oneOf(['FeatureCollection']), features: list(z.unknown(), { min: 1, max: 10_000 }) }));

/** Every site, or every problem of every site. */
export function parseSites(json: unknown, context: SiteContext, path: Path = []): Result<Site[], Issue[]> {
  const shape = check(collectionSchema(), json, path);
  const found = valueAt(json, ['features']);
  const features: readonly unknown[] = Array.isArray(found) && found.length <= 10_000 ? found : [];
  const parsed = features.map((feature, index) => parseSiteFeature(feature, context, [...path, 'features', index]));
  const issues = [...issuesIn(shape), ...parsed.flatMap(issuesIn), ...repeatedIds(features, [...path, 'features'])];
  if (issues.length > 0) return failure(issues);
  return success(parsed.flatMap((site) => (site.ok ? [site.value] : [])));
}

/** An issue for each id that stood before; items without an id of text are somebody else's issue. */
export function repeatedIds(items: readonly unknown[], path: Path): Issue[] {
  const seen = new Map<string, number>();
  return items.flatMap((item, index) => {
    const id = valueAt(item, ['id']);
    if (typeof id !== 'string') return [];
    const first = seen.get(id);
    if (first === undefined) {
      seen.set(id, index);
      return [];
    }
    return [issue([...path, index, 'id'], id, { problem: `this id is there already, at index ${first}`, allowed: 'an id that no other has' })];
  });
}
