/** Waits for one of those who tell their end by a callback with an error or nothing. */
export function byCallback<T = void>(
  begin: (done: (error: unknown, value?: T) => void) => void,
): Promise<T> {
  return new Promise((resolve, reject) =>
    begin((error, value) => {
      if (error) reject(error instanceof Error ? error : new Error(JSON.stringify(error)));
      else resolve(value as T);
    }),
  );
}
