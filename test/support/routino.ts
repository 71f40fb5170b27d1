import { execFile, spawnSync } from 'node:child_process';
import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { CLASS_SPEED_KMH } from '@shared/domain/roads/road-class';
import type { LonLat } from '@shared/domain/travel/great-circle';

const run = promisify(execFile);

/** Whether the router is on this machine; it is a program of its own and no part of this one. */
export const hasRoutino = (): boolean =>
  spawnSync('routino-router', ['--help']).error === undefined;

const CLASSES = [
  'motorway',
  'trunk',
  'primary',
  'secondary',
  'tertiary',
  'unclassified',
  'residential',
  'service',
] as const;

/** The same speeds, every class liked alike, one-way streets and turns obeyed. */
function profile(): string {
  const undriven = ['track', 'cycleway', 'path', 'steps'];
  const speeds = CLASSES.map((name) => `<speed highway="${name}" kph="${CLASS_SPEED_KMH[name]}"/>`);
  const liked = CLASSES.map((name) => `<preference highway="${name}" percent="100"/>`);
  const neutral = ['paved', 'multilane', 'bridge', 'tunnel', 'footroute', 'bicycleroute'].map(
    (name) => `<property type="${name}" percent="50"/>`,
  );
  return `<?xml version="1.0"?>
<routino-profiles><profile name="van" transport="motorcar">
<speeds>${speeds.join('')}${undriven.map((n) => `<speed highway="${n}" kph="0"/>`).join('')}
<speed highway="ferry" kph="10"/></speeds>
<preferences>${liked.join('')}${undriven.map((n) => `<preference highway="${n}" percent="0"/>`).join('')}
<preference highway="ferry" percent="0"/></preferences>
<properties>${neutral.join('')}</properties>
<restrictions><oneway obey="1"/><turns obey="1"/><weight limit="0.0"/><height limit="0.0"/>
<width limit="0.0"/><length limit="0.0"/></restrictions>
</profile></routino-profiles>`;
}

/** The router of an extract, made in a folder. */
export class Routino {
  private constructor(private readonly folder: string) {}

  static async of(pbf: string, folder: string): Promise<Routino> {
    writeFileSync(join(folder, 'van.xml'), profile());
    const tagging = '/usr/share/routino/tagging.xml';
    await run('planetsplitter', [
      `--dir=${folder}`,
      '--prefix=region',
      `--tagging=${tagging}`,
      '--prune-none',
      pbf,
    ]);
    return new Routino(folder);
  }

  /** Minutes, in tenths, of the quickest drive between two nodes; null when it finds none. */
  async minutes(from: LonLat, to: LonLat): Promise<number | null> {
    const { stdout } = await run(
      'routino-router',
      [
        `--dir=${this.folder}`,
        '--prefix=region',
        `--profiles=${join(this.folder, 'van.xml')}`,
        '--translations=/usr/share/routino/translations.xml',
        '--profile=van',
        '--quickest',
        '--exact-nodes-only',
        '--quiet',
        '--output-text-all',
        '--output-stdout',
        `--lon1=${from[0]}`,
        `--lat1=${from[1]}`,
        `--lon2=${to[0]}`,
        `--lat2=${to[1]}`,
      ],
      { cwd: this.folder, maxBuffer: 1e8 },
    ).catch(() => ({ stdout: '' }));
    const rows = stdout.split('\n').filter((line) => line !== '' && !line.startsWith('#'));
    const total = rows.at(-1)?.split('\t')[7];
    return total === undefined ? null : Number(total);
  }
}
