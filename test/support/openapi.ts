// The OpenAPI 3.1 description, made from the schemas that read requests. It is served as a file, so it costs the worker nothing.
import * as z from 'zod';
import { forgetSchema, pairsSchema } from '../../lib/config/operator.ts';
import { echoSchema, renewalSchema } from '../../lib/config/push-renewal.ts';
import { planSchema } from '../../lib/config/plan.ts';
import { preferencesSchema, subscriptionSchema } from '../../lib/config/subscription.ts';

type Json = Readonly<Record<string, unknown>>;

function schemaOf(schema: z.core.$ZodType): Json {
  const { $schema: _, ...rest } = z.toJSONSchema(schema, { io: 'input', unrepresentable: 'any' }) as Json;
  return rest;
}

const ref = (name: string): Json => ({ $ref: `#/components/schemas/${name}` });
const answer = (description: string, schema: Json = { type: 'object' }, type = 'application/json'): Json => ({ description, content: { [type]: { schema } } });
const problem = (description: string): Json => answer(description, ref('Problem'), 'application/problem+json');
const body = (schema: Json): Json => ({ required: true, content: { 'application/json': { schema } } });
const parameter = (name: string, place: 'path' | 'query' | 'header', description: string): Json => ({ name, in: place, required: place !== 'query', description, schema: { type: 'string' } });

const WRONG = { 400: problem('Everything that is wrong, each with its path'), 413: problem('Too large'), 415: problem('Not JSON') };
const TOKEN = [parameter('token', 'path', 'the secret of a manage link')];
const NO_TOKEN = { 404: problem('No such token; the same answer whatever is wrong with it') };
const OPERATOR = { 401: problem('No valid token, or a page of another origin'), 429: problem('Too many wrong tokens') };
const IF_MATCH = parameter('if-match', 'header', 'the ETag that was read');
const STALE = { 412: problem('Changed since it was read'), 428: problem('If-Match is missing') };
const state = (...states: readonly string[]): Json => ({ type: 'object', required: ['state'], properties: { state: { enum: states } } });
const operator = (summary: string, rest: Json): Json => ({ summary, security: [{ operator: [] }], ...rest, responses: { ...(rest['responses'] as Json), ...OPERATOR } });

export function openapi(): Json {
  return {
    openapi: '3.1.0',
    info: { title: 'Dawnmargin', version: '1', description: 'Margins of launches and tow strips, computed from forecasts, not observed. Local rules, site rules, instructor or tow master and the sky itself decide.', license: { name: 'MIT', identifier: 'MIT' } },
    webhooks: {
      message: {
        post: {
          summary: 'What a webhook is sent, signed by Standard Webhooks 1.0 with the secret that its subscription was given',
          description: 'Answer within 15 s: 2xx takes it, 410 ends the webhook, anything else is tried again under the same webhook-id. Before its first message it is sent a challenge, to be echoed with 200 as {"challenge": "…"}.',
          parameters: ['webhook-id', 'webhook-timestamp', 'webhook-signature'].map((name) => ({ ...parameter(name, 'header', 'of Standard Webhooks 1.0') })),
          requestBody: body({
            oneOf: [
              { type: 'object', required: ['type', 'timestamp', 'data'], properties: { type: { const: 'endpoint.challenge' }, timestamp: { type: 'string', format: 'date-time' }, data: { type: 'object', required: ['challenge'], properties: { challenge: { type: 'string' } } } } },
              {
                type: 'object', required: ['type', 'timestamp', 'data'],
                properties: {
                  type: { enum: ['brief.issued', 'brief.changed', 'brief.missed', 'plan.turned', 'service.test'] }, timestamp: { type: 'string', format: 'date-time' },
                  data: {
                    type: 'object', required: ['id', 'title', 'text', 'issuedAt', 'dataRunAt', 'validUntil', 'inventedWeather', 'days', 'notice'],
                    properties: {
                      id: { type: 'string' }, title: { type: 'string' }, text: { type: 'string' }, issuedAt: { type: 'string', format: 'date-time' }, dataRunAt: { type: ['string', 'null'], format: 'date-time' }, validUntil: { type: 'string', format: 'date-time' },
                      inventedWeather: { type: 'boolean' }, notice: { type: 'string' },
                      days: { type: 'array', items: { type: 'object', required: ['siteId', 'localDate', 'verdict', 'windows'], properties: { siteId: { type: 'string' }, localDate: { type: 'string', format: 'date' }, verdict: { type: 'string' }, windows: { type: 'array' } } } },
                    },
                  },
                },
              },
            ],
          }),
          responses: { 200: { description: 'Taken; of a challenge, its echo' }, 410: { description: 'Gone: nothing is sent there any more' } },
        },
      },
    },
    paths: {
      '/api/v1/assess': { post: { summary: 'Judge hours that the caller gives; nothing is stored', requestBody: body(ref('AssessRequest')), responses: { 200: answer('Hours with margins and their working'), ...WRONG, 429: problem('More than 300 a minute') } } },
      '/api/v1/sites': { get: { summary: 'The sites, as GeoJSON', responses: { 200: answer('A FeatureCollection', { type: 'object' }, 'application/geo+json') } } },
      '/api/v1/sites/{id}/days/{date}': { get: { summary: 'The judged day of a site', parameters: [parameter('id', 'path', 'id of the site'), parameter('date', 'path', 'yyyy-mm-dd at the site'), parameter('wing', 'query', 'key of a wing'), parameter('sheet', 'query', 'id of a limit sheet')], responses: { 200: answer('The day, with its sentence and the notice'), 400: problem('Not a date, a wing or a sheet'), 404: problem('No such site') } } },
      '/api/v1/plan': { post: { summary: 'Plan a training day; nothing is kept', requestBody: body(ref('PlanRequest')), responses: { 200: answer('The day in blocks, with its title, its sentence and the notice', { type: 'object', required: ['date', 'timeZone', 'demo', 'asOf', 'validUntil', 'objective', 'proven', 'groups', 'nextBest', 'ifLost', 'siteDays', 'title', 'sentence', 'notice'] }), ...WRONG, 429: problem('More than 30 a minute') } } },
      '/feeds/{file}': { get: { summary: 'The briefs as a calendar (token.ics) or as an Atom feed (token.atom)', parameters: [parameter('file', 'path', 'the secret of a feed link, with its ending'), { ...parameter('if-none-match', 'header', 'the ETag that was read'), required: false }], responses: { 200: { description: 'The feed', content: { 'text/calendar': { schema: { type: 'string' } }, 'application/atom+xml': { schema: { type: 'string' } } } }, 304: { description: 'Not changed' }, 429: problem('More than thirty times a minute'), 404: problem('No such token; the same answer whatever is wrong with it') } } },
      '/api/v1/subscriptions': { post: { summary: 'Ask to be told; nothing is sent before the channel has said yes', requestBody: body(ref('Subscription')), responses: { 202: answer('Accepted: the same answer whatever an address is to this service', { type: 'object', required: ['status', 'detail', 'request'], properties: { status: { const: 'accepted' }, detail: { type: 'string' }, request: { type: 'object' }, links: ref('Links'), webhookSecret: { type: 'string', pattern: '^whsec_' } } }), ...WRONG, 429: problem('Too many from one network today'), 503: problem('This service has no LINK_KEY') } } },
      '/api/v1/subscriptions/confirm-push': { post: { summary: 'A browser echoes the nonce of the push {"kind": "confirm", "nonce"} that it was sent after a sign-up or a move; from then on it is told', requestBody: body(ref('PushEcho')), responses: { 200: answer('Confirmed', state('active')), ...WRONG, 404: problem('No nonce, or one that was used or is older than 48 hours') } } },
      '/api/v1/push/renew': { post: { summary: 'A browser, known by its old address with its secret or by a manage link, has another address; asked at each visit it costs nothing', requestBody: body(ref('PushRenewal')), responses: { 200: answer('active: nothing has changed; unverified: a nonce is on its way to the new address', state('active', 'unverified')), ...WRONG, 410: problem('Nobody is told by that browser') } } },
      '/api/v1/push/key': { get: { summary: 'The key for pushManager.subscribe', responses: { 200: answer('applicationServerKey, base64url', { type: 'object', required: ['publicKey'], properties: { publicKey: { type: 'string' } } }), 404: problem('This service sends no push') } } },
      '/api/v1/push/shown': { post: { summary: 'A service worker says that it showed a message', requestBody: body({ type: 'object', required: ['id'], properties: { id: { type: 'string', pattern: '^msg_[0-9a-f-]{32,40}$' } } }), responses: { 204: { description: 'Noted; the same for an id that is none' }, ...WRONG } } },
      '/api/v1/manage/{token}': {
        parameters: TOKEN,
        get: { summary: 'What is kept', responses: { 200: answer('Wishes and channels, and what was sent in fourteen days', { allOf: [ref('Managed')], required: ['deliveries'], properties: { deliveries: { type: 'array', items: { type: 'object', required: ['id', 'kind', 'channel', 'localDate', 'state', 'reason', 'plannedAt', 'settledAt', 'shownAt'], properties: { state: { enum: ['pending', 'sent', 'expired', 'dead', 'suppressed'] }, reason: { type: ['string', 'null'] } } } } } }), ...NO_TOKEN } },
        put: { summary: 'Change the wishes; channels stay', requestBody: body(ref('Preferences')), responses: { 200: answer('What is kept now', ref('Managed')), ...WRONG, ...NO_TOKEN } },
        post: { summary: 'Pause, resume, test, make new links or end', requestBody: body({ type: 'object', required: ['action'], properties: { action: { enum: ['pause', 'resume', 'test', 'renew-links', 'end'] }, until: { type: ['string', 'null'], format: 'date' } }, additionalProperties: false }), responses: { 200: answer('Done', { type: 'object', required: ['state'], properties: { state: { enum: ['done', 'ended'] }, tests: { type: 'array', items: { type: 'object', required: ['kind', 'state', 'id'], properties: { kind: { type: 'string' }, state: { enum: ['planned', 'asked', 'ended'] }, id: { type: ['string', 'null'] } } } }, links: ref('Links') } }), ...WRONG, ...NO_TOKEN, 429: problem('More than ten tests a day') } },
        delete: { summary: 'End it and erase everything that is kept', responses: { 200: answer('Ended', state('ended')), ...NO_TOKEN } },
      },
      '/unsubscribe/{token}': { parameters: [parameter('token', 'path', 'the secret of an unsubscribe link')], post: { summary: 'One-click unsubscribe (RFC 8058)', requestBody: { required: true, content: { 'application/x-www-form-urlencoded': { schema: { type: 'object', properties: { 'List-Unsubscribe': { const: 'One-Click' } } } } } }, responses: { 200: answer('Ended', { type: 'string' }, 'text/html'), 400: answer('Not understood', { type: 'string' }, 'text/html'), 404: answer('No such token', { type: 'string' }, 'text/html') } } },
      '/api/v1/bounces': { post: { summary: 'What the mail service reports, signed by Standard Webhooks', requestBody: body({ type: 'object', required: ['messageId', 'type'], properties: { messageId: { type: 'string' }, type: { enum: ['hard', 'soft', 'complaint'] } } }), responses: { 200: answer('Noted'), 400: problem('Not a report'), 401: problem('Not signed, or too old'), 413: problem('Too large') } } },
      '/api/v1/operator/sites': { get: operator('All sites with their ETag', { responses: { 200: answer('A FeatureCollection', { type: 'object' }, 'application/geo+json') } }), put: operator('Replace all sites', { parameters: [IF_MATCH], requestBody: body({ type: 'object' }), responses: { 200: answer('The sites now', { type: 'object' }, 'application/geo+json'), ...WRONG, ...STALE } }) },
      '/api/v1/operator/sheets': { get: operator('All limit sheets', { responses: { 200: answer('The newest versions', { type: 'array', items: { type: 'object' } }) } }) },
      '/api/v1/operator/sheets/{id}': { parameters: [parameter('id', 'path', 'id of the sheet')], get: operator('A sheet and what its versions changed', { responses: { 200: answer('Sheet and history', { type: 'object', required: ['sheet', 'history'] }), 404: problem('No such sheet') } }), put: operator('A new version; what loosens is told with the next brief', { parameters: [{ ...IF_MATCH, required: false }, { ...parameter('copy-of', 'header', 'of a first version: the sheet it was made from, and is held against'), required: false }, { ...parameter('approval', 'header', 'where there is a second key: what its holder was given'), required: false }], requestBody: body({ type: 'object' }), responses: { 200: answer('Version and changes', { type: 'object', required: ['id', 'version', 'changes'], properties: { id: { type: 'string' }, version: { type: 'integer' }, changes: { type: 'array', items: { type: 'object', required: ['what', 'before', 'after', 'loosens'] } } } }), ...WRONG, ...STALE, 409: problem('It lets more pass than before, and the operator has set a second key that has not approved') } }) },
      '/api/v1/operator/sheets/{id}/approval': { parameters: [parameter('id', 'path', 'id of the sheet')], post: operator('Whoever holds the second key approves of a version that lets more pass; good for exactly this text in place of exactly that version', { parameters: [{ ...IF_MATCH, required: false }, { ...parameter('copy-of', 'header', 'of a first version: the sheet it was made from, and is held against'), required: false }], requestBody: body({ type: 'object' }), responses: { 200: answer('What the header approval of the PUT has to be', { type: 'object', required: ['version', 'changes', 'approval'], properties: { version: { type: 'integer' }, changes: { type: 'array' }, approval: { type: 'string' } } }), ...WRONG, ...STALE } }) },
      '/api/v1/operator/published': { get: operator('The pairs on the board', { responses: { 200: answer('Pairs', ref('Pairs')) } }), put: operator('Replace the pairs on the board', { requestBody: body(ref('Pairs')), responses: { 200: answer('Pairs', ref('Pairs')), ...WRONG } }) },
      '/api/v1/operator/forget': { post: operator('Erase a person', { requestBody: body(ref('Forget')), responses: { 200: answer('The same whether or not there was somebody', state('forgotten')), ...WRONG } }) },
      '/api/v1/operator/bounce-secret': { get: operator('The secret that bounces are signed with', { responses: { 200: answer('The secret', { type: 'object', required: ['secret'], properties: { secret: { type: 'string', pattern: '^whsec_' } } }), 503: problem('This service has no LINK_KEY') } }) },
      '/healthz': { get: { summary: 'How this service is', responses: { 200: answer('The state of each step'), 503: problem('The database cannot be used') } } },
    },
    components: {
      securitySchemes: { operator: { type: 'http', scheme: 'bearer' } },
      schemas: {
        Subscription: schemaOf(subscriptionSchema()), Preferences: schemaOf(preferencesSchema()), Pairs: schemaOf(pairsSchema()), Forget: schemaOf(forgetSchema()),
        PlanRequest: schemaOf(planSchema()), PushEcho: schemaOf(echoSchema()), PushRenewal: schemaOf(renewalSchema()),
        AssessRequest: { type: 'object', required: ['site', 'wing', 'sheet', 'hours'], properties: { site: { type: 'object' }, wing: { type: 'object' }, sheet: { type: 'object' }, hours: { type: 'array', items: { type: 'object' } }, declares: { type: 'array', items: { type: 'string' } }, now: { type: ['string', 'null'], format: 'date-time' } }, additionalProperties: false },
        Links: { type: 'object', required: ['manage', 'unsubscribe', 'feed'], properties: { manage: { type: 'string', format: 'uri' }, unsubscribe: { type: 'string', format: 'uri' }, feed: { type: 'string', format: 'uri' } }, additionalProperties: false },
        Managed: { type: 'object', required: ['state', 'nextBriefAt', 'sites', 'wing', 'deliver', 'units', 'pauseUntil', 'channels'], properties: { state: { enum: ['active', 'paused'] }, nextBriefAt: { type: ['string', 'null'], format: 'date-time' }, sites: { type: 'array', items: { type: 'object', required: ['id', 'sheet'] } }, wing: { type: 'object' }, deliver: { type: 'object', required: ['at', 'timeZone', 'days'] }, units: { type: 'object', required: ['speed', 'height'] }, pauseUntil: { type: ['string', 'null'], format: 'date' }, channels: { type: 'array', items: { type: 'object', required: ['id', 'kind', 'state', 'to', 'quiet'], properties: { id: { type: 'string' }, kind: { enum: ['mail', 'webhook', 'push', 'terminal'] }, state: { enum: ['unverified', 'active', 'dead'] }, to: { type: 'string' }, quiet: { type: ['object', 'null'] } } } } } },
        Problem: { type: 'object', required: ['type', 'title', 'status'], properties: { type: { type: 'string', format: 'uri' }, title: { type: 'string' }, status: { type: 'integer' }, detail: { type: 'string' }, problems: { type: 'array', items: { type: 'object', required: ['path', 'value', 'problem', 'allowed'], properties: { path: { type: 'string' }, value: { type: 'string' }, problem: { type: 'string' }, allowed: { type: 'string' } } } } } },
      },
    },
  };
}
