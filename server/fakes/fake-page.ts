import type { FakeMessage } from './fake-messages';

/**
 * The local page of the fake: what went to whose phone. It is plain HTML without a script. The
 * threads sit in a frame of their own, so that their refresh never wipes what somebody is typing.
 */
export const PAGE_POLICY =
  "default-src 'none'; style-src 'unsafe-inline'; frame-src 'self'; frame-ancestors 'self'; form-action 'self'; base-uri 'none'";

const REFRESH_SECONDS = 3;

const STYLE = `
  :root { color-scheme: light dark; --line: color-mix(in srgb, currentColor 25%, transparent); }
  body { margin: 0; font: 15px/1.45 ui-monospace, "DejaVu Sans Mono", monospace; }
  header, main { padding: 12px 20px; }
  header { border-bottom: 3px double var(--line); }
  h1 { font-size: 1rem; margin: 0 0 4px; }
  h2 { font-size: .95rem; margin: 24px 0 4px; border-bottom: 1px solid var(--line); }
  p { margin: 0 0 8px; }
  form { display: flex; flex-wrap: wrap; gap: 12px; align-items: end; }
  label { display: grid; gap: 2px; }
  label.wide { flex: 1 1 18rem; }
  input, button { font: inherit; padding: 5px 8px; }
  iframe { border: 0; width: 100%; height: calc(100vh - 170px); }
  ol { list-style: none; margin: 0; padding: 0; }
  li { padding: 4px 0 4px 12px; border-left: 3px solid var(--line); margin: 6px 0; overflow-wrap: anywhere; }
  li.in { border-left-style: double; border-left-width: 6px; margin-left: 3rem; }
  small { opacity: .8; }
`;

export function fakePage(messages: readonly FakeMessage[]): string {
  const phones = threadsOf(messages).map(([phone]) => phone);
  return page(
    'Texts that went nowhere',
    `<header>
      <h1>Texts that went nowhere</h1>
      <p>A stand-in for the hosted text service. Nothing on this page has left this machine.</p>
      <form method="post" action="/inbound">
        <label>From phone <input name="from" list="phones" required pattern="\\+[0-9]{7,15}" placeholder="+15555550100"></label>
        <datalist id="phones">${phones.map((phone) => `<option value="${escaped(phone)}">`).join('')}</datalist>
        <label class="wide">Text <input name="body" required maxlength="1600"></label>
        <button>Send as that phone</button>
      </form>
    </header>
    <iframe src="/threads" title="Texts by phone"></iframe>`,
  );
}

export function threadsPage(messages: readonly FakeMessage[]): string {
  const threads = threadsOf(messages)
    .map(
      ([phone, thread]) =>
        `<section><h2>${escaped(phone)}</h2><ol>${thread.map(line).join('')}</ol></section>`,
    )
    .join('');
  return page(
    'Texts by phone',
    `<main>${threads || '<p>No text yet.</p>'}</main>`,
    `<meta http-equiv="refresh" content="${REFRESH_SECONDS}">`,
  );
}

/** Phones with their texts, the phone with the newest text first. */
function threadsOf(
  messages: readonly FakeMessage[],
): readonly (readonly [string, readonly FakeMessage[]])[] {
  const threads = new Map<string, FakeMessage[]>();
  for (const message of messages) {
    const phone = message.direction === 'inbound' ? message.from : message.to;
    const thread = threads.get(phone) ?? [];
    // Delete and set again: a map keeps the order of insertion, so the newest ends up last.
    threads.delete(phone);
    threads.set(phone, [...thread, message]);
  }
  return [...threads].reverse();
}

function line(message: FakeMessage): string {
  const isInbound = message.direction === 'inbound';
  const at = new Date(message.createdAt).toISOString().replace('T', ' ').slice(0, 19);
  return `<li${isInbound ? ' class="in"' : ''}>${escaped(message.body)}<br><small>${
    isInbound ? 'from the phone' : 'to the phone'
  }, ${at} UTC, ${escaped(message.status)}</small></li>`;
}

const page = (title: string, body: string, head = ''): string =>
  `<!doctype html><html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width"><title>${escaped(title)}</title>${head}<style>${STYLE}</style></head><body>${body}</body></html>`;

const ENTITIES: Readonly<Record<string, string>> = {
  '&': '&amp;',
  '<': '&lt;',
  '>': '&gt;',
  '"': '&quot;',
  "'": '&#39;',
};

const escaped = (text: string): string => text.replace(/[&<>"']/g, (c) => ENTITIES[c] ?? c);
