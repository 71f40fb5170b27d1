/**
 * The thread that reads and paints tiles. A tile takes ten to a hundred milliseconds; on the page's
 * own thread each would be a frame that the map stands still.
 */
import { loadFonts } from './load-fonts';
import type { TileNews, TileOrder } from './tile-orders';
import { keyOf, TilePainter } from './tile-painter';
import { TileQueue, type WantedTile } from './tile-queue';

interface ThreadScope {
  onmessage: ((event: MessageEvent<TileOrder>) => void) | null;
  postMessage(news: TileNews, transfer?: Transferable[]): void;
}

const thread = globalThis as unknown as ThreadScope;
const queue = new TileQueue();
const wakeUp = new MessageChannel();
let painter: TilePainter | null = null;
let fontsAreThere: Promise<unknown> = Promise.resolve();
let isPainting = false;

thread.onmessage = ({ data: order }): void => {
  switch (order.kind) {
    case 'start':
      painter = new TilePainter(
        { ground: order.groundUrl, numbers: order.numbersUrl },
        order.look,
        (keys) => queue.repaint((place) => keys.has(keyOf(place))),
      );
      fontsAreThere = loadFonts(order.fonts);
      return;
    case 'paint':
      queue.add(order);
      // Fetched at once, all beside each other; painted one after the other.
      void painter?.prepare(order.place).catch(() => undefined);
      break;
    case 'drop':
      queue.drop(order.id);
      return;
    case 'look':
      painter?.setLook(order.look);
      queue.repaint(() => true);
      break;
  }
  void paintAll();
};

/** One tile after the other; between two of them the thread hears what is no longer wanted. */
async function paintAll(): Promise<void> {
  if (isPainting) return;
  isPainting = true;
  for (let tile = queue.next(); tile; tile = queue.next()) {
    await paintOne(tile);
    await turn();
  }
  isPainting = false;
}

async function paintOne({ id, place, pixelRatio }: WantedTile): Promise<void> {
  if (!painter) return;
  try {
    const [prepared] = await Promise.all([painter.prepare(place), fontsAreThere]);
    if (!queue.isWanted(id)) return;
    const picture = painter.draw(place, prepared, pixelRatio);
    thread.postMessage({ kind: 'painted', id, picture }, [picture]);
  } catch {
    // No connection, or a fetch given up for another zoom: the page asks again if it still wants it.
    if (queue.isWanted(id)) thread.postMessage({ kind: 'failed', id });
  }
}

const turn = (): Promise<void> =>
  new Promise((resolve) => {
    wakeUp.port1.onmessage = () => resolve();
    wakeUp.port2.postMessage(null);
  });
