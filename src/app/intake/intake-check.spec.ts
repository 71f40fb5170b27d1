/** @jest-environment node */
import { TakeCall } from '@shared/contract/calls';
import { HOUR_MS } from '@shared/domain/instant';
import { checkIntake, errorsOfPointers } from './intake-check';
import {
  blankDraft,
  changeCompartment,
  type IntakeDraft,
  isIntakeDraft,
  newUnit,
  timesInForce,
  withMedicine,
} from './intake-draft';

const ZONE = 'America/New_York';
const AREA_CODE = '252';
const NOW = Date.UTC(2026, 8, 3, 6, 30);
const newId = () => crypto.randomUUID();

const aDraft = (part: Partial<IntakeDraft> = {}): IntakeDraft => {
  const blank = blankDraft(newId);
  return {
    ...blank,
    phone: '(252) 555-0142',
    name: ' Ada Marsh ',
    address: { text: '12 Tern Court', unitNo: ' 3 ', lonLat: [-52.3, 34], kind: 'rooftop' },
    times: {
      ...blank.times,
      from: 'caller',
      outText: '4 h ago',
      outAt: NOW - 4 * HOUR_MS,
      backText: '1 h ago',
      backAt: NOW - HOUR_MS,
    },
    units: [newUnit('fridge-freezer', newId())],
    ...part,
  };
};

const errorsOf = (part: Partial<IntakeDraft>) => {
  const checked = checkIntake(aDraft(part), NOW, ZONE, AREA_CODE);
  return checked.ready ? {} : checked.errors;
};

describe('checkIntake', () => {
  it('makes a command that the contract accepts as it is', () => {
    const checked = checkIntake(aDraft(), NOW, ZONE, AREA_CODE);
    if (!checked.ready) throw new Error(JSON.stringify(checked.errors));
    expect(TakeCall.parse(checked.body)).toEqual(checked.body);
    expect(checked.body).toMatchObject({
      phone: '+12525550142',
      name: 'Ada Marsh',
      address: { unitNo: '3' },
      powerOutAt: NOW - 4 * HOUR_MS,
      powerBackAt: NOW - HOUR_MS,
      timesFrom: 'caller',
    });
  });

  it('makes one for every kind of unit, with medicine kept in it', () => {
    for (const kind of ['refrigerator', 'upright-freezer', 'walk-in', 'medicine-fridge'] as const) {
      const unit = withMedicine(newUnit(kind, newId()), true);
      const checked = checkIntake(aDraft({ units: [unit] }), NOW, ZONE, AREA_CODE);
      expect(checked.ready && TakeCall.safeParse(checked.body).success).toBe(true);
    }
  });

  it('says of every missing field what is wanted, all at once', () => {
    const checked = checkIntake(blankDraft(newId), NOW, ZONE, AREA_CODE);
    expect(checked.ready ? [] : Object.keys(checked.errors).sort()).toEqual([
      'address',
      'back',
      'name',
      'out',
      'phone',
      'units',
    ]);
  });

  it('keeps "4 h ago" at the moment at which it was typed', () => {
    const later = checkIntake(aDraft(), NOW + 3 * HOUR_MS, ZONE, AREA_CODE);
    expect(later.ready && later.body.powerOutAt).toBe(NOW - 4 * HOUR_MS);
  });

  it('refuses power that came back before it went', () => {
    const times = { ...aDraft().times, backAt: NOW - 5 * HOUR_MS };
    expect(errorsOf({ times })).toEqual({ back: 'That is before the power went.' });
  });

  it('passes on in which way a time cannot be read', () => {
    const times = { ...aDraft().times, outText: 'when it got dark', outAt: null };
    expect(errorsOf({ times })).toEqual({ out: 'Write it as 4 h ago, 22:30 or yesterday 22:30.' });
  });

  it('takes power that is still out', () => {
    const times = { ...aDraft().times, stillOut: true, backAt: null, backText: '' };
    const checked = checkIntake(aDraft({ times }), NOW, ZONE, AREA_CODE);
    expect(checked.ready && checked.body.powerBackAt).toBeNull();
  });
});

describe('timesInForce', () => {
  const area = {
    id: newId(),
    stormId: newId(),
    name: 'Northshore',
    shape: [],
    outAt: NOW - 9 * HOUR_MS,
    backAt: null,
    version: 1,
  };

  it('follows the area until the caller has said something else', () => {
    const blank = blankDraft(newId).times;
    expect(timesInForce(blank, area)).toMatchObject({
      from: 'area',
      outAt: area.outAt,
      stillOut: true,
    });
    expect(timesInForce(aDraft().times, area)).toEqual(aDraft().times);
  });

  it('never claims that times come from an area that is not there', () => {
    expect(timesInForce(blankDraft(newId).times, null).from).toBe('caller');
  });
});

describe('errorsOfPointers', () => {
  it('puts what the server says beside the field that it is about', () => {
    const complaints = new Map([
      ['#/address/text', 'Too short.'],
      ['#/units/0/compartments/1/fill', 'Between 0 and 1.'],
      ['#/powerOutAt', 'Too long ago.'],
      ['#/commandId', 'Not an id.'],
    ]);
    expect(errorsOfPointers(complaints)).toEqual({
      address: 'Too short.',
      units: 'Between 0 and 1.',
      out: 'Too long ago.',
      form: 'Not an id.',
    });
  });
});

describe('isIntakeDraft', () => {
  it('takes back its own draft from storage and nothing else', () => {
    const unit = changeCompartment(newUnit('chest-freezer', newId()), 'freezer', { fill: 0.5 });
    const draft = aDraft({ units: [unit] });
    expect(isIntakeDraft(JSON.parse(JSON.stringify(draft)))).toBe(true);
    expect(isIntakeDraft({ phone: '252' })).toBe(false);
    expect(isIntakeDraft(null)).toBe(false);
  });
});
