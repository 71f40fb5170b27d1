import { expect, test, type Page } from '@playwright/test';
import { enter } from './people';

const LEAST_ZOOM = 9;
const MOST_ZOOM = 19;
/** Close enough for the water beside the region to fill the window. */
const SEA_ZOOM = 14;

interface Ground {
  /** Tiles in the window that nobody has painted yet. */
  readonly unpainted: number;
  /** Of a raster over the window, the points that lie on no tile or on nothing. */
  readonly blank: number;
  readonly points: number;
  /** The commonest colours, as "r,g,b", with their counts. */
  readonly colors: readonly (readonly [string, number])[];
}

/** What the tiles show, read from their own pixels at a raster of points over the map. */
const readGround = (page: Page): Promise<Ground> =>
  page.evaluate(() => {
    const map = document.querySelector('.leaflet-container')!.getBoundingClientRect();
    const tiles = [...document.querySelectorAll<HTMLCanvasElement>('canvas.leaflet-tile')]
      .map((canvas) => ({ canvas, box: canvas.getBoundingClientRect() }))
      .filter(
        ({ box }) =>
          box.right > map.left &&
          box.left < map.right &&
          box.bottom > map.top &&
          box.top < map.bottom,
      );
    // Leaflet marks a tile as loaded once its picture has been handed over.
    const painted = tiles.filter(({ canvas }) => canvas.classList.contains('leaflet-tile-loaded'));
    const pixels = new Map(
      painted.map(({ canvas }) => {
        const copy = document.createElement('canvas');
        copy.width = copy.height = 256;
        const ctx = copy.getContext('2d')!;
        ctx.drawImage(canvas, 0, 0, 256, 256);
        return [canvas, ctx.getImageData(0, 0, 256, 256).data] as const;
      }),
    );
    const counts = new Map<string, number>();
    let blank = 0;
    let points = 0;
    for (let x = map.left + 3; x < map.right - 3; x += 12)
      for (let y = map.top + 3; y < map.bottom - 3; y += 12) {
        points++;
        const tile = painted.find(
          ({ box }) => x >= box.left && x < box.right && y >= box.top && y < box.bottom,
        );
        const data = tile && pixels.get(tile.canvas);
        if (!tile || !data) {
          blank++;
          continue;
        }
        const column = Math.min(255, Math.floor(((x - tile.box.left) / tile.box.width) * 256));
        const row = Math.min(255, Math.floor(((y - tile.box.top) / tile.box.height) * 256));
        const [r, g, b, alpha] = data.slice(4 * (row * 256 + column), 4 * (row * 256 + column) + 4);
        if (alpha !== 255) blank++;
        const key = `${r},${g},${b}`;
        counts.set(key, (counts.get(key) ?? 0) + 1);
      }
    return {
      unpainted: tiles.length - painted.length,
      blank,
      points,
      colors: [...counts].sort((a, b) => b[1] - a[1]).slice(0, 6),
    };
  });

/** Until the map stands still: a key that comes while it zooms would be lost. */
const atRest = (page: Page): Promise<void> =>
  page.evaluate(async () => {
    const frame = (): Promise<unknown> => new Promise((drawn) => requestAnimationFrame(drawn));
    // A zoom that a key has asked for begins with the next frame.
    await frame();
    await frame();
    while (document.querySelector('.leaflet-zoom-anim')) await frame();
  });

/** Until every point of the window has been painted. */
async function settledGround(page: Page): Promise<Ground> {
  await atRest(page);
  let ground = await readGround(page);
  const isPainted = async (): Promise<boolean> => {
    ground = await readGround(page);
    return ground.unpainted + ground.blank === 0;
  };
  if (ground.unpainted + ground.blank > 0)
    await expect.poll(isPainted, { intervals: [50, 100] }).toBe(true);
  return ground;
}

const LAND = '244,243,238';
const SEA = '211,223,228';

test('the map has ground at every zoom, in the region and beside it', async ({ browser }) => {
  const window = { viewport: { width: 1600, height: 900 }, colorScheme: 'light' } as const;
  // Entered by another page: what the board complains of from its first moment counts.
  const page = await enter(browser, ({ role }) => role === 'dispatcher', window, '/password');
  const faults: string[] = [];
  page.on('console', (message) => {
    if (message.type() === 'error') faults.push(message.text());
  });
  await page.goto('/board');
  const map = page.getByRole('application', { name: /Map of/ });
  await map.focus();
  for (let i = LEAST_ZOOM; i <= MOST_ZOOM; i++) await map.press('-');
  for (let zoom = LEAST_ZOOM; zoom <= MOST_ZOOM; zoom++) {
    const { colors, points } = await settledGround(page);
    const share = (color: string): number =>
      (colors.find(([one]) => one === color)?.[1] ?? 0) / points;
    // Far out it is the county and the sea around it; close by, whatever lies in the middle.
    if (zoom <= 10) {
      expect(share(LAND), `land at zoom ${String(zoom)}`).toBeGreaterThan(0.02);
      expect(share(SEA), `sea at zoom ${String(zoom)}`).toBeGreaterThan(0.3);
    }
    await map.press('+');
  }

  // Out over the sea, beyond every tile there is, the ground is water and not nothing.
  await page.goto('/board');
  await map.focus();
  await settledGround(page);
  for (let i = 0; i < 4; i++) {
    await map.press('+');
    await settledGround(page);
  }
  const box = (await map.boundingBox())!;
  await expect
    .poll(async () => {
      await page.mouse.move(box.x + 40, box.y + box.height / 2);
      await page.mouse.down();
      await page.mouse.move(box.x + box.width - 40, box.y + box.height / 2, { steps: 5 });
      await page.mouse.up();
      const { colors, points } = await readGround(page);
      return colors[0]?.[0] === SEA && colors[0][1] === points;
    })
    .toBe(true);
  for (let zoom = SEA_ZOOM; zoom <= MOST_ZOOM; zoom++) {
    const { colors } = await settledGround(page);
    expect(colors[0]?.[0], `beside the region at zoom ${String(zoom)}`).toBe(SEA);
    await map.press('+');
  }
  expect(faults).toEqual([]);
});
