import { kmhFromMps } from '../units.ts';

/**
 * Wind chill, °C: 13.12 + 0.6215 T - 11.37 V^0.16 + 0.3965 T V^0.16, T in °C, V in km/h at 10 m (Environment Canada and
 * US National Weather Service, 2001). Valid for T up to 10 °C and V from 4.8 km/h; outside it the temperature itself.
 */
export function windChillC(temperatureC: number, speedMps: number): number {
  const speedKmh = kmhFromMps(speedMps);
  if (temperatureC > 10 || speedKmh < 4.8) return temperatureC;
  const power = speedKmh ** 0.16;
  return 13.12 + 0.6215 * temperatureC - 11.37 * power + 0.3965 * temperatureC * power;
}
