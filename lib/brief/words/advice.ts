/** Advice that no margin counts on. */
import { quantityText } from '../units-out.ts';
import type { Reader } from './reader.ts';

export function speedToFlySentence(speedToFlyMps: number, reader: Reader): string {
  return `For the longest glide over the ground, hold ${quantityText({ value: speedToFlyMps, unit: 'm/s' }, reader.units)} of airspeed; no margin counts on it.`;
}
