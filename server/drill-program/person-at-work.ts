import { randomUUID } from 'node:crypto';
import { setTimeout as sleep } from 'node:timers/promises';
import { io, type Socket } from 'socket.io-client';
import type { ReplyOf, SentBodyOf } from '@shared/contract/http';
import { PATHS, type RouteName } from '@shared/contract/paths';
import type { ClientEvents, ServerEvents } from '@shared/contract/realtime';

/** What the server said no to, or failed at. */
export class Refused extends Error {
  constructor(
    readonly status: number,
    readonly type: string,
    words: string,
  ) {
    super(words);
  }

  /** Somebody else was there first, or has changed it since: everyday life and no fault. */
  get isOvertaken(): boolean {
    return this.status === 409 || this.status === 404;
  }
}

const MOST_ATTEMPTS = 6;

interface Asked<Name extends RouteName> {
  readonly params?: Readonly<Record<string, string>>;
  readonly query?: Readonly<Record<string, string>>;
  /** The body without its command's id, which is made here. */
  readonly body?: SentBodyOf<Name> extends { commandId: string }
    ? Omit<SentBodyOf<Name>, 'commandId'>
    : SentBodyOf<Name>;
}

/** Somebody signed in, as a browser would be: cookies, the token that changes echo, a socket. */
export class PersonAtWork {
  private readonly cookies = new Map<string, string>();

  constructor(
    readonly name: string,
    private readonly address: string,
  ) {}

  async signIn(signInName: string, password: string): Promise<ReplyOf<'signIn'>> {
    return this.call('signIn', { body: { signInName, password } });
  }

  /**
   * Calls a route by its name. Where the server is busy it is asked again, with the same command's id, so
   * that nothing is done twice.
   *
   * @throws Refused
   */
  async call<Name extends RouteName>(name: Name, asked: Asked<Name> = {}): Promise<ReplyOf<Name>> {
    const [method] = PATHS[name];
    const body =
      method === 'GET' ? undefined : JSON.stringify(bodyOf(name, asked.body as object | undefined));
    for (let attempt = 1; ; attempt++) {
      const response = await this.send(name, asked, body);
      this.keepCookies(response);
      const reply: unknown = await response.json();
      if (response.ok) return reply as ReplyOf<Name>;
      const isBusy = response.status === 503 || response.status === 429;
      if (!isBusy || attempt === MOST_ATTEMPTS) throw refusal(name, response.status, reply);
      await sleep(Math.min(10, Number(response.headers.get('Retry-After') ?? 1)) * 1000);
    }
  }

  private send(
    name: RouteName,
    { params = {}, query = {} }: Asked<RouteName>,
    body: string | undefined,
  ): Promise<Response> {
    const [method, pattern] = PATHS[name];
    const path = pattern.replace(/:(\w+)/g, (_, key: string) => params[key] ?? '');
    const url = new URL(path, this.address);
    for (const [key, value] of Object.entries(query)) url.searchParams.set(key, String(value));
    if (body === undefined) return fetch(url, { headers: { Cookie: this.cookieHeader() } });
    const headers = {
      Cookie: this.cookieHeader(),
      'Content-Type': 'application/json',
      Origin: url.origin,
      'X-XSRF-TOKEN': this.cookies.get('XSRF-TOKEN') ?? '',
    };
    return fetch(url, { method, headers, body });
  }

  /** Listens to what the server announces to this person. */
  listen(onChange: () => void): Socket<ServerEvents, ClientEvents> {
    const socket: Socket<ServerEvents, ClientEvents> = io(this.address, {
      transports: ['websocket'],
      extraHeaders: { Cookie: this.cookieHeader(), Origin: new URL(this.address).origin },
    });
    socket.on('board:changed', onChange);
    socket.on('day:changed', onChange);
    return socket;
  }

  private cookieHeader(): string {
    return [...this.cookies].map(([name, value]) => `${name}=${value}`).join('; ');
  }

  private keepCookies(response: Response): void {
    for (const line of response.headers.getSetCookie()) {
      const [name, value] = (line.split(';')[0] ?? '').split('=');
      if (name && value !== undefined) this.cookies.set(name, value);
    }
  }
}

/** Signing in and changing a password are no commands with an id. */
const WITHOUT_ID: readonly RouteName[] = ['signIn', 'signOut', 'changePassword', 'reportPosition'];

const bodyOf = (name: RouteName, body: object = {}): object =>
  WITHOUT_ID.includes(name) ? body : { commandId: randomUUID(), ...body };

function refusal(name: RouteName, status: number, reply: unknown): Refused {
  const { type = '', title = '', detail = '' } = reply as Record<string, string | undefined>;
  return new Refused(status, type, `${name}: ${status} ${title} ${detail}`.trim());
}
