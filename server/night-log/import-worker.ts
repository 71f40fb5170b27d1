import { serveRequests } from '../workers/serve-requests';
import { readLog, type LogRead, type LogToRead } from './read-log';

serveRequests<LogToRead, LogRead>(readLog);
