/** Why the tow goes the way it is recommended to go. */
import type { HeadingReason } from '../../margin/tow-heading.ts';
import { quantityText } from '../units-out.ts';
import { marginName } from './margins.ts';
import type { Reader } from './reader.ts';
import { sourceName } from './sources.ts';
import { sentence } from './plain.ts';

/** "250°", three digits, as headings are said. */
export function headingName(deg: number): string {
  if (!Number.isFinite(deg)) return 'a heading not known';
  return `${String(Math.round(((deg % 360) + 360) % 360) % 360).padStart(3, '0')}°`;
}

function lower(name: string): string {
  return name.slice(0, 1).toLowerCase() + name.slice(1);
}

function headingReason(reason: HeadingReason, reader: Reader): string {
  switch (reason.kind) {
    case 'only one': return 'The strip is used one way only.';
    case 'set': return sentence(`As ${sourceName(reason.by)} has it, so that all sources judge one tow`);
    case 'larger spare': return sentence(`Along ${headingName(reason.otherHeadingDeg)} less would be left on the margin of ${lower(marginName(reason.of))}`);
    case 'more head': return sentence(`Both ways leave as much; along ${headingName(reason.otherHeadingDeg)} there is less head wind than ${quantityText({ value: reason.headMps, unit: 'm/s' }, reader.units)}`);
    case 'as laid out': return sentence(`Both ways leave as much and neither has more head wind; it is the way the strip is laid out, not ${headingName(reason.otherHeadingDeg)}`);
  }
}

/** "Tow along 250°. Along 070° less would be left of the wind from behind on the strip." */
export function headingSentence(heading: { readonly headingDeg: number; readonly reason: HeadingReason }, reader: Reader): string {
  return `Tow along ${headingName(heading.headingDeg)}. ${headingReason(heading.reason, reader)}`;
}
