/**
 * Sun of the US Naval Observatory ("oneday" service), as fetched on 17 June 2026 into the test fixtures of mourner/suncalc
 * @886bda4. UTC, rounded to the minute, of the UTC day: begin of civil twilight, rise, set, end of civil twilight.
 */
export interface UsnoSite {
  readonly name: string;
  readonly latDeg: number;
  readonly lonDeg: number;
  readonly timeZone: string;
  readonly days: readonly (readonly [utcDate: string, times: string, always: string])[];
}

export const USNO_SITES: readonly UsnoSite[] = [
  { name: 'Longyearbyen', latDeg: 78.22334, lonDeg: 15.64689, timeZone: 'Arctic/Longyearbyen', days: [
    ['2026-03-20', '03:06 04:52 17:22 19:10', ''],
    ['2026-06-21', '--:-- --:-- --:-- --:--', 'sun all day, twilight all day'],
    ['2026-09-23', '02:48 04:35 17:01 18:46', ''],
    ['2026-12-21', '--:-- --:-- --:-- --:--', 'sun never, twilight never'],
  ] },
  { name: 'Tromsø', latDeg: 69.6489, lonDeg: 18.95508, timeZone: 'Europe/Oslo', days: [
    ['2026-03-20', '03:44 04:44 17:02 18:02', ''],
    ['2026-06-21', '--:-- --:-- --:-- --:--', 'sun all day, twilight all day'],
    ['2026-09-23', '03:27 04:28 16:43 17:43', ''],
    ['2026-12-21', '08:31 --:-- --:-- 12:53', 'sun never'],
  ] },
  { name: 'Reykjavík', latDeg: 64.13548, lonDeg: -21.89541, timeZone: 'Atlantic/Reykjavik', days: [
    ['2026-03-20', '06:41 07:28 19:43 20:31', ''],
    ['2026-06-21', '--:-- 02:55 00:03 --:--', 'twilight all day'],
    ['2026-09-23', '06:25 07:13 19:25 20:12', ''],
    ['2026-12-21', '10:03 11:22 15:29 16:49', ''],
  ] },
  { name: 'Stockholm', latDeg: 59.32938, lonDeg: 18.06871, timeZone: 'Europe/Stockholm', days: [
    ['2026-03-20', '04:09 04:50 17:02 17:43', ''],
    ['2026-06-21', '23:59 01:31 20:08 21:40', ''],
    ['2026-09-23', '03:53 04:34 16:45 17:25', ''],
    ['2026-12-21', '06:48 07:43 13:48 14:44', ''],
  ] },
  { name: 'Kyiv', latDeg: 50.45466, lonDeg: 30.5238, timeZone: 'Europe/Kyiv', days: [
    ['2026-03-20', '03:29 04:01 16:11 16:43', ''],
    ['2026-06-21', '01:01 01:46 18:13 18:59', ''],
    ['2026-09-23', '03:13 03:45 15:54 16:27', ''],
    ['2026-12-21', '05:17 05:56 13:56 14:35', ''],
  ] },
  { name: 'Istanbul', latDeg: 41.01384, lonDeg: 28.94966, timeZone: 'Europe/Istanbul', days: [
    ['2026-03-20', '03:41 04:08 16:16 16:44', ''],
    ['2026-06-21', '01:58 02:32 17:40 18:14', ''],
    ['2026-09-23', '03:25 03:53 16:00 16:27', ''],
    ['2026-12-21', '04:54 05:26 14:39 15:10', ''],
  ] },
  { name: 'Shanghai', latDeg: 31.22222, lonDeg: 121.45806, timeZone: 'Asia/Shanghai', days: [
    ['2026-03-20', '21:33 21:57 10:05 10:30', ''],
    ['2026-06-21', '20:23 20:51 11:01 11:29', ''],
    ['2026-09-23', '21:19 21:43 09:50 10:14', ''],
    ['2026-12-21', '22:22 22:49 08:56 09:22', ''],
  ] },
  { name: 'Bogotá', latDeg: 4.60971, lonDeg: -74.08175, timeZone: 'America/Bogota', days: [
    ['2026-03-20', '10:40 11:00 23:07 23:28', ''],
    ['2026-06-21', '10:24 10:47 23:10 23:33', ''],
    ['2026-09-23', '10:25 10:45 22:52 23:12', ''],
    ['2026-12-21', '10:36 10:59 22:50 23:13', ''],
  ] },
  { name: 'Kinshasa', latDeg: -4.32758, lonDeg: 15.31357, timeZone: 'Africa/Kinshasa', days: [
    ['2026-03-20', '04:42 05:03 17:09 17:30', ''],
    ['2026-06-21', '04:42 05:04 16:57 17:19', ''],
    ['2026-09-23', '04:27 04:48 16:54 17:15', ''],
    ['2026-12-21', '04:23 04:45 17:08 17:31', ''],
  ] },
  { name: 'Lima', latDeg: -12.04318, lonDeg: -77.02824, timeZone: 'America/Lima', days: [
    ['2026-03-20', '10:51 11:12 23:19 23:40', ''],
    ['2026-06-21', '11:04 11:27 22:53 23:16', ''],
    ['2026-09-23', '10:36 10:57 23:04 23:25', ''],
    ['2026-12-21', '10:18 10:41 23:31 23:55', ''],
  ] },
  { name: 'Buenos Aires', latDeg: -34.61315, lonDeg: -58.37723, timeZone: 'America/Argentina/Buenos_Aires', days: [
    ['2026-03-20', '09:32 09:57 22:05 22:30', ''],
    ['2026-06-21', '10:32 11:00 20:50 21:18', ''],
    ['2026-09-23', '09:16 09:41 21:51 22:16', ''],
    ['2026-12-21', '08:08 08:37 23:06 23:36', ''],
  ] },
  { name: 'Melbourne', latDeg: -37.814, lonDeg: 144.96332, timeZone: 'Australia/Melbourne', days: [
    ['2026-03-20', '19:57 20:24 08:32 08:58', ''],
    ['2026-06-21', '21:06 21:36 07:08 07:38', ''],
    ['2026-09-23', '19:41 20:07 08:17 08:43', ''],
    ['2026-12-21', '18:23 18:55 09:42 10:13', ''],
  ] },
  { name: 'Ushuaia', latDeg: -54.81084, lonDeg: -68.31591, timeZone: 'America/Argentina/Ushuaia', days: [
    ['2026-03-20', '09:58 10:35 22:46 23:22', ''],
    ['2026-06-21', '12:14 12:59 20:11 20:57', ''],
    ['2026-09-23', '09:43 10:19 22:33 23:09', ''],
    ['2026-12-21', '06:54 07:51 01:11 02:08', ''],
  ] },
  { name: 'McMurdo Station', latDeg: -77.846, lonDeg: 166.676, timeZone: 'Antarctica/McMurdo', days: [
    ['2026-03-20', '17:02 18:46 07:19 09:02', ''],
    ['2026-06-21', '--:-- --:-- --:-- --:--', 'sun never, twilight never'],
    ['2026-09-23', '16:41 18:24 07:04 08:48', ''],
    ['2026-12-21', '--:-- --:-- --:-- --:--', 'sun all day, twilight all day'],
  ] },
];
