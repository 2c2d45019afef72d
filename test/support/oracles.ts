// The six oracles after every fault of delivery (O1 to O6 of the fault catalogue), as sentences about what is wrong. They
// know what each recipient got, whatever it came by, the books, and what health says.
/** One message that one recipient got. */
export interface Told {
  /** Whose it is: the name at the end of an address, or before its @. */
  readonly name: string;
  /** Of the message: the same at every attempt. */
  readonly id: string;
  readonly atMs: number;
  /** What a person reads of it. */
  readonly said: string;
  /** The verdicts it states. */
  readonly verdicts: readonly string[];
  readonly validUntilMs: number;
  /** Taken by the receiver, whether or not we were told so; else it was turned away. */
  readonly taken: boolean;
}

export interface Witness {
  readonly told: readonly Told[];
  readonly health: () => Promise<unknown>;
  readonly ask: <Row>(sql: string) => Promise<Row[]>;
}

export interface Expected {
  /** Who has to be told, and how many minutes after the due time at the latest. */
  readonly told: Readonly<Record<string, number>>;
  readonly dueIso: string;
  /** What may be read in every message: the verdict that was judged, or that nothing can be said; of everybody or by name. */
  readonly verdict: string | Readonly<Record<string, string | readonly string[]>>;
  /** Messages taken twice: what was in flight when something ended. */
  readonly repeats?: number;
  /** How many different messages one may see; one unless more was to be said. */
  readonly messages?: number;
  /** What became of the rows, by state. */
  readonly books: Readonly<Record<string, number>>;
  /** What health has to show of the fault: an event of the log, a count or a warning. Nothing when the fault was overcome. */
  readonly seen?: RegExp;
}

const PHRASES = { within: /within limits/i, close: /close to a limit/i, beyond: /beyond a limit/i, unknown: /cannot say/i } as const;

/** The verdicts that words state. */
export function verdictsIn(words: string): string[] {
  return Object.entries(PHRASES).flatMap(([verdict, phrase]) => (phrase.test(words) ? [verdict] : []));
}

/** A webhook's message, as its receiver reads it. */
export interface WebhookData {
  readonly id: string;
  readonly title: string;
  readonly validUntil: string;
  readonly days: readonly { readonly verdict: string }[];
}

export function toldByWebhook(came: Pick<Told, 'atMs' | 'taken'> & { readonly url: string; readonly id: string }, data: WebhookData): Told {
  const verdicts = data.days.length > 0 ? data.days.map(({ verdict }) => verdict) : verdictsIn(data.title);
  return { name: came.url.slice(came.url.lastIndexOf('/') + 1), id: came.id, atMs: came.atMs, said: JSON.stringify(data), verdicts, validUntilMs: Date.parse(data.validUntil), taken: came.taken };
}

export async function oraclesOf({ told, health, ask }: Witness, expected: Expected): Promise<string[]> {
  return [...saidWrong(told, expected), ...(await booksWrong(ask, expected)), ...repeated(told, expected), ...late(told, expected), ...unseen(await health(), expected)];
}

/** O1: nothing is said that was not judged. */
function saidWrong(told: readonly Told[], { verdict }: Expected): string[] {
  const judged = (name: string): readonly string[] => [(typeof verdict === 'string' ? verdict : verdict[name]) ?? []].flat();
  return told.flatMap(({ name, verdicts }) => (verdicts.length > 0 && verdicts.every((one) => judged(name).includes(one)) ? [] : [`O1: ${name} was told "${verdicts.join(', ')}"`]));
}

/** O2: what was created is what is sent, expired, dead, suppressed or pending, with a reason. */
async function booksWrong(ask: Witness['ask'], { books }: Expected): Promise<string[]> {
  const rows = await ask<{ state: string; n: number; unexplained: number }>('SELECT state, COUNT(*) AS n, SUM(reason IS NULL) AS unexplained FROM outbox GROUP BY state');
  const found = Object.fromEntries(rows.map((row) => [row.state, row.n]));
  const isOff = [...new Set([...Object.keys(found), ...Object.keys(books)])].some((state) => found[state] !== books[state]);
  return [
    ...(isOff ? [`O2: the books say ${JSON.stringify(found)}`] : []),
    ...rows.flatMap((row) => (row.state !== 'pending' && row.unexplained > 0 ? [`O2: ${row.unexplained} rows ended as ${row.state} without a reason`] : [])),
  ];
}

/** O3: one id a message, the same words under it, and no more of them taken than messages and what was in flight. */
function repeated(told: readonly Told[], { repeats = 0, messages = 1 }: Expected): string[] {
  const taken = told.filter((one) => one.taken);
  const byId = Map.groupBy(taken, ({ id }) => id);
  return [
    ...(told.some(({ id }) => !/^msg_[0-9a-f-]+$/.test(id)) ? ['O3: a message without an id of ours'] : []),
    ...[...byId].flatMap(([id, same]) => (new Set(same.map(({ said }) => said)).size > 1 ? [`O3: ${id} said different things`] : [])),
    ...(taken.length - byId.size > repeats ? [`O3: ${taken.length - byId.size} repeats`] : []),
    ...[...Map.groupBy(taken, ({ name }) => name)].flatMap(([name, own]) => (new Set(own.map(({ id }) => id)).size > messages ? [`O3: ${name} would see more than ${messages}`] : [])),
  ];
}

/** O4: nothing after it has ceased to hold. O5: everyone in time. */
function late(told: readonly Told[], expected: Expected): string[] {
  const dueMs = Date.parse(expected.dueIso);
  const byName = Map.groupBy(told.filter(({ taken }) => taken), ({ name }) => name);
  return [
    ...told.flatMap(({ name, atMs, validUntilMs }) => (atMs < validUntilMs ? [] : [`O4: ${name} was told after it had ceased to hold`])),
    ...Object.entries(expected.told).flatMap(([name, withinMin]) => {
      const first = byName.get(name)?.[0];
      if (first === undefined) return [`O5: ${name} was not told`];
      const afterMin = (first.atMs - dueMs) / 60_000;
      return afterMin > withinMin ? [`O5: ${name} was told after ${afterMin} minutes`] : [];
    }),
  ];
}

/** O6: who looks at health sees it, and sees nothing when there is nothing. */
function unseen(health: unknown, { seen }: Expected): string[] {
  const said = health as { readonly warnings?: readonly string[] };
  const isAsItShouldBe = seen === undefined ? said.warnings?.length === 0 : seen.test(JSON.stringify(said));
  return isAsItShouldBe ? [] : [`O6: health says ${JSON.stringify(said).slice(-700)}`];
}
