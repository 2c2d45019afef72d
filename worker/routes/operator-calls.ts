/** The pages of the operator do what programs do: the very handlers of the API, asked in this process. */
import type { Issue } from '../../lib/result.ts';
import type { DeskServices } from '../service-set.ts';
import { operator } from './operator.ts';

export interface Called {
  readonly status: number;
  readonly etag: string;
  readonly body: unknown;
  readonly problems: readonly Issue[];
}

/** Only for who has shown the token: the session of the page stands for it. */
export async function call(services: DeskServices, method: 'GET' | 'PUT' | 'POST', path: string, given: { readonly body?: unknown; readonly etag?: string; readonly headers?: Readonly<Record<string, string>> } = {}): Promise<Called> {
  const headers = { 'content-type': 'application/json', ...(given.etag === undefined || given.etag === '' ? {} : { 'if-match': given.etag }), ...given.headers };
  const answer = await operator(services, () => Promise.resolve(null)).request(path, { method, headers, ...(given.body === undefined ? {} : { body: JSON.stringify(given.body) }) });
  const body = await answer.json<unknown>();
  const { problems, detail, title } = body as { readonly problems?: readonly Issue[]; readonly detail?: string; readonly title?: string };
  const failed = answer.ok ? [] : (problems ?? [{ path: '$', value: '', problem: title ?? 'this was refused', allowed: detail ?? 'another request' }]);
  return { status: answer.status, etag: answer.headers.get('etag') ?? '', body, problems: failed };
}
