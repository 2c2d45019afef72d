import { createServer } from 'node:net';

/** The port of the setting PORT, or what is wrong with it. */
export function readPort(text: string | undefined): number | { readonly problem: string } {
  if (text === undefined || text === '') return 8787;
  const port = Number(text);
  return Number.isInteger(port) && port >= 1 && port <= 65_535 ? port : { problem: `PORT is "${text.slice(0, 20)}", it must be a whole number from 1 to 65535` };
}

/**
 * Whether the port is free, by binding it: asking it would be answered by an older instance. A port that the last run has
 * only just let go of gets two seconds.
 */
export async function isFree(port: number): Promise<boolean> {
  for (let waitedMs = 0; ; waitedMs += 200) {
    if (await canBind(port)) return true;
    if (waitedMs >= 2000) return false;
    await new Promise((resolve) => setTimeout(resolve, 200));
  }
}

function canBind(port: number): Promise<boolean> {
  return new Promise((resolve) => {
    const server = createServer();
    server.once('error', () => resolve(false));
    server.listen({ port, host: '127.0.0.1', exclusive: true }, () => server.close(() => resolve(true)));
  });
}
