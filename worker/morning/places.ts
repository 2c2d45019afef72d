import type { Place, DeskServices } from '../service-set.ts';
import type { LogEntry } from '../store/log.ts';

/** The sites that there are and that can be read; what is wrong with the others is logged, and holds up nobody. */
export async function placesOf(services: DeskServices, siteIds: readonly string[]): Promise<ReadonlyMap<string, Place>> {
  const rows = await services.stores.site.some(siteIds);
  const places = new Map<string, Place>();
  const unreadable: LogEntry[] = [];
  for (const row of rows) {
    const place = services.read.site(row);
    if (place.ok) places.set(row.id, place.value);
    else unreadable.push({ level: 'error', step: 'read', event: 'site-unreadable', detail: { site: row.id, path: place.error[0]?.path ?? '$' } });
  }
  await services.stores.log.write(unreadable, services.clock.nowMs());
  return places;
}
