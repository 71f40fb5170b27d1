import path from 'node:path';

import { z } from 'zod';

import { startFakeTexts } from './text-service';

/** Runs the local stand-in of the text service from the environment until it is told to stop. */
const Variables = z.object({
  THAWLINE_FAKE_TEXTS_PORT: z.coerce.number().int().min(0).max(65_535).default(4311),
  THAWLINE_TEXT_ACCOUNT: z.string().regex(/^AC[0-9a-f]{32}$/),
  THAWLINE_TEXT_TOKEN: z.string().min(16),
  THAWLINE_TEXT_FROM: z.string().regex(/^\+[1-9]\d{6,14}$/),
  THAWLINE_DATA_FOLDER: z.string().default('.data'),
  /** Where the product takes texts from phones, as the product itself names that address. */
  THAWLINE_TEXT_INBOUND_URL: z.url({ protocol: /^https?$/ }),
});

async function main(): Promise<void> {
  const read = Variables.safeParse(process.env);
  if (!read.success) {
    const wrong = read.error.issues.map(
      (issue) => `${issue.path.map(String).join('.')}: ${issue.message}`,
    );
    console.error(`The text stand-in cannot start: ${wrong.join('; ')}.`);
    process.exitCode = 78;
    return;
  }
  const fake = await startFakeTexts({
    port: read.data.THAWLINE_FAKE_TEXTS_PORT,
    accountSid: read.data.THAWLINE_TEXT_ACCOUNT,
    authToken: read.data.THAWLINE_TEXT_TOKEN,
    number: read.data.THAWLINE_TEXT_FROM,
    inboundUrl: read.data.THAWLINE_TEXT_INBOUND_URL,
    journalPath: path.resolve(read.data.THAWLINE_DATA_FOLDER, 'fake-texts.jsonl'),
  });
  console.log(`Texts are shown at ${fake.url}/`);

  const stop = (): void => {
    void fake.close().then(() => process.exit(0));
  };
  process.once('SIGINT', stop);
  process.once('SIGTERM', stop);
}

main().catch((error: unknown) => {
  const code = (error as NodeJS.ErrnoException).code;
  console.error(
    code === 'EADDRINUSE'
      ? 'The port of the text stand-in is taken; set THAWLINE_FAKE_TEXTS_PORT to another.'
      : error,
  );
  process.exitCode = 1;
});
