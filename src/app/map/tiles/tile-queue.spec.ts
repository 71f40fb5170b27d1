import { TileQueue } from './tile-queue';

const tile = (id: number, z = 13, x = id) => ({ id, place: { z, x, y: 0 }, pixelRatio: 1 });
const ids = (queue: TileQueue): number[] => {
  const order: number[] = [];
  for (let next = queue.next(); next; next = queue.next()) order.push(next.id);
  return order;
};

describe('TileQueue', () => {
  it('gives tiles in the order in which they were asked for', () => {
    const queue = new TileQueue();
    [3, 1, 2].forEach((id) => queue.add(tile(id)));
    expect(ids(queue)).toEqual([3, 1, 2]);
  });

  it('forgets tiles that have left the window', () => {
    const queue = new TileQueue();
    [1, 2, 3].forEach((id) => queue.add(tile(id)));
    queue.drop(2);
    expect(ids(queue)).toEqual([1, 3]);
    expect(queue.isWanted(2)).toBe(false);
    expect(queue.isWanted(1)).toBe(true);
  });

  it('prefers the zoom that was asked for last', () => {
    const queue = new TileQueue();
    queue.add(tile(1, 13));
    queue.add(tile(2, 14));
    queue.add(tile(3, 14));
    expect(ids(queue)).toEqual([2, 3, 1]);
  });

  it('paints once more only what has been painted, and after what is new', () => {
    const queue = new TileQueue();
    queue.add(tile(1));
    queue.add(tile(2));
    expect(queue.next()?.id).toBe(1);
    queue.repaint(() => true);
    queue.add(tile(4));
    expect(ids(queue)).toEqual([2, 4, 1]);
    queue.repaint(({ x }) => x === 2);
    expect(ids(queue)).toEqual([2]);
  });
});
