/** @jest-environment node */
import { ChangeSettings, Settings } from '@shared/contract/office';
import { aMe } from '../core/testing';
import { DRIVING_HOURS } from '@shared/domain/roads/driving-hours';
import {
  NOT_IN_FIELDS,
  SETTING_FIELDS,
  settingFault,
  settingText,
  settingValue,
} from './settings-fields';

const settings = aMe().settings;

describe('the settings form', () => {
  it('has a field for every setting of the contract', () => {
    const keys = Object.keys(Settings.shape).filter(
      (key) => !(NOT_IN_FIELDS as readonly string[]).includes(key),
    );
    expect(SETTING_FIELDS.map(({ key }) => key).sort()).toEqual(keys.sort());
  });

  it.each(
    SETTING_FIELDS.filter(({ kind }) => kind === 'number').map((field) => [field.key, field]),
  )('draws the bounds of %s where the contract draws them', (key, field) => {
    const { least = NaN, most = NaN } = field;
    const fits = (value: number): boolean =>
      ChangeSettings.safeParse({
        commandId: '7a3f3f0e-7f5e-4a53-9a3f-2f1a2b3c4d5e',
        version: 1,
        [key as string]: value,
      }).success;
    const step = field.isWhole ? 1 : 0.01;
    for (const value of [least, most, least - step, most + step, least + 0.5]) {
      const fault = settingFault(field, String(value));
      expect([value, fault === null]).toEqual([value, fits(value)]);
    }
  });

  it('reads back what it wrote', () => {
    for (const field of SETTING_FIELDS) {
      const text = settingText(field, settings);
      expect([field.key, settingFault(field, text)]).toEqual([field.key, null]);
      expect(settingValue(field, text)).toBe(settings[field.key]);
    }
  });

  it('shows minutes after midnight as a time, and a number as people write it', () => {
    const field = (key: string) => SETTING_FIELDS.find((one) => one.key === key)!;
    expect(settingText(field('quietFromMinute'), settings)).toBe('21:00');
    expect(settingText(field('companyPhone'), settings)).toBe('(252) 555-0100');
    expect(settingValue(field('quietUntilMinute'), '07:30')).toBe(450);
    expect(settingValue(field('companyPhone'), '(252) 555-0142')).toBe('+12525550142');
    expect(settingValue(field('circuity'), '1,35')).toBe(1.35);
  });

  it('says the hours of each time of day as the rules have them', () => {
    for (const { key, fromHour, untilHour } of DRIVING_HOURS) {
      const { label } = SETTING_FIELDS.find((one) => one.key === `${key}Percent`)!;
      expect(label).toContain(`${fromHour}:00 to ${untilHour}:00`);
    }
  });

  it('names a source, or says that there is none, for every figure', () => {
    for (const { key, kind, source } of SETTING_FIELDS) {
      if (kind === 'number' || kind === 'time')
        expect([key, source.length > 10]).toEqual([key, true]);
    }
  });
});
