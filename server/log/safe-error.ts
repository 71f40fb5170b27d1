/**
 * An error as the log may hold it. The database library puts the whole statement into its errors,
 * values and all: names, phone numbers, hashes of passwords. Of those only the kind of failure is
 * kept, its code and where it happened.
 */
export function safeError(error: unknown): Readonly<Record<string, unknown>> {
  if (!(error instanceof Error)) return { type: typeof error };
  const stack = framesOf(error);
  const parent = databaseErrorBehind(error);
  if (parent)
    return {
      type: error.name,
      code: parent.code,
      errno: parent.errno,
      sqlState: parent.sqlState,
      stack,
    };
  return {
    type: error.name,
    message: error.message,
    ...(typeof (error as { code?: unknown }).code === 'string'
      ? { code: (error as { code?: unknown }).code }
      : {}),
    stack,
    ...(error.cause === undefined ? {} : { cause: safeError(error.cause) }),
  };
}

interface DatabaseError {
  readonly code?: unknown;
  readonly errno?: unknown;
  readonly sqlState?: unknown;
}

/** The connector's own error, or the one that Sequelize has wrapped. */
function databaseErrorBehind(error: Error): DatabaseError | null {
  const { parent } = error as { parent?: unknown };
  if (parent && typeof parent === 'object') return parent;
  const isConnectors = 'sqlState' in error || 'sql' in error || error.name.startsWith('Sequelize');
  return isConnectors ? (error as DatabaseError) : null;
}

/** Where it happened, without the first lines, which repeat the message. */
const framesOf = (error: Error): string[] =>
  (error.stack ?? '')
    .split('\n')
    .filter((line) => /^\s+at /.test(line))
    .map((line) => line.trim())
    .slice(0, 12);
