import type { Hono } from 'hono/tiny';
import { problem } from './problem.ts';

/** The last answers of an app: another method, no such path, a fault. `methods` are those that the paths answer. */
export function closing(hono: Hono, methods: Readonly<Record<string, string>>): Hono {
  for (const [path, allow] of Object.entries(methods)) {
    hono.all(path, () => problem('wrong-method', { detail: `answered are ${allow}`, headers: { allow } }));
  }
  hono.notFound(() => problem('not-found'));
  hono.onError((error) => {
    console.error(`a request failed: ${error.name}`);
    return problem('fault', { detail: 'the fault has been noted' });
  });
  return hono;
}
