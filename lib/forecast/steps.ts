/**
 * Models whose own steps are further apart than an hour are filled in by the service that serves them. Such an hour says no
 * more than the steps around it: between two steps a spread of members is smooth, and a gust can hide. Steps count from the
 * run, and every model in use runs at hours of the day that its step divides, so that the hour of the day in UTC tells.
 */
import { epochOf, HOUR_MS } from '../time.ts';

export function isInterpolated({ stepHours = 1 }: { readonly stepHours?: number | undefined }, validAt: string): boolean {
  return (epochOf(validAt) / HOUR_MS) % stepHours !== 0;
}
