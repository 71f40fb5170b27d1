/** `npm run simulate`: plays made-up storms under several ways to dispatch (server/simulate-program). */
import { runBuiltProgram } from './built-program.mjs';

await runBuiltProgram('simulate-cli', ({ simulateProgram }, args) => simulateProgram(args));
