import { sameText, sha256Hex } from '../secrets.ts';
import type { DeskServices } from '../service-set.ts';
import { limiter } from '../routes/limiter.ts';
import { problem } from '../routes/problem.ts';

/** Wrong tokens from one network a minute; whoever has the right one is not counted. */
const wrongTokens = limiter(5);

/**
 * Who runs this service shows it by a bearer token, of which only the SHA-256 is kept. No cookie is ever looked at, and a
 * request that a page of another origin made is refused. null lets pass; every refusal of a token is the same.
 */
export async function operatorRefusal({ settings, clock }: DeskServices, request: Request, hash = settings.operatorTokenSha256): Promise<Response | null> {
  const origin = request.headers.get('origin');
  if (origin !== null && origin !== settings.publicUrl) return problem('not-allowed');
  const token = /^Bearer ([A-Za-z0-9_-]{32,200})$/.exec(request.headers.get('authorization') ?? '')?.[1] ?? '';
  const isRight = await sameText(await sha256Hex(token), hash ?? '');
  if (isRight && hash !== null && token !== '') return null;
  const waitS = wrongTokens.take(request.headers.get('cf-connecting-ip') ?? 'unknown', clock.nowMs());
  return waitS > 0 ? problem('too-many', { headers: { 'retry-after': String(waitS) } }) : problem('not-allowed');
}
