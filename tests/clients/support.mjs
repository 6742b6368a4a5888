// What tests in Node.js share: SQLite new and old, and a browser.
import { existsSync, mkdtempSync, rmSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { chromium } from 'playwright-core';

const require = createRequire(import.meta.url);

// better-sqlite3, a SQLite newer than Debian's: the one compiled for the examples.
export const Sqlite = createRequire(new URL('../../examples/package.json', import.meta.url))('better-sqlite3');

// sql.js 0.2.21: SQLite 3.8.7 without extensions, in memory. new OldSqlite(bytes of a file).
export const OldSqlite = require('sql.js').Database;

// Ends the test as one that could not run, by the status that ctest knows.
export function notRun(reason) {
  console.log(`not run: ${reason}`);
  process.exit(77);
}

// A folder of the test's own, removed when the program ends.
export function temporaryFolder() {
  const folder = mkdtempSync(join(tmpdir(), 'ladderline-'));
  process.on('exit', () => rmSync(folder, { recursive: true, force: true }));
  return folder;
}

// Headless Chromium with an empty profile. The caller closes it.
export async function openBrowser() {
  const executablePath = '/usr/bin/chromium';
  if (!existsSync(executablePath)) notRun('there is no Chromium');
  return chromium.launch({
    executablePath,
    headless: true,
    args: ['--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run',
      '--disable-background-networking', '--disable-component-update', '--disable-sync'],
  });
}
