// What a worker test finds in `env` and `exports` of cloudflare:workers, besides what worker/ declares itself.
import type { D1Migration } from 'cloudflare:test';
import type * as mainModule from '../../worker/whole.ts';

declare global {
  namespace Cloudflare {
    interface Env {
      DB: D1Database;
      TEST_MIGRATIONS: D1Migration[];
    }
    interface GlobalProps {
      mainModule: typeof mainModule;
    }
  }
}
