/** What the page of a subscription is made of: plain data, put together by worker/routes/manage-view.ts. */
import type { Issue } from '../../../lib/result.ts';
import type { LimitSheet } from '../../../lib/margin/sheet.ts';
import type { Site } from '../../../lib/site.ts';
import type { PreferencesJson } from '../../security/manage.ts';
import type { Delivery } from '../../store/deliveries.ts';
import type { StoredChannel } from '../../store/channel.ts';

export interface ChannelView extends Pick<StoredChannel, 'id' | 'kind' | 'state' | 'quietFrom' | 'quietTo' | 'secretVersion' | 'oldestSecretVersion'> {
  /** Enough to tell which one it is. */
  readonly to: string;
  readonly reachedAtMs: number | null;
  readonly shownAtMs: number | null;
  /** Why it has ended. */
  readonly reason: string | null;
  /** Of a webhook, until it has answered or the secret before is given up; null from then on. */
  readonly secret: string | null;
}

/** Which form of the page was sent and could not be used, as it was typed. */
export interface Refused {
  readonly form: FormData;
  readonly action: string;
  readonly problems: readonly Issue[];
}

export interface ManageView {
  readonly state: 'active' | 'paused' | 'ended';
  readonly nextBriefAtMs: number | null;
  readonly kept: PreferencesJson;
  readonly channels: readonly ChannelView[];
  readonly deliveries: readonly Delivery[];
  readonly sites: readonly Site[];
  readonly sheets: readonly LimitSheet[];
  /** Training days whose blocks it is told about when they turn. */
  readonly plans: readonly { readonly id: string; readonly localDate: string; readonly path: string }[];
  readonly feed: string;
  /** The page's own path, secret like the link that leads to it. */
  readonly path: string;
  /** Of VAPID, for a browser that is added; null where no push is sent. */
  readonly pushKey: string | null;
  readonly said: string | null;
  readonly refused: Refused | null;
  readonly nowMs: number;
}
