import { problem } from './problem.ts';

/** A write that replaces must name what it replaces; null when it does. */
export async function staleness(ifMatch: string | undefined, etag: string | null): Promise<Response | null> {
  if (etag === null) return ifMatch === undefined ? null : problem('stale', { detail: 'there is nothing to replace yet' });
  if (ifMatch === undefined) return problem('unconditional', { detail: 'send If-Match with the ETag that was read' });
  return ifMatch === etag ? null : problem('stale', { detail: 'it was changed since it was read', headers: { etag } });
}
