// Typical days, invented, as a forecaster would tell them, and what the trade would say of each: the four sanity checks at
// the end of the design page's section 8, and five more.
import { describe, expect, test } from 'vitest';
import { ALPINE, ALPINE_GROUND_M, dewOf, hourAt, judged, marginsThatAre, QUIET, sheets, STRIP, STRIP_GROUND_M, type Day, type Sky } from '../../support/typical-days.ts';

const FOOT_SHEETS = sheets.filter(({ kind }) => kind === 'launch').map(({ id }) => id);
/** Ground handling keeps both feet down. */
const FLYING_SHEETS = FOOT_SHEETS.filter((id) => id !== 'ground-handling');

const isOpen = (verdict: string) => verdict === 'within' || verdict === 'close';

/** Between two hours of the day a value goes from one to the other, smoothly enough for a forecast. */
function grows(hour: number, [fromHour, from]: readonly [number, number], [toHour, to]: readonly [number, number]): number {
  const share = Math.min(1, Math.max(0, (hour - fromHour) / (toHour - fromHour)));
  return from + share * (to - from);
}

describe('a calm alpine morning', () => {
  // A breath of air down the valley, cool and dry under a clear sky, hardly more wind aloft.
  const day: Day = (hour) => ({
    ...QUIET, wind: [grows(hour, [5, 0.9], [10, 1.6]), 245], gustMps: grows(hour, [5, 1.6], [10, 2.6]), aloft: [[1500, 2, 250], [3000, 4, 270]],
    temperatureC: grows(hour, [5, 6], [14, 15]), dewPointC: 2, shortwaveWm2: grows(hour, [6, 10], [9, 120]), mixedLayerM: grows(hour, [6, 60], [10, 250]),
  });

  test.each(FOOT_SHEETS.filter((id) => id !== 'ridge-soaring'))('is within or close for %s', (sheet) => {
    const morning = judged({ site: ALPINE, groundM: ALPINE_GROUND_M, sheet, day });
    for (const hour of [7, 8, 9]) {
      const { verdict, causes } = hourAt(morning, hour);
      expect(isOpen(verdict), `${hour} h: ${verdict} by ${causes.join()}`).toBe(true);
    }
    expect(morning.windows[0]!.lastLaunch).not.toBeNull();
  });

  test('does not carry anyone along a ridge', () => {
    const hour = hourAt(judged({ site: ALPINE, groundM: ALPINE_GROUND_M, sheet: 'ridge-soaring', day }), 8);
    expect(hour).toMatchObject({ verdict: 'beyond', causes: expect.arrayContaining(['ridgeLift']) });
  });
});

describe('a strong thermic noon', () => {
  // Hot ground, a deep layer, light wind: climbs of nearly three metres a second.
  const day: Day = (hour) => ({
    ...QUIET, wind: [1.8 + hour / 200, 250], gustMps: 3.6 + hour / 200, aloft: [[1500, 2.5, 250], [3500, 5, 260]], temperatureC: grows(hour, [6, 9], [14, 21]), dewPointC: 4,
    air: [[3300, -3, 55], [4500, -12, 30]], shortwaveWm2: Math.max(0, 850 * Math.sin((Math.PI * (hour - 6)) / 15)), mixedLayerM: grows(hour, [8, 200], [13, 2000]),
  });
  const noon = (sheet: string) => hourAt(judged({ site: ALPINE, groundM: ALPINE_GROUND_M, sheet, day }), 13);

  test.each(['first-hops', 'descent-new'])('is beyond for %s, because of the thermals', (sheet) => {
    expect(noon(sheet)).toMatchObject({ verdict: 'beyond' });
    expect(marginsThatAre(noon(sheet), 'beyond')).toContain('thermal');
  });

  test('is not beyond for those who came for it', () => {
    const hour = noon('thermal-flight');
    expect(marginsThatAre(hour, 'beyond', 'unknown')).toEqual([]);
    expect(hour.margins.find(({ id }) => id === 'thermal')!.demand).toBeGreaterThan(2.3);
  });
});

describe('a weak wind at a north launch under a strong southerly aloft', () => {
  const north = { ...ALPINE, facingDeg: 0, trackDeg: 0 };
  const day: Day = (hour) => ({ ...QUIET, wind: [1.5 + hour / 200, 355], gustMps: 2.5 + hour / 200, aloft: [[1450, 3.5, 165], [1900, 11, 180], [3340, 20, 180]], temperatureC: 9 + hour / 5 });

  test.each(FLYING_SHEETS)('is beyond for %s, though the windsock hangs', (sheet) => {
    const hour = hourAt(judged({ site: north, groundM: ALPINE_GROUND_M, sheet, day }), 10);
    expect(hour.verdict).toBe('beyond');
    expect(marginsThatAre(hour, 'beyond')).toContain('upperWind');
    expect(marginsThatAre(hour, 'within', 'close')).toContain('meanWind');
  });

  test('is said as a caution about the wind above the launch', () => {
    const { cautions } = judged({ site: north, groundM: ALPINE_GROUND_M, sheet: 'thermal-flight', day });
    expect(cautions).toContainEqual(expect.objectContaining({ id: 'windAloft' }));
  });
});

describe('eight metres a second on a three-hundred-metre ridge', () => {
  const ridge = { ...ALPINE, hill: { form: 'ridge', heightM: 300, halfLengthM: 600 }, elevationM: 1325 } as const;
  const day: Day = (hour) => ({ ...QUIET, wind: [8 + hour / 200, 250], gustMps: 10.5 + hour / 200, aloft: [[1500, 9, 250], [3000, 11, 260]], temperatureC: 9 + hour / 5 });

  test.each(FOOT_SHEETS)('is beyond for %s', (sheet) => {
    const hour = hourAt(judged({ site: ridge, groundM: ALPINE_GROUND_M, sheet, day }), 12);
    expect(hour.verdict).toBe('beyond');
    expect(marginsThatAre(hour, 'beyond')).toContain('meanWind');
  });

  test('is more at the crest than in the forecast', () => {
    const hour = hourAt(judged({ site: ridge, groundM: ALPINE_GROUND_M, sheet: 'thermal-flight', day }), 12);
    expect(hour.wind!.mostMps).toBeGreaterThan(10);
  });
});

describe('a morning inversion with a low-level jet over a strip', () => {
  // Still, cold air on the field; eleven metres a second two hundred metres up until the sun has mixed it down by noon.
  const jet = (hour: number): number => grows(hour, [9, 11], [12, 5]);
  const day: Day = (hour) => ({
    ...QUIET, wind: [grows(hour, [9, 1.2], [12, 3.5]), 250], gustMps: grows(hour, [9, 2.2], [12, 5.5]), aloft: [[STRIP_GROUND_M + 200, jet(hour), 250], [STRIP_GROUND_M + 700, 5, 255], [3000, 7, 260]],
    temperatureC: grows(hour, [6, 3], [12, 13]), dewPointC: 1, air: [[STRIP_GROUND_M + 250, grows(hour, [6, 9], [12, 11]), 40], [3000, -4, 40]],
  });
  const strip = judged({ site: STRIP, groundM: STRIP_GROUND_M, sheet: 'solo-tow', day });

  test('leaves too little speed at release, and changes too much on the way up, while the field is still', () => {
    const hour = hourAt(strip, 8);
    expect(hour.verdict).toBe('beyond');
    expect(marginsThatAre(hour, 'beyond')).toEqual(expect.arrayContaining(['climbShear']));
    expect(marginsThatAre(hour, 'within', 'close')).toEqual(expect.arrayContaining(['stripWind', 'stripGust']));
    expect(hour.airspeed!.headMps).toBeGreaterThan(hourAt(strip, 13).airspeed!.headMps);
  });

  test('is over when it has mixed out', () => {
    expect(isOpen(hourAt(strip, 13).verdict)).toBe(true);
    expect(strip.windows[0]!.from > hourAt(strip, 9).validAt).toBe(true);
  });

  test('makes the tow into it the higher one', () => {
    expect(hourAt(strip, 8).heading).toMatchObject({ headingDeg: 250 });
    expect(hourAt(strip, 8).heading!.releaseM!).toBeGreaterThan(hourAt(strip, 13).heading!.releaseM!);
  });
});

describe('a ridge in the sea breeze', () => {
  // Off the land until ten, then in from the sea and square onto the face, smooth, and nearly doubled over the edge.
  const coast = { ...ALPINE, elevationM: 140, facingDeg: 270, trackDeg: 270, distanceM: 200, slopeDeg: 32, hill: { form: 'ridge', heightM: 120, halfLengthM: 90 }, landing: { ...ALPINE.landing, elevationM: 22 } } as const;
  const GROUND_M = 20;
  const onshore = (hour: number) => hour >= 11;
  const day: Day = (hour) => ({
    ...QUIET, wind: onshore(hour) ? [grows(hour, [10, 2], [13, 3.3]), 272] : [1.8 + hour / 100, 80], gustMps: onshore(hour) ? grows(hour, [10, 3], [13, 4.4]) : 2.8 + hour / 100,
    aloft: [[400, onshore(hour) ? 4.5 : 2, onshore(hour) ? 270 : 60], [1200, 4, 300]], temperatureC: grows(hour, [6, 13], [15, 20]), dewPointC: 9, shortwaveWm2: 100, mixedLayerM: 250,
  });
  const soaring = judged({ site: coast, groundM: GROUND_M, sheet: 'ridge-soaring', day });

  test('is over the back in the morning', () => {
    const hour = hourAt(soaring, 8);
    expect(hour.verdict).toBe('beyond');
    expect(marginsThatAre(hour, 'beyond')).toEqual(expect.arrayContaining(['tailwind', 'offAxis']));
  });

  test('carries in the afternoon', () => {
    const hour = hourAt(soaring, 14);
    expect(isOpen(hour.verdict), `${hour.verdict} by ${hour.causes.join()}`).toBe(true);
    expect(hour.margins.find(({ id }) => id === 'ridgeLift')!.spare).toBeGreaterThan(0);
    expect(soaring.windows).toHaveLength(1);
  });
});

describe('behind a cold front', () => {
  // Rain and a veer at eleven, then clear, cold and gusty north-westerlies on a launch that faces west.
  const passed = (hour: number) => hour >= 11;
  const day: Day = (hour) => ({
    ...QUIET, wind: passed(hour) ? [4.5 + hour / 100, 305] : [3 + hour / 100, 225], gustMps: passed(hour) ? 9.5 + hour / 100 : 5 + hour / 100,
    aloft: [[1600, passed(hour) ? 8 : 5, passed(hour) ? 315 : 230], [3000, 12, passed(hour) ? 320 : 240]], temperatureC: passed(hour) ? 7 + hour / 50 : 13 + hour / 50, dewPointC: passed(hour) ? 1 : 9,
    rainMm: hour >= 10 && hour <= 12 ? 1.4 : 0, rainChancePct: hour >= 9 && hour <= 13 ? 90 : 5, visibilityM: hour >= 10 && hour <= 12 ? 6000 : 50_000,
    seaLevelHpa: passed(hour) ? grows(hour, [11, 1006], [20, 1016]) : grows(hour, [2, 1014], [11, 1006]),
  });
  const brief = judged({ site: ALPINE, groundM: ALPINE_GROUND_M, sheet: 'descent-experienced', day });

  test('the sky is blue and the gust is not', () => {
    const hour = hourAt(brief, 15);
    expect(marginsThatAre(hour, 'beyond')).toEqual(expect.arrayContaining(['gust', 'gustSpread']));
    expect(marginsThatAre(hour, 'within')).toEqual(expect.arrayContaining(['rain', 'visibility', 'cloudBase']));
  });

  test('the front is said with its turn, the rain with its hours', () => {
    const front = brief.cautions.find(({ id }) => id === 'front')!;
    expect(front).toMatchObject({ unit: 'hPa' });
    expect(front.value).toBeGreaterThan(2);
    expect(brief.cautions.find(({ id }) => id === 'wet')).toMatchObject({ unit: 'mm', from: hourAt(brief, 12).validAt, to: hourAt(brief, 14).validAt });
  });
});

describe('a valley wind at the landing', () => {
  // A mountain launch far over the model's valley: free air there is light, down at the landing the valley wind blows against the glide.
  const GROUND_M = 600;
  const mountain = {
    ...ALPINE, elevationM: 1650, facingDeg: 200, trackDeg: 20, distanceM: 5200, hill: { form: 'ridge', heightM: 400, halfLengthM: 900 },
    landing: { ...ALPINE.landing, elevationM: 610, roughnessM: 0.1 }, localWind: [{ fromHour: 12, toHour: 17, speedMps: 7, fromDeg: 20 }],
  } as const;
  const valleyMps = (hour: number) => grows(hour, [11, 1], [14, 7.5]);
  const day: Day = (hour) => ({
    ...QUIET, wind: [valleyMps(hour), 20], gustMps: valleyMps(hour) * 1.25 + 0.5, aloft: [[900, valleyMps(hour) * 0.9, 20], [1300, 1.5, 180], [1700, 2, 200], [3200, 5, 230]],
    temperatureC: grows(hour, [6, 9], [15, 22]), dewPointC: 6, air: [[3000, 1, 45]], shortwaveWm2: 60, mixedLayerM: 500,
  });
  const brief = judged({ site: mountain, groundM: GROUND_M, sheet: 'thermal-flight', day });

  test('says nothing at launch and everything about arrival', () => {
    const [morning, afternoon] = [hourAt(brief, 10), hourAt(brief, 15)];
    for (const hour of [morning, afternoon]) expect(marginsThatAre(hour, 'within', 'close')).toEqual(expect.arrayContaining(['meanWind', 'offAxis', 'upperWind', 'overTheBack']));
    const arrival = (hour: typeof morning) => hour.margins.find(({ id }) => id === 'arrival')!.spare!;
    expect(arrival(morning)).toBeGreaterThan(0);
    expect(arrival(afternoon)).toBeLessThan(arrival(morning) - 100);
  });

  test('costs the landing its gradient and the wing its speed down there', () => {
    const gradient = (hour: number) => hourAt(brief, hour).margins.find(({ id }) => id === 'landingGradient')!.spare!;
    expect(gradient(15)).toBeLessThan(gradient(10) - 1.5);
    expect(brief.cautions).toContainEqual(expect.objectContaining({ id: 'landingGradient', to: hourAt(brief, 20).validAt }));
  });

  test('the wind the place is known for is said only where the forecast lacks it', () => {
    expect(brief.cautions.some(({ id }) => id === 'localWind')).toBe(false);
    const still = judged({ site: mountain, groundM: GROUND_M, sheet: 'thermal-flight', day: (hour): Sky => ({ ...day(hour), wind: [1.2 + hour / 100, 200], gustMps: 2.2 + hour / 100 }) });
    expect(still.cautions).toContainEqual(expect.objectContaining({ id: 'localWind', value: 7, from: hourAt(still, 12).validAt, to: hourAt(still, 17).validAt }));
  });
});

describe('stratus below the launch', () => {
  // Valley fog with its top under the launch until ten: above it the sun shines, and the way down leads through cloud.
  const GROUND_M = 600;
  const site = { ...ALPINE, elevationM: 1500, distanceM: 3500, hill: { form: 'ridge', heightM: 500, halfLengthM: 900 }, landing: { ...ALPINE.landing, elevationM: 610 } } as const;
  const foggy = (hour: number) => hour < 10;
  const day: Day = (hour) => ({
    ...QUIET, wind: [0.8 + hour / 200, 230], gustMps: 1.6 + hour / 200, aloft: [[1500, 2, 250], [3000, 4, 260]], temperatureC: foggy(hour) ? 3 + hour / 100 : 10 + hour / 10,
    dewPointC: foggy(hour) ? dewOf(3 + hour / 100, 99) : 4, air: foggy(hour) ? [[900, 2, 99], [1050, 7, 40], [3000, -2, 30]] : [[3000, -2, 40]], visibilityM: foggy(hour) ? 300 : 30_000,
  });
  const brief = judged({ site, groundM: GROUND_M, sheet: 'thermal-flight', day });

  test('is beyond by the cloud it would be flown through, and open when it has lifted', () => {
    expect(marginsThatAre(hourAt(brief, 8), 'beyond')).toContain('cloudBase');
    expect(hourAt(brief, 8).margins.find(({ id }) => id === 'cloudBase')).toMatchObject({ demand: 0 });
    expect(marginsThatAre(hourAt(brief, 12), 'within', 'close')).toContain('cloudBase');
    expect(isOpen(hourAt(brief, 12).verdict), hourAt(brief, 12).causes.join()).toBe(true);
  });

  test('is said as fog in the valley, to its last hour', () => {
    expect(brief.cautions).toContainEqual(expect.objectContaining({ id: 'lowCloud', subject: 'visibility', value: 300, to: hourAt(brief, 9).validAt }));
  });
});
