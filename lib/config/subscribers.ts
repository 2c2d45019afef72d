/** Subscribers that a new database begins with (config/subscribers.json), until people can subscribe themselves. */
import * as z from 'zod/mini';
import { failure, success, type Issue, type Result } from '../result.ts';
import type { Site } from '../site.ts';
import { check, issue, issuesIn } from './check.ts';
import { closestWord } from './closest-word.ts';
import { fields, list, once, oneOf, trueOrFalse } from './fields.ts';
import { valueAt, type Path } from './path.ts';
import { repeatedIds } from './sites.ts';
import { kebabId } from './text.ts';
import { zone } from './zone.ts';

/** In order of rank: the next is tried when the one before it is dead. */
export type SeedChannel = { readonly kind: 'terminal' } | { readonly kind: 'webhook'; readonly url: string };

export interface SeedSubscriber {
  readonly id: string;
  readonly timeZone: string;
  /** Minutes after local midnight at which the brief is due. */
  readonly deliverMinute: number;
  /** Ids; for each the published pairs. */
  readonly sites: readonly string[];
  readonly channels: readonly SeedChannel[];
}

const CLOCK_FORM = 'a local time "HH:MM" from 00:00 to 23:59';
const URL_FORM = 'an https address, at most 2048 characters';

const subscribersSchema = once(() => {
  const clock = z.string({ error: () => CLOCK_FORM }).check(z.regex(/^(?:[01]\d|2[0-3]):[0-5]\d$/, { error: () => CLOCK_FORM }));
  // What an address may be beyond this is for the webhook channel to say, at every attempt.
  const url = z.url({ protocol: /^https?$/, error: () => URL_FORM }).check(z.maxLength(2048, { error: () => URL_FORM }));
  const channel = z.discriminatedUnion('kind', [fields({ kind: oneOf(['terminal']) }), fields({ kind: oneOf(['webhook']), url })], {
    error: () => 'an object whose kind is "terminal" or "webhook"',
  });
  const subscriber = fields({
    id: kebabId(),
    enabled: trueOrFalse(),
    timeZone: zone(),
    deliverAt: clock,
    sites: z.nullable(list(kebabId(), { min: 1, max: 200 })),
    channels: list(channel, { min: 1, max: 4 }),
  });
  return list(subscriber, { min: 0, max: 100 });
});

/** Those that are enabled; `sites: null` means all of them. */
export function parseSubscribers(json: unknown, sites: readonly Site[], path: Path = []): Result<SeedSubscriber[], Issue[]> {
  const shape = check(subscribersSchema(), json, path);
  const items: readonly unknown[] = Array.isArray(json) ? json : [];
  const issues = [...issuesIn(shape), ...repeatedIds(items, path), ...items.flatMap((item, index) => siteIdIssues(item, sites, [...path, index]))];
  if (!shape.ok || issues.length > 0) return failure(issues);
  return success(
    shape.value.filter(({ enabled }) => enabled).map(({ id, timeZone, deliverAt, sites: chosen, channels }) => {
      const deliverMinute = Number(deliverAt.slice(0, 2)) * 60 + Number(deliverAt.slice(3));
      return { id, timeZone, deliverMinute, sites: chosen ?? sites.map((site) => site.id), channels };
    }),
  );
}

function siteIdIssues(json: unknown, sites: readonly Site[], path: Path): Issue[] {
  const chosen = valueAt(json, ['sites']);
  const ids = sites.map(({ id }) => id);
  if (!Array.isArray(chosen)) return [];
  return chosen.flatMap((id: unknown, index) => {
    if (typeof id !== 'string' || ids.includes(id)) return [];
    const near = closestWord(id, ids);
    return [issue([...path, 'sites', index], id, { problem: `no site has this id${near === undefined ? '' : `; did you mean "${near}"?`}`, allowed: `one of ${ids.slice(0, 20).join(', ')}` })];
  });
}
