import { answerCalls, recordDeadLetters } from './morning/queue.ts';
import type { Job } from './morning/job.ts';
import { tick } from './morning/tick.ts';
import { app } from './routes/app.ts';
import { problem } from './routes/problem.ts';
import { createServices } from './services.ts';
import type { Env } from './settings.ts';

/** Three doors into one house. What lies behind them is put together anew for every call. */
export default {
  async fetch(request, env) {
    const services = createServices(env);
    if (!services.ok) return problem('unusable', { detail: 'settings are wrong', problems: services.error });
    return app(services.value).fetch(request);
  },

  async scheduled(controller, env) {
    const services = createServices(env);
    if (!services.ok) throw new Error(`settings are wrong: ${services.error.map((issue) => issue.path).join(', ')}`);
    await tick(services.value, controller.scheduledTime);
  },

  async queue(batch, env) {
    const services = createServices(env);
    if (!services.ok) throw new Error(`settings are wrong: ${services.error.map((issue) => issue.path).join(', ')}`);
    if (batch.queue === 'dead') await recordDeadLetters(services.value, batch.messages);
    else await answerCalls(services.value, batch.messages);
  },
} satisfies ExportedHandler<Env, Job>;
