import type { Part, Skill } from '../skills';

export const CAUSE_IDS = [
  'area-outage',
  'service-fault',
  'open-neutral',
  'wiring-fault',
  'tripped-breaker',
  'tripped-gfci',
  'dead-outlet',
  'loose-plug',
  'damaged-cord',
  'short-in-unit',
  'wet-electrics',
  'setting-off',
  'start-delay',
  'cold-surroundings',
  'catching-up',
  'starter',
  'compressor',
  'inverter-board',
  'control-board',
  'thermostat',
  'evaporator-fan',
  'condenser-fan',
  'defrost',
  'door-gasket',
  'sealed-system',
] as const;
export type CauseId = (typeof CAUSE_IDS)[number];

interface CauseFacts {
  readonly words: string;
  /** What to have on the van if it is this. */
  readonly parts: readonly Part[];
  /** What the visit asks of the technician if it is this. */
  readonly skills: readonly Skill[];
}

export const CAUSES: Readonly<Record<CauseId, CauseFacts>> = {
  'area-outage': { words: 'The area has no steady power', parts: [], skills: [] },
  'service-fault': { words: 'The supply to this home is out', parts: [], skills: [] },
  'open-neutral': { words: 'A broken supply wire (open neutral)', parts: [], skills: [] },
  'wiring-fault': { words: 'A fault in the house wiring', parts: [], skills: [] },
  'tripped-breaker': { words: 'A tripped breaker', parts: [], skills: [] },
  'tripped-gfci': { words: 'A tripped GFCI outlet', parts: [], skills: [] },
  'dead-outlet': { words: 'A dead outlet', parts: [], skills: [] },
  'loose-plug': { words: 'A loose plug', parts: [], skills: [] },
  'damaged-cord': {
    words: 'A damaged cord or plug',
    parts: ['power-cord'],
    skills: ['electrical'],
  },
  'short-in-unit': {
    words: 'A short to ground inside the unit',
    parts: ['power-cord', 'defrost-heater', 'run-capacitor'],
    skills: ['electrical'],
  },
  'wet-electrics': { words: 'Wet electrics', parts: [], skills: ['electrical'] },
  'setting-off': { words: 'It was set to off or demo', parts: [], skills: [] },
  'start-delay': { words: 'A start delay, or electronics that hung', parts: [], skills: [] },
  'cold-surroundings': { words: 'A room too cold for it to restart', parts: [], skills: [] },
  'catching-up': { words: 'It is still getting cold again', parts: [], skills: [] },
  starter: {
    words: 'The start relay, overload or run capacitor',
    parts: ['start-relay', 'overload', 'run-capacitor'],
    skills: [],
  },
  compressor: { words: 'The compressor', parts: [], skills: ['sealed-system'] },
  'inverter-board': {
    words: 'The inverter board',
    parts: ['inverter-board'],
    skills: ['electrical'],
  },
  'control-board': {
    words: 'The control board',
    parts: ['control-board'],
    skills: ['electrical'],
  },
  thermostat: { words: 'The thermostat', parts: ['thermostat'], skills: [] },
  'evaporator-fan': {
    words: 'The fan that moves the cold air',
    parts: ['evaporator-fan'],
    skills: [],
  },
  'condenser-fan': {
    words: 'The fan that carries the warmth away',
    parts: ['condenser-fan'],
    skills: [],
  },
  defrost: { words: 'The defrost heater', parts: ['defrost-heater'], skills: [] },
  'door-gasket': { words: 'The door gasket', parts: ['door-gasket'], skills: [] },
  'sealed-system': {
    words: 'A leak or blockage in the sealed system',
    parts: [],
    skills: ['sealed-system'],
  },
};

export const LIKELIHOODS = ['likely', 'possible', 'less-likely'] as const;
export type Likelihood = (typeof LIKELIHOODS)[number];
export const LIKELIHOOD_WORDS: Readonly<Record<Likelihood, string>> = {
  likely: 'Likely',
  possible: 'Possible',
  'less-likely': 'Less likely',
};

export interface LikelyCause {
  readonly cause: CauseId;
  readonly likelihood: Likelihood;
  readonly why: string;
  readonly source: string;
}
