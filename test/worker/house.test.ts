import { env, exports } from 'cloudflare:workers';
import { expect, test } from 'vitest';

test('the tables are there', async () => {
  const tables = await env.DB.prepare("SELECT name FROM sqlite_master WHERE name = 'd1_migrations'").all();
  expect(tables.results).toHaveLength(1);
});

test('the world outside is closed', async () => {
  const response = await fetch('https://forecast.example/');
  expect(response.status).toBe(599);
});

test('the worker answers', async () => {
  expect((await exports.default.fetch('https://dawnmargin.example/')).status).toBeLessThan(600);
});
