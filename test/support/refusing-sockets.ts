/** Stands for `cloudflare:sockets` where there is none: what wants to open one gets an error. */
export function connect(): never {
  throw new Error('no sockets in this test');
}
