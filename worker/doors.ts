import type { Hono } from 'hono/tiny';
import type { Job } from './morning/job.ts';
import { answerCalls, recordDeadLetters } from './morning/queue.ts';
import { tick } from './morning/tick.ts';
import { problem } from './routes/problem.ts';
import type { Services } from './service-set.ts';
import { createServices } from './services.ts';
import type { Env } from './settings.ts';

/** Three doors into one house. What lies behind them is put together anew for every call. */
export function doors(appOf: (services: Services) => Hono): Required<Pick<ExportedHandler<Env, Job>, 'fetch' | 'scheduled' | 'queue'>> {
  return {
    async fetch(request, env) {
      const services = createServices(env);
      if (!services.ok) return problem('unusable', { detail: 'settings are wrong', problems: services.error });
      return appOf(services.value).fetch(request);
    },

    async scheduled(controller, env) {
      await tick(usable(env), controller.scheduledTime);
    },

    async queue(batch, env) {
      if (batch.queue === 'dead') await recordDeadLetters(usable(env), batch.messages);
      else await answerCalls(usable(env), batch.messages);
    },
  };
}

function usable(env: Env): Services {
  const services = createServices(env);
  if (!services.ok) throw new Error(`settings are wrong: ${services.error.map((issue) => issue.path).join(', ')}`);
  return services.value;
}
