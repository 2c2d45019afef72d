// What must hold in the runtime itself; the rest of the clock is tested in test/faults/time.
import { expect, test } from 'vitest';
import { clockFaults } from '../../lib/brief/self-test/clock.ts';
import { app } from '../../worker/routes/app.ts';
import { newHouse } from './support/house.ts';

test('F85: workerd keeps the rules of time that we know, and the shipped judge passes its test in it', { timeout: 60_000 }, async () => {
  expect(clockFaults()).toEqual([]);
  const house = await newHouse({ nowIso: '2027-05-14T04:00:00Z', real: true });
  expect(house.services().selfTest()).toEqual([]);
  await house.minute();
  const status = await app(house.services()).request('/status');
  const page = await status.text();
  expect(status.status).toBe(200);
  expect(page).toMatch(/Last success of each step/);
  expect(page).toMatch(/<th scope="row">self-test<\/th><td><time/);
  expect(page).not.toMatch(/judge failed/);
});
