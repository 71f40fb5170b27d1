import { readConfig } from './config';
import { connect } from './db/connect';
import { brokenInvariants, INVARIANTS } from './invariants/checks';

/** `node dist/server/check-invariants.js`: exit code 1 when the data breaks a rule. */
async function main(): Promise<void> {
  const sequelize = connect(readConfig(process.env).database);
  const broken = await brokenInvariants(sequelize);
  await sequelize.close();
  for (const { invariant, found } of broken) process.stdout.write(`${invariant}\n  ${found}\n`);
  process.stdout.write(
    broken.length === 0
      ? `All ${String(INVARIANTS.length)} invariants hold.\n`
      : `${String(broken.length)} breaches.\n`,
  );
  process.exitCode = broken.length === 0 ? 0 : 1;
}

void main();
