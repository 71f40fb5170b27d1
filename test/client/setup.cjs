// Specs of plain functions say `@jest-environment node`; they need neither a page nor Angular,
// and making both took most of their time.
if (typeof document !== 'undefined')
  require('jest-preset-angular/setup-env/zoneless').setupZonelessTestEnv();
