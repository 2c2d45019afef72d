/** All of `config/` at once: the imported JSON values in, one typed Config or every problem of every file out. */
import type { CautionThresholds } from '../brief/thresholds.ts';
import type { Scenario } from '../forecast/invented/scenario.ts';
import type { LimitSheet } from '../margin/sheet.ts';
import { failure, success, type Issue, type Result } from '../result.ts';
import type { Site } from '../site.ts';
import type { PlanRequest } from '../plan/request.ts';
import { localDate } from '../time.ts';
import { parsePlanRequest } from './plan.ts';
import { parsePublished, type Published } from './published.ts';
import { parseScenario } from './scenario.ts';
import { parseSheets } from './sheet.ts';
import { parseSites } from './sites.ts';
import { parseSourceOrder, type SourceOrder } from './source-order.ts';
import { parseSubscribers, type SeedSubscriber } from './subscribers.ts';
import { parseThresholds } from './thresholds.ts';
import { parseWingClasses } from './wing-classes.ts';
import type { WingClasses } from './wing.ts';

/** The files of `config/` by their names, as JSON gives them. */
export interface ConfigFiles {
  readonly sites: unknown;
  readonly sheets: unknown;
  readonly wingClasses: unknown;
  readonly published: unknown;
  readonly sources: unknown;
  readonly thresholds: unknown;
  readonly subscribers: unknown;
  readonly demo: unknown;
  /** The worked training day. */
  readonly planDemo: unknown;
}

export interface Config {
  readonly sites: readonly Site[];
  readonly sheets: readonly LimitSheet[];
  readonly wingClasses: WingClasses;
  readonly published: Published;
  readonly sources: SourceOrder;
  readonly thresholds: CautionThresholds;
  readonly subscribers: readonly SeedSubscriber[];
  readonly demo: Scenario;
  readonly planDemo: PlanRequest;
}

/** `nowMs`: the clock's now, for headings given as magnetic. The path of an issue begins with its file: `$.sheets[2].limits`. */
export function loadConfig(files: ConfigFiles, context: { readonly nowMs: number }): Result<Config, Issue[]> {
  const sites = parseSites(files.sites, context, ['sites']);
  const sheets = parseSheets(files.sheets, { basis: 'required' }, ['sheets']);
  const wingClasses = parseWingClasses(files.wingClasses, ['wingClasses']);
  const sources = parseSourceOrder(files.sources, ['sources']);
  const thresholds = parseThresholds(files.thresholds, ['thresholds']);
  const demo = parseScenario(files.demo, ['demo']);
  // What names sites and sheets by id can only be held against those that could be read.
  const published = sites.ok && sheets.ok ? parsePublished(files.published, { sites: sites.value, sheets: sheets.value }, ['published']) : null;
  const subscribers = sites.ok ? parseSubscribers(files.subscribers, sites.value, ['subscribers']) : null;
  const planDemo = sites.ok && sheets.ok
    ? parsePlanRequest(files.planDemo, { sites: sites.value, sheets: sheets.value, dateAt: ({ timeZone }) => localDate(context.nowMs, timeZone) }, ['planDemo']) : null;
  const all = [sites, sheets, wingClasses, sources, thresholds, demo, published, subscribers, planDemo];
  const issues = all.flatMap((result) => (result === null || result.ok ? [] : result.error));
  if (!sites.ok || !sheets.ok || !wingClasses.ok || !sources.ok || !thresholds.ok || !demo.ok || !published?.ok || !subscribers?.ok || !planDemo?.ok) return failure(issues);
  return success({
    sites: sites.value, sheets: sheets.value, wingClasses: wingClasses.value, published: published.value,
    sources: sources.value, thresholds: thresholds.value, subscribers: subscribers.value, demo: demo.value, planDemo: planDemo.value,
  });
}
