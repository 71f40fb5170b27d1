import { createTextSender, type TextSender } from '../../server/texts/send-text';

export const ACCOUNT = 'AC0123456789abcdef0123456789abcdef';
export const TOKEN = 'f1e2d3c4b5a69788f1e2d3c4b5a69788';
export const OURS = '+12525550100';

/** A sender to the stand-in of the text service, with reports to the product's public address. */
export const textSender = (fakeUrl: string, publicUrl: string, timeoutMs: number): TextSender =>
  createTextSender({
    accountSid: ACCOUNT,
    authToken: TOKEN,
    baseUrl: fakeUrl,
    from: OURS,
    statusCallbackUrl: `${publicUrl}/webhooks/texts/status`,
    timeoutMs,
  });
