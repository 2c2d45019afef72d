import { doors } from './doors.ts';
import { isForDesk } from './routes/desk-paths.ts';
import { frontApp } from './routes/front.ts';
import { problem } from './routes/problem.ts';

const front = doors(frontApp);

/** The worker of the morning: makes the briefs, sends them, shows them. What people hand in goes on to the desk, a worker of its own. */
export default {
  ...front,
  async fetch(request, env, context) {
    if (!isForDesk(new URL(request.url).pathname)) return front.fetch(request, env, context);
    return env.DESK === undefined ? problem('unusable', { detail: 'no desk is bound: deploy it, and bind it as DESK' }) : env.DESK.fetch(request);
  },
} satisfies typeof front;
