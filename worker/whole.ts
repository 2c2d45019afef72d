import { doors } from './doors.ts';
import { app } from './routes/app.ts';

/** Morning and desk in one worker: how this runs on one machine, where nobody weighs it. */
export default doors(app);
