import type { AreaDto } from '@shared/contract/areas';
import type { LonLat } from '@shared/contract/common';
import { lastBack } from '@shared/domain/outage-area';
import { isInShape } from '@shared/domain/outage-shape';

/** The outage area that a point lies in, by the same rule as the server's. */
export const areaAt = (point: LonLat, areas: readonly AreaDto[]): AreaDto | null =>
  lastBack(areas.filter(({ shape }) => isInShape(point, shape)));
