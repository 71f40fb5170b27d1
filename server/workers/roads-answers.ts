import type { RoadsRequest, RoadsResponse } from './roads-client';
import { RoadsEngine } from './roads-engine';

/** What a thread keeps between two questions: the roads of the region that was asked about last. */
export interface OpenRoads {
  engine: { readonly name: string; readonly roads: RoadsEngine } | null;
}

export function answerRoads(open: OpenRoads, request: RoadsRequest): RoadsResponse {
  const { name, file, question, conditions } = request;
  // Another region is in use: what was worked out for the one before is of no use any more.
  if (open.engine?.name !== name) open.engine = { name, roads: new RoadsEngine(file) };
  const { roads } = open.engine;
  switch (question.kind) {
    case 'times':
      return { kind: 'times', times: roads.times(conditions) };
    case 'matrix':
      return { kind: 'matrix', matrix: roads.matrix(question.points, conditions) };
    case 'fan':
      return { kind: 'fan', fan: roads.fan(question.point, question.others, conditions) };
    case 'path':
      return { kind: 'path', legs: roads.path(question.stops, conditions) };
  }
}
