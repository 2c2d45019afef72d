import { deskServices, worldOf } from './desk-services.ts';
import { operatorApp } from './routes/operator-desk.ts';
import { problem } from './routes/problem.ts';
import type { Env } from './settings.ts';

/** The worker of the operator. It has no door of its own to the outside: the worker of the morning hands its requests on. */
export default {
  async fetch(request, env) {
    const world = worldOf(env);
    if (!world.ok) return problem('unusable', { detail: 'settings are wrong', problems: world.error });
    return operatorApp(deskServices(world.value)).fetch(request);
  },
} satisfies ExportedHandler<Env>;
