import type { KeyAction } from '../core/keys';

/** What the keys of the routes screen do; the page says how. */
export interface RoutesActs {
  readonly propose: () => void;
  readonly publish: () => void;
  readonly discard: () => void;
  readonly tryWeights: () => void;
  readonly hasPlan: () => boolean;
  readonly mayPublish: () => boolean;
  readonly lock: () => void;
  readonly move: () => void;
  readonly pull: () => void;
  readonly mayMove: () => boolean;
  readonly mayPull: () => boolean;
  readonly add: () => void;
  readonly toUnplanned: () => void;
  readonly toRoutes: () => void;
  readonly zoom: (step: number) => void;
  readonly showNow: () => void;
}

export function routesKeys(acts: RoutesActs): KeyAction[] {
  const proposal = 'Proposal';
  const stops = 'Stops';
  const sight = 'Sight';
  const { hasPlan, mayPublish, mayMove, mayPull } = acts;
  return [
    { keys: 'r', does: 'Propose routes', scope: proposal, run: acts.propose },
    {
      keys: 'Ctrl+Enter',
      does: 'Publish the proposal',
      scope: proposal,
      when: mayPublish,
      run: acts.publish,
    },
    { keys: 'x', does: 'Discard the proposal', scope: proposal, when: hasPlan, run: acts.discard },
    { keys: 'v', does: 'Try other weights', scope: proposal, run: acts.tryWeights },
    { keys: 'l', does: 'Lock the stop, or free it', scope: stops, when: mayMove, run: acts.lock },
    {
      keys: 'm',
      does: 'Move the stop to another place or technician',
      scope: stops,
      when: mayMove,
      run: acts.move,
    },
    { keys: 'p', does: 'Pull the stop off its route', scope: stops, when: mayPull, run: acts.pull },
    { keys: 'a', does: 'Put the chosen call on a route', scope: stops, run: acts.add },
    { keys: 's', does: 'Go to the routes', scope: sight, run: acts.toRoutes },
    { keys: 'w', does: 'Go to the calls on no route', scope: sight, run: acts.toUnplanned },
    { keys: '+', does: 'More room for each hour', scope: sight, run: () => acts.zoom(1) },
    { keys: '-', does: 'More hours in sight', scope: sight, run: () => acts.zoom(-1) },
    { keys: 't', does: 'Show the present time', scope: sight, run: acts.showNow },
  ];
}
