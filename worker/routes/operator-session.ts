/**
 * Who signed in at the desk of the operator. The bearer token is handed in once; what the browser keeps is a cookie that
 * only this service can make: its end and a MAC under LINK_KEY and the hash of the token, so that a new token ends it. It
 * is good for an hour, scripts cannot read it, other sites cannot send it, and only the pages under /operator look at it:
 * the API goes by the bearer token alone.
 */
import { operatorRefusal } from '../security/operator.ts';
import { base64Url, hmacSha256, sameText } from '../secrets.ts';
import type { DeskServices } from '../service-set.ts';

const GOOD_FOR_S = 3600;
const NAME = 'operator';

const encoder = new TextEncoder();

/** What the forms of a session carry, so that nobody else's form can be sent with its cookie. */
export interface Session {
  readonly stamp: string;
}

async function mac({ settings }: Pick<DeskServices, 'settings'>, purpose: 'session' | 'form', text: string): Promise<string> {
  const key = await hmacSha256(encoder.encode(settings.linkKey ?? ''), encoder.encode(`operator|${settings.operatorTokenSha256 ?? ''}`));
  return base64Url((await hmacSha256(key, encoder.encode(`${purpose}|${text}`))).subarray(0, 24));
}

/** Whether anybody can sign in here at all. */
export function canSignIn({ settings }: Pick<DeskServices, 'settings'>): boolean {
  return settings.linkKey !== null && settings.operatorTokenSha256 !== null;
}

function cookie({ settings }: Pick<DeskServices, 'settings'>, value: string, maxAgeS: number): string {
  const isLoopbackHttp = settings.local && settings.publicUrl.startsWith('http:');
  return `${NAME}=${value}; Path=/operator; HttpOnly; SameSite=Strict; Max-Age=${maxAgeS}${isLoopbackHttp ? '' : '; Secure'}`;
}

/** The cookie of a new session for who has the token; else the refusal, the same for every token that is none. */
export async function signIn(services: DeskServices, request: Request, token: string): Promise<string | Response> {
  // A page that tells nobody where it comes from sends the origin "null": whose form it was is asked here.
  const from = request.headers.get('cf-connecting-ip');
  const headers = { authorization: `Bearer ${isFromHere(services, request) ? token : ''}`, ...(from === null ? {} : { 'cf-connecting-ip': from }) };
  const refusal = await operatorRefusal(services, new Request(request.url, { headers }));
  if (refusal !== null) return refusal;
  const value = `${services.clock.nowMs() + GOOD_FOR_S * 1000}.${base64Url(crypto.getRandomValues(new Uint8Array(12)))}`;
  return cookie(services, `${value}.${await mac(services, 'session', value)}`, GOOD_FOR_S);
}

export function signedOut(services: Pick<DeskServices, 'settings'>): string {
  return cookie(services, '', 0);
}

/** The session of a request, or null: no cookie, one that is not ours, or one whose hour is over. */
export async function sessionOf(services: Pick<DeskServices, 'settings' | 'clock'>, request: Request): Promise<Session | null> {
  if (!canSignIn(services)) return null;
  const given = new RegExp(`(?:^|; )${NAME}=(\\d{13}\\.[\\w-]{16})\\.([\\w-]{32})(?:;|$)`).exec(request.headers.get('cookie') ?? '');
  const [, value = '', sign = ''] = given ?? [];
  if (value === '' || !(await sameText(sign, await mac(services, 'session', value)))) return null;
  return services.clock.nowMs() < Number(value.slice(0, 13)) ? { stamp: await mac(services, 'form', value) } : null;
}

/** Whether a form was sent by a page of this session: from this origin, with the stamp that only that page was given. */
export async function isOwnForm(services: Pick<DeskServices, 'settings'>, { stamp }: Session, request: Request, form: FormData): Promise<boolean> {
  const given = form.get('stamp');
  return isFromHere(services, request) && typeof given === 'string' && sameText(given, stamp);
}

function isFromHere({ settings }: Pick<DeskServices, 'settings'>, { headers }: Request): boolean {
  const [origin, site] = [headers.get('origin'), headers.get('sec-fetch-site')];
  return (origin === null || origin === 'null' || origin === settings.publicUrl) && (site === null || site === 'same-origin');
}
