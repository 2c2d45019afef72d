import type { Issue } from '../../lib/result.ts';

/** Errors of the API as problem details (RFC 9457). `problems` lists everything that is wrong with a request, each with its path. */
export type ProblemKind = 'bad-input' | 'not-found' | 'gone' | 'wrong-method' | 'too-large' | 'wrong-type' | 'too-many' | 'not-allowed' | 'unapproved' | 'stale' | 'unconditional' | 'fault' | 'unusable';

interface ProblemForm {
  readonly status: number;
  readonly title: string;
}

const FORMS: Readonly<Record<ProblemKind, ProblemForm>> = {
  'bad-input': { status: 400, title: 'The request has errors' },
  'not-allowed': { status: 401, title: 'A valid token is needed' },
  'not-found': { status: 404, title: 'There is nothing here' },
  gone: { status: 410, title: 'There is nothing here any more' },
  'wrong-method': { status: 405, title: 'This method is not answered here' },
  unapproved: { status: 409, title: 'A second approval is needed' },
  stale: { status: 412, title: 'Somebody else has changed it' },
  unconditional: { status: 428, title: 'The request must say what it replaces' },
  'too-large': { status: 413, title: 'The request is too large' },
  'wrong-type': { status: 415, title: 'The request must be JSON' },
  'too-many': { status: 429, title: 'Too many requests' },
  fault: { status: 500, title: 'A fault of this service' },
  unusable: { status: 503, title: 'This service cannot work at the moment' },
};

export interface ProblemDetails {
  readonly detail?: string;
  readonly problems?: readonly Issue[];
  readonly headers?: Readonly<Record<string, string>>;
}

/** For every answer that is not a page. */
export const API_HEADERS: Readonly<Record<string, string>> = {
  'cache-control': 'no-store',
  'content-security-policy': "default-src 'none'; frame-ancestors 'none'",
  'x-content-type-options': 'nosniff',
  'referrer-policy': 'no-referrer',
};

export function problem(kind: ProblemKind, { detail, problems, headers }: ProblemDetails = {}): Response {
  const { status, title } = FORMS[kind];
  const body = { type: `urn:dawnmargin:problem:${kind}`, title, status, ...(detail === undefined ? {} : { detail }), ...(problems === undefined ? {} : { problems }) };
  return new Response(JSON.stringify(body), { status, headers: { 'content-type': 'application/problem+json', ...API_HEADERS, ...headers } });
}

export function json(value: unknown, { status = 200, type = 'application/json', headers = {} }: { status?: number; type?: string; headers?: Readonly<Record<string, string>> } = {}): Response {
  return new Response(JSON.stringify(value), { status, headers: { 'content-type': type, ...API_HEADERS, ...headers } });
}
