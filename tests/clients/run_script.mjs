// Runs a script through better-sqlite3 and prints the lines it told:
// node run_script.mjs DATABASE MODULE SCRIPT
import { readFileSync } from 'node:fs';
import { Sqlite } from './support.mjs';

const [database, module, script] = process.argv.slice(2);
const db = new Sqlite(database, { readonly: true });
db.loadExtension(module);
db.exec(readFileSync(script, 'utf8'));
const lines = db.prepare('SELECT line FROM told ORDER BY rowid').pluck().all();
process.stdout.write(lines.join('\n') + '\n');
