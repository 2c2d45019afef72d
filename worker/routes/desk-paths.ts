/** What the paths of the desk begin with. */
const DESK = /^\/(?:sites\/[^/]*\/what-if|plan|subscribe|confirm|manage|unsubscribe|operator|api\/v1\/(?:plan|bounces|operator|subscriptions|manage|assess|push))(?:\/|$)/;

/** Whether the worker of the morning hands a request on. */
export function isForDesk(path: string): boolean {
  return DESK.test(path);
}
