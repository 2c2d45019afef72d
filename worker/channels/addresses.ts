import type { Addresses } from '../service-set.ts';
import { mailAddress } from '../security/mail-address.ts';
import type { Settings } from '../settings.ts';
import { areKeys } from './push/encrypt.ts';
import { readTarget } from './push/endpoint.ts';
import { webhookSecrets, webhookSecretText } from './webhook.ts';
import { webhookUrl } from './webhook-url.ts';

/** Where this service sends to, as the targets of its channels are stored. */
export function addressesOf({ local, publicUrl, linkKey }: Settings): Addresses {
  return {
    mail(text) {
      const address = mailAddress(text);
      return 'problem' in address ? address : { is: JSON.stringify({ address: address.is }) };
    },
    webhook(text) {
      const found = webhookUrl(text, { local, ownHost: new URL(publicUrl).hostname });
      return 'problem' in found ? found : { is: JSON.stringify({ url: found.url, host: new URL(found.url).host }) };
    },
    push({ endpoint, p256dh, auth }) {
      const target = readTarget(JSON.stringify({ endpoint, p256dh, auth }), { local });
      if ('problem' in target) return target;
      const unpadded = (key: string): string => key.replace(/=+$/, '');
      return { is: JSON.stringify({ endpoint: target.endpoint, p256dh: unpadded(p256dh), auth: unpadded(auth), host: new URL(target.endpoint).host }) };
    },
    async hasKeys(target) {
      const push = readTarget(target, { local });
      return !('problem' in push) && areKeys(push.keys);
    },
    async secretOf(address) {
      const [key] = linkKey === null ? [] : await webhookSecrets(linkKey, address);
      return key === undefined ? null : webhookSecretText(key);
    },
  };
}
