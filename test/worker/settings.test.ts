import { describe, expect, test } from 'vitest';
import { readSettings } from '../../worker/settings.ts';

const names = (env: Record<string, unknown>): string[] => {
  const settings = readSettings(env);
  return settings.ok ? [] : settings.error.map((issue) => issue.path);
};

describe('settings', () => {
  test('nothing set is enough for a board', () => {
    const settings = readSettings({});
    expect(settings).toMatchObject({ ok: true, value: { local: false, linkKey: null, openMeteoUrl: 'https://api.open-meteo.com' } });
  });

  test.each([
    ['PUBLIC_URL', 'brief.example.org'], ['PUBLIC_URL', 'http://brief.example.org'], ['PUBLIC_URL', 'https://brief.example.org/path'],
    ['OPEN_METEO_URL', 'http://127.0.0.1:9000'], ['NWS_URL', 'ftp://example.org'], ['MET_NORWAY_URL', 'https://user@example.org'],
    ['LINK_KEY', 'short'], ['OPERATOR_TOKEN_SHA256', 'ABC'], ['CONTACT', 'nobody'], ['LOCAL', 'yes'], ['HEARTBEAT_URL', 'http://example.org'], ['CALLS_AN_INVOCATION', '49'], ['CALLS_AN_INVOCATION', 'many'],
    ['LOCAL_TOKEN', 'x'], ['VAPID_PUBLIC_KEY', 'x'], ['LINK_KEY_BEFORE', 'x'.repeat(40)], ['VAPID_PUBLIC_KEY_BEFORE', `B${'x'.repeat(86)}`], ['VAPID_PRIVATE_KEY_BEFORE', 'x'.repeat(43)],
  ])('%s=%s is refused by name', (name, value) => {
    expect(names({ [name]: value })).toContain(name);
  });

  test('every problem at once, and no secret in any', () => {
    const settings = readSettings({ LINK_KEY: 'a secret slip', OPERATOR_TOKEN_SHA256: 'another secret slip', PUBLIC_URL: 'x', VAPID_PRIVATE_KEY: 'third secret slip' });
    expect(settings.ok).toBe(false);
    if (settings.ok) return;
    expect(settings.error.length).toBeGreaterThanOrEqual(4);
    expect(JSON.stringify(settings.error)).not.toContain('secret slip');
  });

  test('plain http to this machine needs LOCAL=1', () => {
    expect(names({ LOCAL: '1', OPEN_METEO_URL: 'http://127.0.0.1:9000', PUBLIC_URL: 'http://localhost:8787' })).toEqual([]);
    expect(names({ LOCAL: '1', OPEN_METEO_URL: 'http://192.168.0.1' })).toEqual(['OPEN_METEO_URL']);
  });
});
