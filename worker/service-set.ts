import type { DayInput } from '../lib/brief/day-input.ts';
import type { JudgedDay } from '../lib/brief/day.ts';
import type { CautionThresholds } from '../lib/brief/thresholds.ts';
import type { WingClasses } from '../lib/config/wing.ts';
import type { LimitSheet } from '../lib/margin/sheet.ts';
import type { Issue, Result } from '../lib/result.ts';
import type { Site } from '../lib/site.ts';
import type { Wing } from '../lib/wing/wing.ts';
import type { ChannelChecks } from '../lib/config/subscription-channels.ts';
import type { Address, Channel } from './channels/channel.ts';
import type { Step } from './morning/job.ts';
import type { Mailer } from './security/mailer.ts';
import type { FeedDoor } from './feeds/door.ts';
import type { Say } from './say.ts';
import type { Settings } from './settings.ts';
import type { Source } from './sources/source.ts';
import type { AbsenceStore } from './store/absence.ts';
import type { BreakerStore } from './store/breaker.ts';
import type { BriefStore } from './store/brief.ts';
import type { ChannelStore } from './store/channel.ts';
import type { Database } from './store/database.ts';
import type { ForecastStore } from './store/forecast.ts';
import type { LogStore } from './store/log.ts';
import type { MetaStore } from './store/meta.ts';
import type { OutboxStore } from './store/outbox.ts';
import type { OutboxUpkeepStore } from './store/outbox-upkeep.ts';
import type { PlanStore } from './store/plan.ts';
import type { PublishedStore } from './store/published.ts';
import type { RateStore } from './store/rate.ts';
import type { RunStore } from './store/run.ts';
import type { RunWorkStore } from './store/run-work.ts';
import type { SheetStore, StoredSheet } from './store/sheet.ts';
import type { SheetHistoryStore } from './store/sheet-history.ts';
import type { SignupStore } from './store/signup.ts';
import type { SiteStore, StoredSite } from './store/site.ts';
import type { SourceCacheStore } from './store/source-cache.ts';
import type { SourceGroundStore } from './store/source-ground.ts';
import type { SubscriptionStore } from './store/subscription.ts';
import type { SuppressionStore } from './store/suppression.ts';
import type { TerminalStore } from './store/terminal.ts';
import type { TokenStore } from './store/token.ts';
import type { WindowStateStore } from './store/window-state.ts';
import type { StoredWing, WingStore } from './store/wing.ts';

/** What one invocation of the desk works with. Nothing in either worker reaches the world, the clock or chance but through this. */
export interface DeskServices {
  readonly settings: Settings;
  readonly clock: Clock;
  readonly ids: IdSource;
  /** 0 to 1; spreads retries. */
  readonly random: () => number;
  readonly stores: Stores;
  readonly sleep: (ms: number) => Promise<void>;
  /** Writes a line of the running log. */
  readonly say: Say;
  /** Sends wake-up calls. Never fails: a call that cannot be sent is made up for by the sweep. */
  readonly wake: (step: Step, calls: number) => Promise<void>;
  /** The names of the sources of a site, in the order of config; the desk reads what they said, and asks none. */
  readonly sourceNames: (place: Place) => readonly Pick<Source, 'id' | 'kind'>[];
  readonly feedDoor: FeedDoor;
  readonly sendsMail: boolean;
  readonly addresses: Addresses;
  readonly read: Readers;
  readonly wingClasses: () => WingClasses;
  /** The limit sheets that ship: known by their id also before, or without, a row of theirs. */
  readonly shippedSheets: () => readonly LimitSheet[];
  readonly thresholds: () => CautionThresholds;
  readonly judge: (input: DayInput) => JudgedDay;
}

/** What the morning works with besides: only there are providers asked. */
export interface Services extends DeskServices {
  /** The ways to send; the desk only writes down what is to be sent. */
  readonly channels: Readonly<Record<string, Channel>>;
  /** null where no mail is sent. */
  readonly mailer: Mailer | null;
  /** The sources to ask about a site, in the order of config. */
  readonly sourcesFor: (place: Place) => readonly Source[];
  /** Those behind them that cover it too; they are tried once a week. */
  readonly standBysFor: (place: Place) => readonly Source[];
  /** What the judge gets wrong of what is known; nothing when it may be trusted. */
  readonly selfTest: () => readonly string[];
  /** Tells the watchdog outside that all is well; false when it could not be told. */
  readonly heartbeat: () => Promise<boolean>;
}

export interface Clock {
  readonly nowMs: () => number;
}

export interface IdSource {
  readonly next: () => string;
}

/** What may be written down as the target of a channel, and what its owner has to be told. */
export interface Addresses extends ChannelChecks {
  /** Whether the target of a browser has keys that can be encrypted for. */
  readonly hasKeys: (target: string) => Promise<boolean>;
  /** The signing secret of a webhook as its receiver is given it. */
  readonly secretOf: (address: Address) => Promise<string | null>;
}

/** A site with what the table knows besides. */
export interface Place {
  readonly site: Site;
  readonly demo: boolean;
}

/** From stored texts to typed values; a row that does not parse is an outcome, not a crash. */
export interface Readers {
  readonly site: (row: StoredSite) => Result<Place, Issue[]>;
  readonly sheet: (row: StoredSheet) => Result<LimitSheet, Issue[]>;
  readonly wing: (row: StoredWing) => Result<Wing, Issue[]>;
}

export interface Stores {
  readonly db: Database;
  readonly meta: MetaStore;
  readonly site: SiteStore;
  readonly sheet: SheetStore;
  readonly wing: WingStore;
  readonly plan: PlanStore;
  readonly published: PublishedStore;
  readonly sourceGround: SourceGroundStore;
  readonly forecast: ForecastStore;
  readonly brief: BriefStore;
  readonly subscription: SubscriptionStore;
  readonly channel: ChannelStore;
  readonly outbox: OutboxStore;
  readonly outboxUpkeep: OutboxUpkeepStore;
  readonly run: RunStore;
  readonly runWork: RunWorkStore;
  readonly breaker: BreakerStore;
  readonly sourceCache: SourceCacheStore;
  readonly windowState: WindowStateStore;
  readonly absence: AbsenceStore;
  readonly terminal: TerminalStore;
  readonly log: LogStore;
  readonly signup: SignupStore;
  readonly token: TokenStore;
  readonly rate: RateStore;
  readonly suppression: SuppressionStore;
  readonly sheetHistory: SheetHistoryStore;
}
