// Node has no `cloudflare:sockets`; whoever imports it here gets ./refusing-sockets.ts. To be imported before the worker is.
import { registerHooks } from 'node:module';

registerHooks({
  resolve: (name, context, next) => (name === 'cloudflare:sockets' ? { url: new URL('./refusing-sockets.ts', import.meta.url).href, shortCircuit: true } : next(name, context)),
});
