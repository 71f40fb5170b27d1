/** `npm run plan`: plans routes for other programs; problems in, plans out (server/plan-program). */
import { runBuiltProgram } from './built-program.mjs';

await runBuiltProgram('plan-cli', ({ planProgram }, args) => planProgram(args));
