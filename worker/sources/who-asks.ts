/** MET Norway and the NWS answer only programs that say who they are and where their operator can be reached. */
export function userAgent(contact: string): string {
  return `dawnmargin/0.1 ${contact.replace(/^mailto:/, '')}`;
}

/** At most four decimals, which is 11 m; more is refused. */
export function fourDecimals(deg: number): string {
  return String(Number(deg.toFixed(4)));
}
