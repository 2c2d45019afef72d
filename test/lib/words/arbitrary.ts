// Random judged days: any verdicts, causes, failures, cautions, names, units, zones.
import fc from 'fast-check';
import { CAUTION_IDS, type Caution } from '../../../lib/brief/cautions.ts';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import { HEIGHT_UNITS, SPEED_UNITS } from '../../../lib/brief/units-out.ts';
import { failureSentence, type Reader } from '../../../lib/brief/words/index.ts';
import type { SourceFailure } from '../../../lib/forecast/failure.ts';
import { MARGIN_IDS } from '../../../lib/margin/ids.ts';
import { dayOf, marginOf, UNIT_OF, voteOf } from '../../support/days.ts';
import { blemishes } from './forbidden.ts';

const count = fc.integer({ min: 0, max: 100_000 });

/** What a service may have called something. Chance makes words of it, or runs of dots, that a text of ours must not hold: those are not ours. */
const given = fc.string().filter((text) => blemishes(`called ${text} there`).length === 0);

export const failures: fc.Arbitrary<SourceFailure> = fc.oneof(
  fc.constantFrom<SourceFailure>(
    { kind: 'unreachable' }, { kind: 'redirected' }, { kind: 'not-json' }, { kind: 'content-type' }, { kind: 'run-missing' },
    { kind: 'withheld' }, { kind: 'not-covered' }, { kind: 'not-fetched' }, { kind: 'breaker-open', until: '2027-05-14T06:40:00Z' },
  ),
  fc.record({ kind: fc.constant('timeout' as const), afterMs: count }),
  fc.record({ kind: fc.constant('too-large' as const), limitBytes: count }),
  fc.record({ kind: fc.constantFrom('refused' as const, 'server-error' as const), status: fc.integer({ min: 400, max: 599 }) }),
  fc.record({ kind: fc.constant('rate-limited' as const), retryAfterS: fc.option(count) }),
  fc.record({ kind: fc.constant('shape' as const), path: given }),
  fc.record({ kind: fc.constant('unit' as const), field: given, expected: given, found: fc.option(given) }),
  fc.record({ kind: fc.constant('times' as const), why: fc.constantFrom('unsorted' as const, 'duplicate' as const, 'gap' as const, 'not-hourly' as const, 'not-utc' as const, 'wrong-day' as const, 'empty' as const) }),
  fc.record({ kind: fc.constant('run-old' as const), ageHours: count }),
  fc.record({ kind: fc.constant('run-future' as const), aheadHours: count }),
  fc.record({ kind: fc.constant('place' as const), distanceKm: count }),
  fc.record({ kind: fc.constant('ground' as const), why: fc.constantFrom('missing' as const, 'changed' as const), byM: fc.option(count) }),
  fc.record({ kind: fc.constant('constant' as const), field: fc.constantFrom('wind10m' as const, 'gustMps' as const, 'temperature2mC' as const) }),
);

export const readers: fc.Arbitrary<Reader> = fc.record({
  units: fc.record({ speed: fc.constantFrom(...SPEED_UNITS), height: fc.constantFrom(...HEIGHT_UNITS) }),
});

export const cautions: fc.Arbitrary<Caution> = fc.record({
  id: fc.constantFrom(...CAUTION_IDS),
  value: fc.option(fc.double({ min: -50, max: 3000, noNaN: true })),
  unit: fc.option(fc.constantFrom('m/s', 'm', '°', 'hPa', 'J/kg', 'mm', '%', 'h', '°C', 'K')),
  from: fc.option(fc.constant('2027-05-14T08:00:00Z')),
  to: fc.option(fc.constant('2027-05-14T11:00:00Z')),
  subject: fc.option(fc.constantFrom('demo', 'open-meteo:icon_d2', 'A north of the mountains')),
});

const hostile = fc.constantFrom(
  'Kestrel Edge', 'Within limits hill', 'CANNOT  SAY', '', '<b>within limits</b>', '\u202Estimil nihtiw', 'x'.repeat(300), 'all\u200Bgood',
);

const spares = fc.double({ min: -20, max: 20, noNaN: true });

export const days: fc.Arbitrary<JudgedDay> = fc
  .record({
    letters: fc.array(fc.constantFrom('w', 'c', 'b', 'u'), { maxLength: 17 }),
    uniform: fc.option(fc.constantFrom('w', 'c', 'b', 'u'), { freq: 2 }),
    demo: fc.boolean(), siteName: hostile, localRules: fc.option(fc.string()),
    timeZone: fc.constantFrom('Europe/Vienna', 'Asia/Kathmandu', 'America/Denver', 'Australia/Lord_Howe'),
    cautions: fc.array(cautions, { maxLength: 4 }),
    causeId: fc.constantFrom(...MARGIN_IDS), spare: spares,
    silent: fc.array(failures, { maxLength: 2 }), voted: fc.boolean(), none: fc.boolean(),
  })
  .map(({ letters, uniform, causeId, spare, silent, voted, none, ...given }) => {
    const text = uniform === null ? letters.join('') : uniform.repeat(letters.length);
    const day = dayOf(text, given);
    const hours = day.hours.map((hour) => hour.validAt === day.cause?.validAt
      ? { ...hour, margins: [marginOf(causeId, { unit: UNIT_OF[causeId], status: hour.verdict, spare: hour.verdict === 'unknown' ? null : spare, demand: 2.5 + spare })] }
      : hour);
    return {
      ...day, hours, cause: day.cause === null ? null : { id: causeId, validAt: day.cause.validAt },
      sources: [
        ...(voted ? [voteOf()] : []),
        ...silent.map((failure) => voteOf({ source: 'open-meteo:icon_d2', state: 'no vote', why: failureSentence(failure), runAt: null, fetchedAt: null, runAgeHours: null })),
      ],
      ...(none ? { legalDay: { none: 'the sun does not rise' }, hours: [], windows: [], cause: null, verdict: 'unknown' as const } : {}),
    };
  });
