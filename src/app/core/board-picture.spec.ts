/** @jest-environment node */
import { afterChanges, pictureOf } from './board-picture';
import { aBoard, aCallRow, NOW } from './testing';

describe('the picture after changes', () => {
  const claimUntil = (until: number) => ({ userId: 'ana', name: 'Ana Ruiz', until });
  const before = pictureOf({
    ...aBoard(),
    calls: [aCallRow(1, { version: 4, claim: claimUntil(NOW + 60_000) })],
  });
  const row = aCallRow(1, { version: 4 });
  const shown = (picture: typeof before) => picture.calls.get(row.id);

  it('takes a claim that was kept longer, though the call has no newer version', () => {
    const kept = aCallRow(1, { version: 4, claim: claimUntil(NOW + 600_000) });
    const after = afterChanges(before, [{ kind: 'calls', calls: [kept] }]);
    expect(shown(after)?.claim?.until).toBe(NOW + 600_000);
  });

  it('takes a claim that was given back', () => {
    const after = afterChanges(before, [{ kind: 'calls', calls: [{ ...row, claim: null }] }]);
    expect(shown(after)?.claim).toBeNull();
  });

  it('keeps the newer version when an older row comes late, whatever its claim', () => {
    const late = aCallRow(1, { version: 3, claim: claimUntil(NOW + 600_000) });
    const after = afterChanges(before, [{ kind: 'calls', calls: [late] }]);
    expect(after).toBe(before);
  });
});
