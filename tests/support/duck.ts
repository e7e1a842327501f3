import { DuckDBInstance } from '@duckdb/node-api';

/** Rows of a query by DuckDB, the independent engine of the reference tests. Instants and numbers come as JSON has them. */
export async function duck(sql: string): Promise<Record<string, unknown>[]> {
  const instance = await DuckDBInstance.create(':memory:');
  try {
    const connection = await instance.connect();
    const reader = await connection.runAndReadAll(sql);
    return reader.getRowObjectsJson();
  } finally {
    instance.closeSync();
  }
}
