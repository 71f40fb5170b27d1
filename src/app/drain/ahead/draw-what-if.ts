import type { OutlookDto, WhatIfDto } from '@shared/contract/forecast';
import { dayTime } from '../../core/zone';
import type { Draw } from '../chart-canvas';
import { bandOf, type Line, options } from '../draw-drain';

/** The forecast as it is, thin, and with the change, with its band. */
export function drawWhatIf(answer: WhatIfDto, zone: string, isNarrow: boolean): Draw {
  return (ink) => {
    const { asItIs, changed } = answer;
    const label = (name: string, { emptyAt }: OutlookDto): string =>
      emptyAt.middle === null ? `${name}: →` : `${name} ${dayTime(emptyAt.middle, zone)}`;
    const before: Line = {
      data: asItIs.curve.map(({ at, open }) => ({ x: at, y: open.middle })),
      borderColor: ink.soft,
      backgroundColor: ink.soft,
      borderWidth: 1.75,
      pointStyle: 'triangle',
      pointRadius: ({ dataIndex }: { dataIndex: number }) =>
        dataIndex % Math.max(1, Math.round(asItIs.curve.length / 10)) === 0 ? 4 : 0,
      pointHitRadius: 12,
      label: 'open as it is',
      endLabel: label('as it is', asItIs),
    };
    const line = (key: 'low' | 'middle' | 'high') =>
      changed.curve.map(({ at, open }) => ({ x: at, y: open[key] }));
    const lines = { low: line('low'), middle: line('middle'), high: line('high'), isCut: false };
    return {
      type: 'line',
      data: { datasets: [...bandOf(lines, ink, label('changed', changed)), before] },
      options: options({
        ink,
        zone,
        from: answer.at,
        to: Math.max(asItIs.curve.at(-1)?.at ?? 0, changed.curve.at(-1)?.at ?? 0),
        isNarrow,
        roomRight: 132,
        value: (amount) => String(Math.round(amount)),
        tick: (amount) => String(amount),
      }),
    };
  };
}
