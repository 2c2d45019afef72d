/** Speed-up over a crest: the guideline's own numbers, and Askervein hill as it was measured. */
import { speedUp, speedUpAt } from '../../../lib/air/terrain.ts';
import type { Hill, HillForm } from '../../../lib/site.ts';
import { table, type Table } from '../../accuracy/table.ts';

const taylorLee = { source: 'Taylor & Lee (1984) Climatological Bulletin 18(2), table 1', standing: 'memory' } as const;

/** dS at the ground is B h/L; what is left of it at a height z is exp(-A z/L). */
const gentle = { heightM: 100, halfLengthM: 500 } as const;
function bOf(form: HillForm): number {
  return speedUpAt({ ...gentle, form }, 0) * (gentle.halfLengthM / gentle.heightM);
}
function aOf(form: HillForm): number {
  const hill = { ...gentle, form };
  return -Math.log(speedUpAt(hill, 50) / speedUpAt(hill, 0)) * (gentle.halfLengthM / 50);
}
// The decay constants 3, 2.5 and 4 stand as gamma in ASCE 7, figure 26.8-1, too.
const constants = table(
  { topic: 'Speed-up constants of ridge, escarpment and cone', unit: '', ...taylorLee, evidence: 'number', rounding: 'to 0.1', tolerance: 0.000001, count: 6 },
  [
    ['ridge', 'B', 2, bOf('ridge')], ['ridge', 'A', 3, aOf('ridge')], ['escarpment', 'B', 0.8, bOf('escarpment')],
    ['escarpment', 'A', 2.5, aOf('escarpment')], ['cone', 'B', 1.6, bOf('cone')], ['cone', 'A', 4, aOf('cone')],
  ] as const,
  { says: ([form, letter]) => `${letter} of a ${form}`, expected: ([, , value]) => value, ours: ([, , , value]) => value },
);
const evaluated = table(
  { topic: 'Speed-up at 10 m over a 100 m hill', unit: '', ...taylorLee, evidence: 'formula', rounding: 'to 0.0001', tolerance: 0.00005, count: 3 },
  [['ridge', 0.3767], ['escarpment', 0.1522], ['cone', 0.2954]] as const,
  { says: ([form]) => `${form}, 500 m to half height`, expected: ([, dS]) => dS, ours: ([form]) => speedUp({ ...gentle, form }, 100) },
);

/** Hill HT of Askervein, wind square on its long side: 116 m high, about 250 m to half height (the latter from memory). */
export const askervein: Hill = { form: 'ridge', heightM: 116, halfLengthM: 250 };

// Run TU03-A of 3 October 1983. U at hilltop over U at the reference mast at the same height, less one.
const measured = { source: 'Taylor & Teunissen (1985) MSRB-84-6, tables A1.3 and A1.7, run TU03-A', standing: 'published', evidence: 'nature', compared: 'in percent' } as const;
const crestAt10 = table(
  {
    topic: 'Speed-up at 10 m over Askervein crest', unit: '%', ...measured, rounding: '0.83 by the stated, 0.86 by the interpolated reference wind', tolerance: 25, count: 2,
    wider: 'a guideline of two constants against a real hill: 20 to 25 % of the speed-up is common practice for it',
  },
  [['stated', 0.83], ['interpolated', 0.86]] as const,
  { says: ([reference]) => `reference wind as ${reference}`, expected: ([, dS]) => dS, ours: () => speedUp(askervein, 116) },
);
const crestProfile = table(
  {
    topic: 'Speed-up from 5 m to 24 m over Askervein crest', unit: '%', ...measured, rounding: 'to 0.001', tolerance: 25, count: 4,
    wider: 'the formula falls off more slowly than the hill did; the model takes it at 10 m only',
  },
  [[5, 1.095], [8, 0.941], [15, 0.783], [24, 0.593]] as const,
  { says: ([heightM]) => `at ${heightM} m`, expected: ([, dS]) => dS, ours: ([heightM]) => speedUpAt(askervein, heightM) },
);

export const hill: readonly Table[] = [constants, evaluated, crestAt10, crestProfile];
