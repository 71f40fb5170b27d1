import { answerRoads, type OpenRoads } from './roads-answers';
import type { RoadsRequest, RoadsResponse } from './roads-client';
import { serveRequests } from './serve-requests';

const open: OpenRoads = { engine: null };

serveRequests<RoadsRequest, RoadsResponse>((request) => answerRoads(open, request));
