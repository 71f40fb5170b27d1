import { QueryTypes, type Sequelize, type Transaction } from 'sequelize';

type Values = readonly unknown[];

/** Reads rows by parameterised SQL; what a list on a screen needs, without a model's cost. */
export function select<Row extends object>(
  sequelize: Sequelize,
  sql: string,
  values: Values = [],
  tx?: Transaction,
): Promise<Row[]> {
  return sequelize.query<Row>(sql, {
    type: QueryTypes.SELECT,
    replacements: [...values],
    ...(tx ? { transaction: tx } : {}),
  });
}

/** Changes rows by parameterised SQL. @returns how many rows it changed */
export async function change(
  sequelize: Sequelize,
  sql: string,
  values: Values,
  tx?: Transaction,
): Promise<number> {
  const [, changed] = await sequelize.query(sql, {
    type: QueryTypes.UPDATE,
    replacements: [...values],
    ...(tx ? { transaction: tx } : {}),
  });
  return changed;
}

/** Inserts by parameterised SQL. */
export async function insert(
  sequelize: Sequelize,
  sql: string,
  values: Values,
  tx?: Transaction,
): Promise<void> {
  await sequelize.query(sql, {
    type: QueryTypes.INSERT,
    replacements: [...values],
    ...(tx ? { transaction: tx } : {}),
  });
}

/** JSON columns come back parsed or as text, depending on the connection; this reads either. */
export function json<T>(stored: unknown): T {
  return (typeof stored === 'string' ? JSON.parse(stored) : stored) as T;
}

/** Whether a write failed because a unique key holds that value already. */
export function isDuplicateOf(error: unknown, key: string): boolean {
  const parent = (error as { parent?: { errno?: unknown; sqlMessage?: unknown } } | null)?.parent;
  return parent?.errno === 1062 && String(parent.sqlMessage).includes(`'${key}'`);
}
