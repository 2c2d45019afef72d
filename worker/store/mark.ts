import type { Bindable, Statement } from './database.ts';

/** What is to be written about one row, by a statement that takes the rows as a list: several of a text are one statement. */
export interface Mark {
  readonly sql: string;
  readonly row: Readonly<Record<string, Bindable>>;
}

/** As few statements as say the same, in the order in which their texts first came. */
export function statementsOf(marks: readonly (Mark | Statement)[]): Statement[] {
  const alone = marks.filter((mark) => 'values' in mark);
  const listed = Map.groupBy(marks.filter((mark) => 'row' in mark), ({ sql }) => sql);
  return [...alone, ...[...listed].map(([sql, of]) => ({ sql, values: [JSON.stringify(of.map(({ row }) => row))] }))];
}
