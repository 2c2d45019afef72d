import { doors } from './doors.ts';
import { deskOf } from './routes/desk-paths.ts';
import { frontApp } from './routes/front.ts';
import { problem } from './routes/problem.ts';

const front = doors(frontApp);

/** The worker of the morning: makes the briefs, sends them, shows them. What people hand in goes on to the desk, what the operator does to a third. */
export default {
  ...front,
  async fetch(request, env, context) {
    const desk = deskOf(new URL(request.url).pathname);
    if (desk === null) return front.fetch(request, env, context);
    return env[desk]?.fetch(request) ?? problem('unusable', { detail: `nothing is bound as ${desk}: deploy worker/${desk.toLowerCase()}.toml, and bind it` });
  },
} satisfies typeof front;
