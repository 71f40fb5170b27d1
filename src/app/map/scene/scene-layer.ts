import type { MapInk } from '../map-ink';
import { fontFiles } from '../tiles/font-files';
import type { View } from '../world';
import type { MapScene } from './map-scene';
import { ScenePacker } from './packed-scene';
import type { SceneNews, SceneOrder, ScenePlaces } from './scene-orders';
import { ViewLayer } from './view-layer';

export interface SceneSource {
  /** What to draw; parts that have not changed are the same objects. */
  scene: MapScene;
  ink(): MapInk;
  /** A picture is on screen: what lies where on it. */
  isShown(view: View, places: ScenePlaces): void;
}

/** The scene above the tiles, drawn by a thread of its own: no frame of the page waits for it. */
export class SceneLayer extends ViewLayer {
  private readonly thread = new Worker(new URL('./scene-worker', import.meta.url), {
    type: 'module',
    name: 'scene',
  });
  private readonly packer = new ScenePacker();
  private ink: MapInk | null = null;
  protected isBusy = false;

  constructor(private readonly source: SceneSource) {
    super();
    this.thread.onmessage = ({ data }: MessageEvent<SceneNews>) => this.hear(data);
    this.order({ kind: 'start', fonts: fontFiles('IBM Plex Sans') });
  }

  /** Ends the thread; the layer is of no more use. */
  end(): void {
    this.thread.terminate();
  }

  protected override draw(view: View, pixelRatio: number): void {
    const ink = this.source.ink();
    this.isBusy = true;
    this.order({
      kind: 'paint',
      view,
      pixelRatio,
      ink: ink === this.ink ? null : ink,
      changes: this.packer.changesTo(this.source.scene),
    });
    this.ink = ink;
  }

  private hear({ view, picture, places }: SceneNews): void {
    this.isBusy = false;
    if (this.show(view, picture !== null)) {
      if (picture) this.canvas.getContext('bitmaprenderer')?.transferFromImageBitmap(picture);
      this.source.isShown(view, places);
    } else {
      // Another zoom has begun meanwhile, or has ended: a picture of the one before is of no use.
      picture?.close();
      this.refresh();
    }
    this.wake();
  }

  private order(order: SceneOrder): void {
    this.thread.postMessage(order);
  }
}
