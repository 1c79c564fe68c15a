import pg from 'pg';
import { QueryTypes, Sequelize, Transaction } from 'sequelize';

/** A transaction; the first parameter of every repository function. */
export type Tx = Transaction;

export interface Database {
  sequelize: Sequelize;
  /** Plain pool on the same database, for COPY, the job queue and sign-in sessions. */
  pool: pg.Pool;
  close(): Promise<void>;
}

/** Dates come as `YYYY-MM-DD`, bigint and numeric as numbers: nothing stored here exceeds 2^53 or needs more than double precision. */
const parsers: Partial<Record<number, (text: string) => unknown>> = {
  [pg.types.builtins.DATE]: (text) => text,
  [pg.types.builtins.INT8]: Number,
  [pg.types.builtins.NUMERIC]: Number,
  // date[]
  1182: (text) => (text === '{}' ? [] : text.slice(1, -1).split(',')),
};

const types: pg.CustomTypesConfig = {
  getTypeParser: ((oid: Parameters<typeof pg.types.getTypeParser>[0], format?: 'text' | 'binary') =>
    parsers[oid] ?? (pg.types.getTypeParser(oid, format) as unknown)) as typeof pg.types.getTypeParser,
};

/** Opens the pools; connects lazily. */
export function openDatabase(url: string, { poolSize = 10 }: { poolSize?: number } = {}): Database {
  const pool = new pg.Pool({ connectionString: url, max: poolSize, types });
  pool.on('error', () => undefined);
  const sequelize = new Sequelize(url, {
    dialect: 'postgres',
    dialectModule: pg,
    logging: false,
    pool: { max: poolSize, min: 0, idle: 10_000, acquire: 30_000 },
    define: { underscored: true, timestamps: false, freezeTableName: true },
  });
  return {
    sequelize,
    pool,
    close: async () => {
      await sequelize.close();
      await pool.end();
    },
  };
}

/** Runs one use case in one transaction (read committed); rolls back if `work` throws. */
export function inTransaction<T>(database: Database, work: (tx: Tx) => Promise<T>): Promise<T> {
  return database.sequelize.transaction({ isolationLevel: Transaction.ISOLATION_LEVELS.READ_COMMITTED }, work);
}

/** Reads in one transaction that sees a single state of the database (repeatable read), for what is read by several statements. */
export function inSnapshot<T>(database: Database, work: (tx: Tx) => Promise<T>): Promise<T> {
  return database.sequelize.transaction({ isolationLevel: Transaction.ISOLATION_LEVELS.REPEATABLE_READ }, work);
}

/** Rows of a statement with bound parameters (`$name`). The caller states the row's type as its columns are cast in SQL. */
export async function selectRows<Row extends object>(
  tx: Tx,
  sql: string,
  bind: Record<string, unknown> = {},
): Promise<Row[]> {
  return sequelizeOf(tx).query<Row>(sql, { bind, type: QueryTypes.SELECT, transaction: tx });
}

/** The first row or null. */
export async function selectRow<Row extends object>(
  tx: Tx,
  sql: string,
  bind: Record<string, unknown> = {},
): Promise<Row | null> {
  return (await selectRows<Row>(tx, sql, bind))[0] ?? null;
}

/** Runs a statement that writes; `returning` rows come back. */
export async function execute<Row extends object>(
  tx: Tx,
  sql: string,
  bind: Record<string, unknown> = {},
): Promise<Row[]> {
  const [rows] = await sequelizeOf(tx).query(sql, { bind, transaction: tx });
  return Array.isArray(rows) ? (rows as Row[]) : [];
}

function sequelizeOf(tx: Tx): Sequelize {
  return (tx as Tx & { sequelize: Sequelize }).sequelize;
}
