import type { MapInk } from '../map-ink';
import { fontFiles } from '../tiles/font-files';
import type { View } from '../world';
import { EMPTY_SCENE, type MapScene } from './map-scene';
import { ScenePacker } from './packed-scene';
import type { SceneNews, SceneOrder, ScenePlaces } from './scene-orders';
import { ViewLayer } from './view-layer';

export interface SceneSource {
  /** What to draw; parts that have not changed are the same objects. */
  scene: MapScene;
  ink(): MapInk;
  /** A picture of some scene is on screen: what lies where on it. */
  isShown(view: View, scene: MapScene, places: ScenePlaces): void;
}

/** The scene above the tiles, drawn by a thread of its own: no frame of the page waits for it. */
export class SceneLayer extends ViewLayer {
  private readonly thread = new Worker(new URL('./scene-worker', import.meta.url), {
    type: 'module',
    name: 'scene',
  });
  private readonly packer = new ScenePacker();
  private ink: MapInk | null = null;
  /** What is being drawn, or was drawn last. */
  private scene: MapScene = EMPTY_SCENE;
  protected isBusy = false;

  /** @param afterwards is called whenever another picture is on screen */
  constructor(
    private readonly source: SceneSource,
    private readonly afterwards: () => void,
  ) {
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
    this.scene = this.source.scene;
    this.isBusy = true;
    this.order({
      kind: 'paint',
      view,
      pixelRatio,
      ink: ink === this.ink ? null : ink,
      changes: this.packer.changesTo(this.scene),
    });
    this.ink = ink;
  }

  private hear({ view, picture, places }: SceneNews): void {
    this.isBusy = false;
    if (this.show(view, picture !== null)) {
      if (picture) this.canvas.getContext('bitmaprenderer')?.transferFromImageBitmap(picture);
      this.source.isShown(view, this.scene, places);
      this.afterwards();
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
