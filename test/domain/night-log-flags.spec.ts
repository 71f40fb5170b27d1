import { readDangers } from '@shared/domain/night-log/danger-words';
import { readMedicine, readMedicineCell } from '@shared/domain/night-log/medicine-words';

describe('readMedicine', () => {
  it.each([
    ['has insulin in the door', 'insulin'],
    ['INSULIN!!', 'insulin'],
    ['husband diabetic, inslin in fridge', 'insulin'],
    ['insuline warm', 'insulin'],
    ['tiene insulina', 'insulin'],
    ['no power, insulin inside', 'insulin'],
    ['Any kids? No. Insulin in fridge.', 'insulin'],
    ['no power and insulin in fridge', 'insulin'],
    ['no insulin left after tonight', 'insulin'],
    ['no fridge for insulin', 'insulin'],
    ['insulin no longer cold', 'insulin'],
    ['no meds, insulin in butter tray', 'insulin'],
    ['no food but insulin', 'insulin'],
    ['breast milk for newborn', 'milk-or-formula'],
    ['breastmilk in fridge', 'milk-or-formula'],
    ['pumped milk', 'milk-or-formula'],
    ['frozen breast milk thawing', 'frozen-milk'],
    ['breast milk in the freezer', 'frozen-milk'],
    ['leche materna', 'milk-or-formula'],
    ['clinic, vaccines inside', 'injectable'],
    ['vacine fridge down', 'injectable'],
    ['allergy shots', 'injectable'],
    ['wife has meds in fridge', 'label-not-read'],
    ['medicine getting warm', 'label-not-read'],
    ['medicinas en la nevera', 'label-not-read'],
    ['refrigerated Rx', 'label-not-read'],
    ['son is diabetic', 'label-not-read'],
    ['keeps med in fridge', 'label-not-read'],
  ])('hears medicine in %p', (text, kind) => {
    expect(readMedicine(text)).toMatchObject({ mentioned: true, kinds: [kind] });
  });

  it.each([
    'no insulin',
    'No meds',
    'no medicine or insulin',
    'no meds/insulin',
    'no food or meds inside',
    'no meds, no insulin',
    'denies meds',
    'not insulin',
    'without insulin',
    'does not have any insulin',
    "doesn't take insulin",
    'insulin: no',
    'insulin? N',
    'meds - none',
    'meds n/a',
    'sin insulina',
    'no tiene medicinas',
    'non-medical',
    'insulated lid cracked',
    'install was last year',
    'fridge warm since 9p, milk spoiled',
    'priority: med',
    'Med Priority',
    'medium size unit',
    '',
  ])('hears none in %p', (text) => {
    expect(readMedicine(text)).toMatchObject({ mentioned: false, kinds: [] });
  });
});

describe('readMedicineCell', () => {
  it.each([
    ['Y', 'Insulin?', 'insulin'],
    ['yes', 'Meds in fridge', 'label-not-read'],
    ['X', null, 'label-not-read'],
    ['insulin', 'Meds', 'insulin'],
    ['heart pills', 'Medical', 'label-not-read'],
    ['yes - insulin', 'Meds', 'insulin'],
  ])('takes %p under %p for medicine', (cell, header, kind) => {
    expect(readMedicineCell(cell, header)).toMatchObject({ mentioned: true, kinds: [kind] });
  });

  it.each(['N', 'no', 'None', '', '-', 'n/a', 'no insulin', 'asked, none', '0'])(
    'takes %p for none',
    (cell) => {
      expect(readMedicineCell(cell, 'Insulin?')).toMatchObject({ mentioned: false });
    },
  );
});

describe('readDangers', () => {
  it.each([
    ['saw smoke from the back', ['smoke']],
    ['smells burnt', ['burning-smell']],
    ['burning smell near plug', ['burning-smell']],
    ['smells like burning plastic', ['burning-smell']],
    ['outlet is hot', ['burning-smell']],
    ['sparks when plugged in', ['sparks']],
    ['outlet sparked', ['sparks']],
    ['caught on fire briefly', ['fire']],
    ['water on floor by freezer', ['water']],
    ['basement flooded', ['water']],
    ['line down in driveway', ['downed-line']],
    ['downed power line out front', ['downed-line']],
    ['wires are down across the yard', ['downed-line']],
    ['got a shock off the door', ['shock']],
    ['smell of gas', ['gas']],
    ['generator running in garage', ['generator-indoors']],
    ['huele a quemado', ['burning-smell']],
    ['hay humo y chispas', ['smoke', 'sparks']],
    ['no smoke but sparks', ['sparks']],
    ['No. Smoke earlier', ['smoke']],
  ])('hears it in %p', (text, dangers) => {
    expect(readDangers(text)).toEqual(dangers);
  });

  it.each([
    'no smoke',
    'no smoke or burning smell',
    'no sparks/smoke',
    'denies smoke or sparks',
    'no burning smell, no smoke',
    'smoke: no',
    'no downed lines',
    'no water', // the tap is dry
    'smoked fish and ham inside',
    'water heater also off',
    'near the fire station',
    'bottled water only',
    'sin humo',
    'phone line down the hall',
    'fridge warm',
  ])('hears none in %p', (text) => {
    expect(readDangers(text)).toEqual([]);
  });
});
