import { judgeDay } from '../lib/brief/judge-day.ts';
import { success, type Issue, type Result } from '../lib/result.ts';
import { deskServices, worldOf, type World } from './desk-services.ts';
import { heart } from './morning/heartbeat.ts';
import { selfTester } from './morning/self-test.ts';
import { ownData } from './own-data.ts';
import type { Place, Services, Stores } from './service-set.ts';
import type { Env } from './settings.ts';
import { demoSources } from './sources/demo.ts';
import { liveSources } from './sources/order.ts';

/** The services of one invocation, or every setting that is wrong. */
export function createServices(env: Env): Result<Services, Issue[]> {
  const world = worldOf(env);
  return world.ok ? success(assemble(world.value)) : world;
}

export function assemble(world: World, instead: Partial<Pick<Services, 'sourcesFor' | 'judge' | 'selfTest'>> = {}): Services {
  const desk = deskServices(world);
  return {
    ...desk,
    ...sourcesOf(world, desk.stores),
    // A stand-in for the judge stands in a test and not before subscribers: it is not asked what it knows.
    selfTest: instead.judge === undefined ? selfTester(judgeDay, ownData.thresholds) : () => [],
    heartbeat: heart(world.settings.heartbeatUrl, world.fetch),
    ...(instead.sourcesFor === undefined ? {} : { sourceNames: instead.sourcesFor, standBysFor: () => [] }),
    ...instead,
  };
}

/** Invented weather for the places of the demo, and for nobody else; in a rehearsal they are asked of stand-ins of the real services. */
function sourcesOf({ settings, fetch, clock }: World, stores: Stores): Pick<Services, 'sourcesFor' | 'standBysFor'> {
  const live = liveSources(ownData.sources(), settings, {
    fetch, now: clock.nowMs, local: settings.local, cache: stores.sourceCache, breakers: stores.breaker,
    report: ({ source, notice }) => console.warn(`${source}: ${notice}`),
  });
  const demo = demoSources(ownData.demo(), clock.nowMs);
  const isInvented = (place: Place): boolean => place.demo && !settings.rehearsal;
  return {
    sourcesFor: (place) => (isInvented(place) ? demo : live(place.site)),
    standBysFor: (place) => (isInvented(place) ? [] : live(place.site, 'standBy')),
  };
}
