import { Linter } from 'eslint';
import tseslint from 'typescript-eslint';
import { describe, expect, it } from 'vitest';
import { noOuterDatabase } from './no-outer-database.mjs';

const linter = new Linter();

/** How many times the rule objects to a piece of code. */
function objections(code: string): number {
  const messages = linter.verify(
    code,
    [
      {
        files: ['**/*.ts'],
        languageOptions: { parser: tseslint.parser },
        plugins: { local: { rules: { 'no-outer-database': noOuterDatabase as never } } },
        rules: { 'local/no-outer-database': 'error' },
      },
    ],
    'code.ts',
  );
  expect(messages.filter(({ fatal }) => fatal)).toEqual([]);
  return messages.length;
}

describe('the outer database within a transaction', () => {
  it.each([
    ['a member', `app.db.transaction().execute(async (trx) => { await app.db.selectFrom('x').execute(); })`],
    ['a variable', `db.transaction().execute(async (trx) => { await db.selectFrom('x').execute(); })`],
    ['handed on', `app.db.transaction().execute((trx) => read(app.db, trx))`],
    ['deeper in', `app.db.transaction().execute(async (trx) => list.map((one) => read(app.db, one)))`],
    ['with settings', `db.transaction().setIsolationLevel('x').execute((trx) => read(db))`],
    ['a transaction in a transaction', `db.transaction().execute((trx) => db.transaction().execute(go))`],
    ['in a function expression', `db.transaction().execute(async function (trx) { await read(db); })`],
    ['in quotes', `db.transaction().execute((trx) => read(app['db']))`],
    ['taken out of the app', `db.transaction().execute((trx) => { const { ids } = app.db; })`],
    ['as a shorthand', `db.transaction().execute((trx) => read({ db }))`],
    ['in a function that is given one', `async function read(trx: Trx, app: App) { await ask(app.db); }`],
    ['in an arrow that is given one', `const read = async (app: App, trx: Trx) => ask(app.db, trx);`],
  ])('is an error: %s', (_name, code) => {
    expect(objections(code)).toBeGreaterThan(0);
  });

  it.each([
    ['the transaction itself', `db.transaction().execute((trx) => trx.selectFrom('x').execute())`],
    ['before and after', `read(db); await db.transaction().execute((trx) => read(trx)); read(app.db);`],
    ['a parameter of that name', `db.transaction().execute((db) => db.selectFrom('x').execute())`],
    ['a variable within', `db.transaction().execute((trx) => { const db = trx; return read(db); })`],
    ['a key of that name', `db.transaction().execute((trx) => read({ ...app, db: trx }))`],
    ['another execute', `db.selectFrom('x').execute(() => read(db))`],
    ['a function without one', `async function read(db: Db, app: App) { await ask(app.db); }`],
    ['a type', `async function read(trx: Trx, app: { db: Db }) { await ask(trx); }`],
  ])('is none: %s', (_name, code) => {
    expect(objections(code)).toBe(0);
  });
});
