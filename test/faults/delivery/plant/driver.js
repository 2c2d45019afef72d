// Inside the runtime: calls the worker's queue handler again and again, so many times side by side, until nothing is left that
// may be done now and that nobody else has taken.
const LEFT = {
  deliver: `outbox WHERE state = 'pending'`,
  fetch: `run WHERE state = 'wanted' AND step = 'fetch'`,
  assess: `run WHERE state = 'wanted' AND step = 'assess'`,
};

// oxlint-disable-next-line import/no-default-export -- a worker is its default export
export default {
  async fetch(request, env) {
    const url = new URL(request.url);
    const step = url.pathname.slice(1);
    const isLeft = async () => (await env.DB.prepare(`SELECT 1 AS one FROM ${LEFT[step]} AND next_attempt_at <= ?1 AND (lease_until IS NULL OR lease_until <= ?1) LIMIT 1`).bind(Date.now()).first()) !== null;
    const consume = async (consumer) => {
      for (let call = 0; await isLeft(); call += 1) await env.MAIN.queue(step, [{ id: `${step}-${consumer}-${call}`, timestamp: new Date(), attempts: 1, body: { v: 1, step } }]);
    };
    await Promise.all(Array.from({ length: Number(url.searchParams.get('side')) }, (_, consumer) => consume(consumer)));
    return new Response('done');
  },
};
