// The tables of the local database, in a process of its own: node tables.ts FOLDER. Writes what `wrangler d1 migrations
// apply --local` writes, its list of what has been applied too, but starts the runtime once, not once for each migration.
import { readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { convertV4MiniflareOptions, Miniflare } from 'miniflare';

const MIGRATIONS = path.resolve(import.meta.dirname, '../store/migrations');
const LIST = `CREATE TABLE IF NOT EXISTS "d1_migrations"(
  id INTEGER PRIMARY KEY AUTOINCREMENT, name TEXT UNIQUE, applied_at TIMESTAMP DEFAULT CURRENT_TIMESTAMP NOT NULL)`;

/** The id of the database in wrangler.toml: the local runtime finds the file by it. */
function databaseId(): string {
  const found = /^\s*database_id\s*=\s*"([^"]+)"/m.exec(readFileSync(path.resolve(import.meta.dirname, '../../wrangler.toml'), 'utf8'));
  if (found?.[1] === undefined) throw new Error('wrangler.toml: no database_id');
  return found[1];
}

/** The statements of a migration; each of ours ends with a semicolon at the end of a line. */
function statementsOf(file: string): string[] {
  return readFileSync(path.join(MIGRATIONS, file), 'utf8').replaceAll(/--.*$/gm, '').split(/;\s*$/m).filter((statement) => statement.trim() !== '');
}

const [folder = ''] = process.argv.slice(2);
const runtime = new Miniflare({
  ...convertV4MiniflareOptions({ modules: true, script: 'export default {}', compatibilityDate: '2026-11-01', d1Databases: { DB: databaseId() } }),
  resourcePersistencePath: path.join(folder, 'v3'),
});
try {
  const db = await runtime.getD1Database('DB');
  await db.prepare(LIST).run();
  const { results } = await db.prepare('SELECT name FROM d1_migrations').all<{ name: string }>();
  const applied = new Set(results.map(({ name }) => name));
  for (const file of readdirSync(MIGRATIONS).filter((name) => name.endsWith('.sql') && !applied.has(name)).sort()) {
    await db.batch([...statementsOf(file).map((statement) => db.prepare(statement)), db.prepare('INSERT INTO d1_migrations (name) VALUES (?)').bind(file)]);
  }
} finally {
  await runtime.dispose();
}
