import type { LonLat } from './osm-extract';

/**
 * Joins lines of one kind that meet end to end, so that a road cut into many ways is drawn and
 * labelled as one. Where three or more meet, which pair is joined is a matter of order only.
 */
export function joinLines<T>(
  lines: readonly { readonly kind: string; readonly points: LonLat[]; readonly data: T }[],
): { points: LonLat[]; data: T }[] {
  const ends = new Map<string, number[]>();
  const keyOf = (kind: string, [lon, lat]: LonLat): string => `${lon},${lat},${kind}`;
  lines.forEach(({ kind, points }, i) => {
    for (const end of [points[0]!, points[points.length - 1]!]) {
      const key = keyOf(kind, end);
      const known = ends.get(key);
      if (known) known.push(i);
      else ends.set(key, [i]);
    }
  });
  const used = new Set<number>();
  const result: { points: LonLat[]; data: T }[] = [];
  lines.forEach((line, i) => {
    if (used.has(i)) return;
    used.add(i);
    let points = line.points;
    for (let pass = 0; pass < 2; pass++) {
      for (;;) {
        const end = points[points.length - 1]!;
        const next = ends.get(keyOf(line.kind, end))?.find((other) => !used.has(other));
        if (next === undefined) break;
        used.add(next);
        const more = lines[next]!.points;
        const isForward = more[0]![0] === end[0] && more[0]![1] === end[1];
        points = [...points, ...(isForward ? more : [...more].reverse()).slice(1)];
      }
      points = [...points].reverse();
    }
    result.push({ points, data: line.data });
  });
  return result;
}
