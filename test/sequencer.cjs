/**
 * The order of spec files: jest alone knows only how long each took the last time, and on a new machine
 * nothing. What makes the demo county for others comes first, then what takes longest, so that no worker
 * is left with a long file when all others are done.
 */
const path = require('node:path');
const Sequencer = require('@jest/test-sequencer').default;

const FIRST = [
  'region-county',
  'faults',
  'region-import',
  'main-job',
  'address-index',
  'outbox-killed',
  'outbox',
  'region-disk',
  'regions-real',
  'regions',
  'two-instances',
  'night-log-made',
  'plans',
  'stops-desk',
  'office',
  'stops-technician',
  'roads-network',
];

class LongestFirst extends Sequencer {
  sort(tests) {
    const place = ({ path: file }) => {
      const at = FIRST.indexOf(path.basename(file, '.spec.ts'));
      return at < 0 ? FIRST.length : at;
    };
    // Stable: the others stay as jest has sorted them.
    return [...super.sort(tests)].sort((a, b) => place(a) - place(b));
  }
}

module.exports = LongestFirst;
