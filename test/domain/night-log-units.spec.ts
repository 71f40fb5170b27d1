import { readUnits } from '@shared/domain/night-log/read-units';

const kinds = (cell: string, message = ''): string =>
  readUnits(cell, message)
    .units.map(({ kind }) => kind)
    .join(' + ');

describe('readUnits', () => {
  it.each([
    ['Fridge', 'fridge-freezer'],
    ['FRIDGE', 'fridge-freezer'],
    ['frig', 'fridge-freezer'],
    ['Refrig.', 'fridge-freezer'],
    ['refridgerator', 'fridge-freezer'],
    ['refirgerator', 'fridge-freezer'],
    ['fidge', 'fridge-freezer'],
    ['REF', 'fridge-freezer'],
    ['nevera', 'fridge-freezer'],
    ['Fridge/Frzr', 'fridge-freezer'],
    ['fridge/freezer', 'fridge-freezer'],
    ['fridge freezer combo', 'fridge-freezer'],
    ['side by side', 'fridge-freezer'],
    ['SxS', 'fridge-freezer'],
    ['fridge w/ bottom freezer', 'fridge-freezer'],
    ['french door fridge', 'fridge-freezer'],
    ['freezer', 'upright-freezer'],
    ['frz', 'upright-freezer'],
    ['Upright freezer', 'upright-freezer'],
    ['stand up frzr', 'upright-freezer'],
    ['Freezer (upright)', 'upright-freezer'],
    ['chest freezer', 'chest-freezer'],
    ['Chest', 'chest-freezer'],
    ['deep freeze', 'chest-freezer'],
    ['deep frz', 'chest-freezer'],
    ['Freezer - chest', 'chest-freezer'],
    ['walk-in cooler', 'walk-in'],
    ['Walkin', 'walk-in'],
    ['reach in', 'walk-in'],
    ['med fridge', 'medicine-fridge'],
    ['vaccine refrigerator', 'medicine-fridge'],
    ['mini fridge', 'refrigerator'],
    ['wine cooler', 'refrigerator'],
    ['fridge and chest freezer in garage', 'fridge-freezer + chest-freezer'],
    ['frig + deep frz', 'fridge-freezer + chest-freezer'],
    ['fridge, upright', 'fridge-freezer + upright-freezer'],
    ['Fridge & Freezer', 'fridge-freezer + upright-freezer'],
    ['2 fridges', 'fridge-freezer + fridge-freezer'],
    ['chest freezer x2', 'chest-freezer + chest-freezer'],
    ['2x chest freezer', 'chest-freezer + chest-freezer'],
    ['two freezers', 'upright-freezer + upright-freezer'],
    ['kitchen fridge, garage fridge', 'fridge-freezer + fridge-freezer'],
    ['nevera y congelador', 'fridge-freezer + upright-freezer'],
    ['refri y congelador horizontal', 'fridge-freezer + chest-freezer'],
    ['two freezers (1 upright, 1 chest)', 'upright-freezer + chest-freezer'],
    ['larder fridge', 'refrigerator'],
    ['VAX FRIDGE', 'medicine-fridge'],
    ['washer', ''],
    ['', ''],
  ])('reads the appliance cell %p as %p', (cell, expected) => {
    expect(kinds(cell)).toBe(expected);
  });

  it.each([
    ['Fridge', 'fridge warm, milk spoiled', 'fridge-freezer'],
    ['Fridge', 'freezer part still frozen', 'fridge-freezer'],
    ['Fridge', 'freezer thawing fast', 'fridge-freezer'],
    ['Fridge', 'also chest freezer in garage', 'fridge-freezer + chest-freezer'],
    ['Fridge', 'second fridge in garage also down', 'fridge-freezer + fridge-freezer'],
    ['Freezer', 'chest type, lid shut', 'upright-freezer'],
    ['Freezer', 'it is a chest freezer, full', 'chest-freezer'],
    ['Chest freezer', 'freezer full of venison', 'chest-freezer'],
    ['Freezer', 'fridge ok', 'upright-freezer'],
    ['Freezer', 'fridge is fine, freezer not', 'upright-freezer'],
    ['', 'fridge not cooling, freezer warm', 'fridge-freezer'],
    ['', 'fridge and freezer both dead', 'fridge-freezer + upright-freezer'],
    ['', 'chest freezer in garage quit, fridge ok', 'chest-freezer'],
    ['', 'refrigerator wont start since power came back', 'fridge-freezer'],
    ['', 'food in coolers, fridge dead', 'fridge-freezer'],
    ['', 'walk in down, 44 degrees', 'walk-in'],
    ['', 'meat getting warm', ''],
    ['', 'washer not draining', ''],
    ['', 'no separate freezer, fridge only', 'refrigerator'],
    ['', 'freezer burn on everything', ''],
    ['', 'lives on Fringe Ave near the bridge', ''],
    ['', 'fridge is not working', 'fridge-freezer'],
    ['', 'fridge running but warm', 'fridge-freezer'],
    ['', 'fridge running constantly', 'fridge-freezer'],
  ])('with the cell %p and the message %p reads %p', (cell, message, expected) => {
    expect(kinds(cell, message)).toBe(expected);
  });

  it('says what it assumed', () => {
    expect(readUnits('freezer', '').units).toEqual([
      { kind: 'upright-freezer', said: 'freezer', assumed: true },
    ]);
    expect(readUnits('fridge and freezer', '').doubts).toHaveLength(1);
  });

  it('names the other appliance', () => {
    expect(readUnits('Washer', '')).toMatchObject({ units: [], other: 'washer' });
  });
});
