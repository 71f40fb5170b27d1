/** @jest-environment node */
import { MINUTE_MS } from '@shared/domain/instant';
import { aStop, idOf, NOW } from '../core/testing';
import { changesByTechnician, changeWords, figureLines } from './plan-comparison';

const figures = (change: object = {}) => ({
  savedCents: 830_000,
  lostCents: 720_000,
  driveMinutes: 510,
  driveMiles: 180.4,
  lateMinutes: 0,
  stops: 58,
  moved: 0,
  ...change,
});
const planned = (callNumber: number, minutes: number) => ({
  callId: idOf(1000 + callNumber),
  arriveAt: NOW + minutes * MINUTE_MS,
  startAt: NOW + minutes * MINUTE_MS,
  finishAt: NOW + (minutes + 45) * MINUTE_MS,
  driveMinutes: 10,
  firm: false,
  because: 'On the way.',
});
const ANA = idOf(2001);
const BEN = idOf(2002);

describe('figureLines', () => {
  const lines = figureLines({
    inForce: figures(),
    figures: figures({ savedCents: 1_240_000, lostCents: 310_000, driveMiles: 214.3, moved: 2 }),
  });
  const line = (label: string) => lines.find((one) => one.label === label);

  it('names every figure once, with both sides and the difference', () => {
    expect(lines.map((one) => one.label)).toEqual([
      'Food saved',
      'Food lost',
      'Miles',
      'Driving',
      'Lateness',
      'Stops',
      'Stops moved',
    ]);
    expect(line('Food saved')).toMatchObject({
      inForce: '$8,300',
      proposed: '$12,400',
      difference: '$4,100 more',
    });
  });

  it('knows that more food saved is better, and that more food lost or more miles are worse', () => {
    expect(line('Food saved')?.turn).toBe('better');
    expect(line('Food lost')?.turn).toBe('better');
    expect(line('Miles')).toMatchObject({ difference: '34 more', turn: 'worse' });
  });

  it('calls the same what reads the same', () => {
    expect(line('Driving')).toMatchObject({ difference: 'same', turn: 'same' });
  });

  it('passes no judgement on moved stops', () => {
    expect(line('Stops moved')).toMatchObject({ proposed: '2', turn: 'neither' });
  });
});

describe('changesByTechnician', () => {
  const stopAt = (callNumber: number, technicianId: string, minutes: number) =>
    aStop(callNumber, { technicianId, arriveAt: NOW + minutes * MINUTE_MS });
  const inForce = [stopAt(1, ANA, 30), stopAt(2, ANA, 90), stopAt(3, BEN, 30), stopAt(4, BEN, 90)];
  const plan = {
    routes: [
      // Call 1 keeps its time within half an hour, call 2 comes an hour later, call 5 is new.
      { technicianId: ANA, stops: [planned(1, 55), planned(2, 150), planned(5, 220)] },
      { technicianId: BEN, stops: [planned(4, 90)] },
    ],
  };
  const words = (technicianId: string) =>
    changesByTechnician(plan, inForce)
      .find((one) => one.technicianId === technicianId)
      ?.changes.map((one) =>
        changeWords(
          one,
          (id) => String(Number(id.slice(-4)) - 1000),
          (id) => (id === ANA ? 'Ana' : 'Ben'),
        ),
      );

  it('tells each technician what is new, what leaves and what moves', () => {
    expect(words(ANA)).toEqual(['Call 2 comes 1 h 00 later', 'Call 5 is new']);
    expect(words(BEN)).toEqual(['Call 3 leaves the route']);
  });

  it('counts a start within half an hour as the same promise', () => {
    const ana = changesByTechnician(plan, inForce).find((one) => one.technicianId === ANA);
    expect(ana?.unchanged).toBe(1);
  });

  it('tells both sides of a stop that changes hands', () => {
    const swap = { routes: [{ technicianId: BEN, stops: [planned(1, 30)] }] };
    const changes = changesByTechnician(swap, [stopAt(1, ANA, 30)]);
    expect(changes.map((one) => [one.technicianId, one.changes[0]?.kind])).toEqual([
      [BEN, 'from-other'],
      [ANA, 'to-other'],
    ]);
  });

  it('finds nothing to tell when nothing changes', () => {
    const same = { routes: [{ technicianId: ANA, stops: [planned(1, 30)] }] };
    expect(changesByTechnician(same, [stopAt(1, ANA, 30)])).toEqual([
      { technicianId: ANA, changes: [], unchanged: 1 },
    ]);
  });
});
