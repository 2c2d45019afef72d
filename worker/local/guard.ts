// Loaded into every wrangler that we start. When the start command is gone, however it ended, wrangler and what it has
// started must not stay behind: they are one process group, and this ends it.
const parent = Number(process.env['DAWNMARGIN_GUARDED_BY']);

if (Number.isInteger(parent) && parent > 0 && process.ppid === parent) {
  const timer = setInterval(() => {
    if (process.ppid === parent) return;
    clearInterval(timer);
    setTimeout(() => process.kill(-process.pid, 'SIGKILL'), 1500);
    process.kill(process.pid, 'SIGTERM');
  }, 250);
  timer.unref();
}
