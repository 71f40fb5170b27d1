/** `npm run drill`: plays a made-up storm into the running demo (server/drill-program). */
import { runBuiltProgram } from './built-program.mjs';
import { dataFolder } from './paths.mjs';

await runBuiltProgram('drill-cli', ({ drillProgram }, args) => drillProgram(args, dataFolder));
