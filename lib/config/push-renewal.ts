/** What browsers say about themselves: that their address with the push service has changed, and the nonce they were sent. */
import * as z from 'zod/mini';
import { fields, once } from './fields.ts';
import { pushFields, text } from './subscription-channels.ts';

/** As `PushSubscription.toJSON()` has it. */
const browser = () => fields({ ...pushFields(), expirationTime: z.nullish(z.number({ error: () => 'a number or null' })) });

export const renewalSchema = once(() => fields({
  fresh: browser(),
  /** What it was before, with its secret: shows that this is the browser that is told. */
  old: z.nullish(browser()),
  /** Or the secret of a manage link. */
  token: z.nullish(text(200, 'the secret of a manage link')),
}));

export const echoSchema = once(() => fields({ nonce: text(100, 'the nonce of the push, as it came') }));

export type Renewal = z.output<ReturnType<typeof renewalSchema>>;
