import { describe, expect, it } from 'vitest';
import { openDatabase } from '../../server/database/connection.ts';
import { assertDurable, migrate, pendingMigrations } from '../../server/database/migrate.ts';
import { useDatabase } from '../support/database.ts';
import { query } from '../support/query.ts';

const t = useDatabase();

describe('a transaction', () => {
  const count = async () => (await t.db.query('select from teams')).length;
  const add = (id: string) => ({ id, kind: 'household' as const, name: 'Invented' });

  it('when the work throws, then nothing of it stays, by whichever way it was written', async () => {
    const work = t.db.transaction(async (tx) => {
      await tx.models.Team.create(add('a'), tx.within);
      await tx.query(`insert into teams (id, kind, name) values ('b', 'firm', 'Invented')`);
      await tx.client.query(`insert into teams (id, kind, name) values ('c', 'firm', 'Invented')`);
      expect(await tx.models.Team.count(tx.within)).toBe(3);
      throw new Error('rolled back');
    });
    await expect(work).rejects.toThrow('rolled back');
    expect(await count()).toBe(0);
  });

  it('when a query would slip out of it, then that is refused', async () => {
    await t.db.transaction(async (tx) => {
      await expect(t.db.query('select 1')).rejects.toThrow('outside the transaction');
      await expect(tx.models.Team.count()).rejects.toThrow('outside the transaction');
      await expect(t.db.transaction(async () => 1)).rejects.toThrow('running already');
    });
    expect(await t.db.models.Team.count()).toBe(0);
  });

  it('when values come back, then dates are text and large integers are numbers or an error', async () => {
    const sql = `select date '2026-03-29' as day, 9007199254740991::bigint as most, 0.1::double precision as real`;
    const expected = [{ day: '2026-03-29', most: 9007199254740991, real: 0.1 }];
    expect(await t.db.query(sql)).toEqual(expected);
    expect(await t.db.transaction((tx) => tx.query(sql))).toEqual(expected);
    await expect(t.db.query('select 9007199254740993::bigint')).rejects.toThrow('too large');
  });
});

describe('the migrations', () => {
  it('when two processes start together on an empty database, then they run once', async () => {
    const name = `t_together_${process.pid}`;
    await query(t.url, `create database ${name}`);
    const url = new URL(t.url);
    url.pathname = `/${name}`;
    const first = openDatabase(url.href);
    const second = openDatabase(url.href);
    expect(await pendingMigrations(first)).toBeNull();
    await Promise.all([migrate(first), migrate(second)]);
    await migrate(first);
    expect(await pendingMigrations(second)).toEqual([]);
    const names = await first.query<{ name: string }>('select name from migrations order by name');
    expect(names[0]?.name).toBe('0001-people');
    await Promise.all([first.close(), second.close()]);
    await query(t.url, `drop database ${name} with (force)`);
  });

  it('when the tables of property data are looked at, then the property leads every primary and unique key', async () => {
    const keys = await t.db.query<{ table: string; first: string }>(
      `select i.indrelid::regclass::text as "table", a.attname as first
       from pg_index i
       join pg_attribute a on a.attrelid = i.indrelid and a.attnum = i.indkey[0]
       where (i.indisprimary or i.indisunique) and i.indrelid::regclass::text in
         (select table_name from information_schema.columns where column_name = 'property_id' and table_schema = 'public')`,
    );
    expect(keys.length).toBeGreaterThan(3);
    for (const { table, first } of keys) expect([table, first]).toEqual([table, 'property_id']);
  });
});

describe('a database that could lose what it acknowledged', () => {
  it('when it is as shipped, then it is taken', async () => {
    await expect(assertDurable(t.db)).resolves.toBeUndefined();
  });

  it('when synchronous_commit is off, then it is refused with the reason and the way out', async () => {
    const name = new URL(t.url).pathname.slice(1);
    await query(t.url, `alter database ${name} set synchronous_commit = off`);
    const db = openDatabase(t.url);
    await expect(assertDurable(db)).rejects.toThrow(
      /synchronous_commit = off: after a crash, logs that were acknowledged could be gone.*Set synchronous_commit = on/,
    );
    await db.close();
  });
});
