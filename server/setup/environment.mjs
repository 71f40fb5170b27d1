import { SetupProblem } from './problem.mjs';

/** Where the server takes texts from phones; the fake posts to the address as the server knows it. */
const INBOUND_TEXTS = '/webhooks/texts/inbound';

/**
 * The environment for the server: what the person set wins, then what was generated or found here.
 *
 * @param database how to connect, or null when the person named a database of their own
 */
export function serverEnvironment({ port, fakesPort, database, secrets }) {
  const ours = {
    THAWLINE_PORT: String(port),
    THAWLINE_PUBLIC_URL: `http://localhost:${port}`,
    THAWLINE_SESSION_SECRET: secrets.sessionSecret,
    THAWLINE_DEMO: 'on',
    // Nothing leaves the machine unless the person has an account with the text service.
    THAWLINE_TEXT_ACCOUNT: secrets.textAccount,
    THAWLINE_TEXT_TOKEN: secrets.textToken,
    THAWLINE_TEXT_FROM: '+12015550100',
    ...(fakesPort && {
      THAWLINE_TEXT_BASE_URL: `http://127.0.0.1:${fakesPort}`,
      THAWLINE_FAKE_TEXTS_PORT: String(fakesPort),
      THAWLINE_TEXT_INBOUND_URL: `http://localhost:${port}${INBOUND_TEXTS}`,
    }),
    ...(database && {
      THAWLINE_DB_HOST: database.host,
      THAWLINE_DB_PORT: String(database.port),
      THAWLINE_DB_USER: database.user,
      THAWLINE_DB_PASSWORD: database.password,
      THAWLINE_DB_NAME: database.name,
    }),
  };
  const set = Object.entries(process.env).filter(
    ([name, value]) => name.startsWith('THAWLINE_') && value,
  );
  return { ...ours, ...Object.fromEntries(set) };
}

/** Whether texts go to the local fake: unless the person set an account with the text service. */
export const usesFakeTexts = () =>
  !process.env.THAWLINE_TEXT_ACCOUNT && !process.env.THAWLINE_TEXT_BASE_URL;

/**
 * Whether the person named a database server of their own; else the private one is used, which takes
 * its port and account from nobody. A setting that would be half of a server of their own is refused.
 */
export function usesOwnDatabase() {
  if (process.env.THAWLINE_DB_HOST) return true;
  const half = ['PORT', 'USER', 'PASSWORD', 'NAME']
    .map((name) => `THAWLINE_DB_${name}`)
    .find((name) => process.env[name]);
  if (!half) return false;
  throw new SetupProblem(
    `${half} belongs to a database server of your own. Set THAWLINE_DB_HOST as well, or leave ${half} out to use the private server.`,
  );
}
