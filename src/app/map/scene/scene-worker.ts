/** The thread that draws what lies above the tiles; the page only shows its pictures. */
import type { MapInk } from '../map-ink';
import { penOf } from '../scratch-canvas';
import { loadFonts } from '../tiles/load-fonts';
import { EMPTY_SCENE } from './map-scene';
import { SceneUnpacker } from './packed-scene';
import { NO_PLACES, type SceneNews, type SceneOrder } from './scene-orders';
import { isNothing, ScenePainter } from './scene-painter';

interface ThreadScope {
  onmessage: ((event: MessageEvent<SceneOrder>) => void) | null;
  postMessage(news: SceneNews, transfer?: Transferable[]): void;
}

const thread = globalThis as unknown as ThreadScope;
const canvas = new OffscreenCanvas(1, 1);
const pen = penOf(canvas);
const unpacker = new SceneUnpacker(EMPTY_SCENE);
let fontsAreThere: Promise<unknown> = Promise.resolve();
let ink: MapInk | null = null;
let painter: ScenePainter | null = null;

thread.onmessage = ({ data: order }): void => {
  if (order.kind === 'start') fontsAreThere = loadFonts(order.fonts);
  else void paint(order);
};

async function paint(order: SceneOrder & { readonly kind: 'paint' }): Promise<void> {
  const { view, pixelRatio, changes } = order;
  if (order.ink) {
    ink = order.ink;
    painter = null;
  }
  const scene = unpacker.take(changes);
  await fontsAreThere;
  if (!ink || isNothing(scene)) {
    thread.postMessage({ view, picture: null, places: NO_PLACES });
    return;
  }
  if (painter?.pixelRatio !== pixelRatio) painter = new ScenePainter(pen, ink, pixelRatio);
  // A canvas whose picture was taken away is empty; one that gets its size is, too.
  canvas.width = Math.round(view.width * pixelRatio);
  canvas.height = Math.round(view.height * pixelRatio);
  pen.setTransform(pixelRatio, 0, 0, pixelRatio, 0, 0);
  const places = painter.paint(scene, view);
  const picture = canvas.transferToImageBitmap();
  thread.postMessage({ view, picture, places }, [picture]);
}
