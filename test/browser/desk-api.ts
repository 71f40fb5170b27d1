import { randomUUID } from 'node:crypto';
import { expect, type Page } from '@playwright/test';
import type { BoardPicture } from '@shared/contract/board';
import type { ReplyOf } from '@shared/contract/http';

/**
 * What a signed-in person asks for without a click, where a click is not what the test is about.
 * Changes carry what the page itself sends with them: its origin and the token of its session.
 */
export async function give<T>(page: Page, path: string, body: object): Promise<T> {
  const token = (await page.context().cookies()).find(({ name }) => name === 'XSRF-TOKEN');
  const answer = await page.request.post(path, {
    data: { commandId: randomUUID(), ...body },
    headers: { Origin: new URL(page.url()).origin, 'X-XSRF-TOKEN': token?.value ?? '' },
  });
  expect(answer.ok(), `${path}: ${await answer.text()}`).toBe(true);
  return (await answer.json()) as T;
}

/** The storm that is open, with its calls, stops and technicians. */
export async function boardOf(page: Page): Promise<BoardPicture> {
  const { me } = (await (await page.request.get('/api/me')).json()) as ReplyOf<'me'>;
  const board = await page.request.get(`/api/storms/${me?.storm?.id ?? 'none'}/board`);
  expect(board.ok(), await board.text()).toBe(true);
  return (await board.json()) as BoardPicture;
}

/**
 * Takes every stop that nobody has begun off its route, the last of each first. A call that another
 * dispatcher is working on is theirs to take off; it stays.
 */
export async function emptyRoutes(page: Page): Promise<void> {
  const { me } = (await (await page.request.get('/api/me')).json()) as ReplyOf<'me'>;
  for (;;) {
    const { stops, calls } = await boardOf(page);
    const held = new Set(
      calls.filter(({ claim }) => claim && claim.userId !== me?.user.id).map(({ id }) => id),
    );
    // One of each route at a time: taking a stop off may change the others of its route.
    const last = new Map<string, (typeof stops)[number]>();
    for (const stop of stops)
      if (['planned', 'offered'].includes(stop.state) && !held.has(stop.callId))
        if (stop.position >= (last.get(stop.technicianId)?.position ?? 0))
          last.set(stop.technicianId, stop);
    if (last.size === 0) return;
    for (const { id, version } of last.values())
      await give(page, `/api/stops/${id}/pull`, { version, reason: 'cleared' });
  }
}

/** Puts the most urgent calls that this technician can do on their empty route; the first is offered. */
export async function giveStops(desk: Page, name: string, count: number): Promise<string> {
  const { calls, technicians } = await boardOf(desk);
  const technician = technicians.find((one) => one.name.startsWith(name));
  if (!technician) throw new Error(`${name} is not of this company`);
  const fit = calls.filter(
    ({ state, skills }) =>
      state === 'waiting' && skills.every((skill) => technician.skills.includes(skill)),
  );
  for (const [position, { id }] of fit.slice(0, count).entries()) {
    const version = (await boardOf(desk)).calls.find((call) => call.id === id)?.version;
    const stop = { stopId: randomUUID(), technicianId: technician.id, position };
    await give(desk, `/api/calls/${id}/stop`, { version, ...stop });
  }
  return technician.id;
}
