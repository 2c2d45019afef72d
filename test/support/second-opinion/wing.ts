// flight-model.md section 4: the wing.
import { UNKNOWN, known } from './numbers.ts';
import { wingClasses } from './tables.ts';
import type { Wing } from './types.ts';

export type Polar = { trim: number; glide: number; minSink: number; vms: number; a: number; stall: number; top: number; massFactor: number };

export function polarOf(wing: Wing): Polar {
  const typical = wing.class === undefined ? undefined : wingClasses[wing.class];
  const trim = wing.trimMps ?? (typical === undefined ? UNKNOWN : typical.trimKmh / 3.6);
  const glide = wing.glideAtTrim ?? typical?.glideAtTrim ?? UNKNOWN;
  const minSink = wing.minSinkMps ?? typical?.minSinkMps ?? UNKNOWN;
  const vms = 2 * minSink * glide - trim;
  const a = minSink / (trim * trim - vms * vms);
  const stall = wing.stallMps ?? 0.62 * trim;
  const top = wing.topMps ?? 1.35 * trim;
  const bothMasses = wing.allUpMassKg !== undefined && wing.referenceMassKg !== undefined;
  const massFactor = bothMasses ? (wing.allUpMassKg as number) / (wing.referenceMassKg as number) : 1;
  if (!known(vms) || !known(a)) throw new Error('The wing is refused: it has neither a class nor trim, glide and minimum sink.');
  if (vms <= stall) throw new Error(`The wing is refused: its speed of minimum sink ${vms} m/s is not above its stall ${stall} m/s.`);
  if (vms >= trim) throw new Error(`The wing is refused: its speed of minimum sink ${vms} m/s is not below its trim ${trim} m/s.`);
  return { trim, glide, minSink, vms, a, stall, top, massFactor };
}

// "Every speed and sink times k = sqrt( (m/mref) (1.225/rho) ); glide unchanged". With speeds and sinks times k, `a` is divided by it.
export function atDensity(polar: Polar, rho: number): Polar {
  const k = Math.sqrt(polar.massFactor * (1.225 / rho));
  return {
    trim: polar.trim * k,
    glide: polar.glide,
    minSink: polar.minSink * k,
    vms: polar.vms * k,
    a: polar.a / k,
    stall: polar.stall * k,
    top: polar.top * k,
    massFactor: polar.massFactor,
  };
}

// S(V) = a (V - Vms)² + minSink
export function sinkAt(polar: Polar, airspeedMps: number): number {
  return polar.a * (airspeedMps - polar.vms) ** 2 + polar.minSink;
}

// V* = W + sqrt( (W - Vms)² + (minSink + s)/a ), kept between Vms and top
export function speedToFly(polar: Polar, headwindMps: number, sinkingMps: number): number {
  const free = headwindMps + Math.sqrt((headwindMps - polar.vms) ** 2 + (polar.minSink + sinkingMps) / polar.a);
  return Math.min(polar.top, Math.max(polar.vms, free));
}

// sqrt(V² - c²) - h; null where |c| >= V: no solution. NaN in, NaN out.
export function groundSpeed(airspeedMps: number, crossMps: number, headMps: number): number | null {
  if (!known(airspeedMps) || !known(crossMps) || !known(headMps)) return UNKNOWN;
  if (Math.abs(crossMps) >= airspeedMps) return null;
  return Math.sqrt(airspeedMps * airspeedMps - crossMps * crossMps) - headMps;
}
