/** What the paths of the desk, and those of the operator, begin with. */
const DESK = /^\/(?:sites\/[^/]*\/what-if|feeds|plan|subscribe|confirm|manage|unsubscribe|api\/v1\/(?:plan|bounces|subscriptions|manage|assess|push))(?:\/|$)/;
const OPERATOR = /^\/(?:operator|status|api\/v1\/operator)(?:\/|$)/;

/** To whom the worker of the morning hands a request on, by the name of the binding; null when it answers itself. */
export function deskOf(path: string): 'DESK' | 'OPERATOR' | null {
  return OPERATOR.test(path) ? 'OPERATOR' : DESK.test(path) ? 'DESK' : null;
}
