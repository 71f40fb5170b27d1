import { RoadsEngine } from './roads-engine';
import type { RoadsRequest, RoadsResponse } from './roads-client';
import { serveRequests } from './serve-requests';

let open: { readonly name: string; readonly engine: RoadsEngine } | null = null;

/** The engine of the region that is asked about; made anew when that has become another one. */
function engineFor({ name, file }: RoadsRequest): RoadsEngine {
  if (open?.name !== name) open = { name, engine: new RoadsEngine(file) };
  return open.engine;
}

function answer(request: RoadsRequest): RoadsResponse {
  const engine = engineFor(request);
  const { question, conditions } = request;
  switch (question.kind) {
    case 'times':
      return { kind: 'times', times: engine.times(conditions) };
    case 'matrix':
      return { kind: 'matrix', matrix: engine.matrix(question.points, conditions) };
    case 'fan':
      return { kind: 'fan', fan: engine.fan(question.point, question.others, conditions) };
    case 'path':
      return { kind: 'path', legs: engine.path(question.stops, conditions) };
  }
}

serveRequests(answer);
