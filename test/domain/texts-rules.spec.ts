import fc from 'fast-check';
import { MINUTE_MS } from '@shared/domain/instant';
import { etaMove, toldWindow } from '@shared/domain/texts/eta-moved';
import {
  MAX_BODY_CHARACTERS,
  MILESTONE_KINDS,
  milestoneKey,
  milestoneText,
  oneLine,
  TEXT_LANGUAGES,
} from '@shared/domain/texts/milestones';
import { classifyInbound } from '@shared/domain/texts/opt-out';
import { isTextTime, textHours, textPermission } from '@shared/domain/texts/quiet-hours';
import { textLength } from '@shared/domain/texts/segments';

describe('classifyInbound', () => {
  // 47 CFR 64.1200(a)(10), 89 FR 15756 (5 March 2024): the words that are conclusive.
  it.each(['stop', 'quit', 'end', 'revoke', 'opt out', 'cancel', 'unsubscribe'])(
    'takes the listed word "%s" as an opt-out',
    (word) => expect(classifyInbound(word)).toMatchObject({ kind: 'stop', by: 'keyword' }),
  );

  it.each([
    'Stop.',
    'STOP!!!',
    ' stop ',
    'OPT OUT',
    'optout',
    'Opt-out',
    'Stop all',
    'STOPALL',
    'Please stop',
    'stop, thanks',
    'STOP STOP',
    '"STOP"',
    'Stop 🛑',
    'remove',
    'ALTO',
    'pare por favor',
    'No más',
  ])('takes "%s" as an opt-out whatever stands around it', (body) =>
    expect(classifyInbound(body)).toMatchObject({ kind: 'stop', by: 'keyword' }),
  );

  it.each([
    'please stop texting me',
    'Stop sending me these messages, the freezer runs',
    "don't text me again",
    'Do not contact me at this number',
    'take me off your list',
    'no more texts please',
    'I want to opt out of this',
    'no me manden más mensajes',
    'deje de enviarme textos',
  ])('reads "%s" as an opt-out by its wording', (body) =>
    expect(classifyInbound(body)).toMatchObject({ kind: 'stop', by: 'wording' }),
  );

  it.each([
    "please don't stop by before 3",
    'can you stop by and text me first?',
    "don't text me before 8, I am asleep",
    "please don't stop texting me",
    'it will not stop beeping',
    'the fan would start and then stop',
    'at the end of the road, blue house',
    'cancel the visit on Tuesday, come Wednesday',
    'ok',
    '',
    '🛑',
  ])('leaves "%s" to a person', (body) =>
    expect(classifyInbound(body)).toMatchObject({ kind: 'other' }),
  );

  it('says that a bare "Cancel" may have meant the visit', () => {
    expect(classifyInbound('Cancel')).toMatchObject({ kind: 'stop', mayMeanVisit: true });
    expect(classifyInbound('Stop')).toMatchObject({ kind: 'stop', mayMeanVisit: false });
  });

  it('takes START and UNSTOP as an opt-in, and YES only from somebody who had opted out', () => {
    expect(classifyInbound('Start').kind).toBe('start');
    expect(classifyInbound('unstop').kind).toBe('start');
    expect(classifyInbound('Yes', false).kind).toBe('other');
    expect(classifyInbound('Yes', true).kind).toBe('start');
    expect(classifyInbound('Sí', true)).toMatchObject({ kind: 'start', language: 'es' });
  });

  it('takes HELP, INFO and AYUDA as a wish for help', () => {
    expect(classifyInbound('help').kind).toBe('help');
    expect(classifyInbound('Info?').kind).toBe('help');
    expect(classifyInbound('ayuda')).toMatchObject({ kind: 'help', language: 'es' });
  });
});

describe('textPermission', () => {
  const at = (clock: string): number => {
    const [hours, minutes] = clock.split(':').map(Number);
    return (hours ?? 0) * 60 + (minutes ?? 0);
  };

  // 47 CFR 64.1200(c)(1): not before 8 a.m. or after 9 p.m. local time.
  it.each([
    ['00:00', false],
    ['07:59', false],
    ['08:00', true],
    ['20:59', true],
    ['21:00', false],
    ['23:59', false],
  ])('at %s an ordinary text may go: %s', (clock, may) => {
    expect(isTextTime(at(clock))).toBe(may);
    expect(textPermission(at(clock), 'call-received').maySend).toBe(may);
  });

  it('lets a text about a visit on its way pass at any hour', () => {
    expect(textPermission(at('03:10'), 'on-the-way')).toEqual({ maySend: true });
    expect(textPermission(at('23:10'), 'eta-moved')).toEqual({ maySend: true });
  });

  it('names the next allowed minute: today before 8, tomorrow after 9', () => {
    expect(textPermission(at('02:15'), 'settled-by-phone')).toEqual({
      maySend: false,
      minuteOfDay: 480,
      daysAhead: 0,
    });
    expect(textPermission(at('22:15'), 'settled-by-phone')).toEqual({
      maySend: false,
      minuteOfDay: 480,
      daysAhead: 1,
    });
  });

  it('never lets a company widen the federal hours', () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 1440 }), fc.integer({ min: 0, max: 1440 }), (a, b) => {
        const hours = textHours({ opensAtMinute: a, closesAtMinute: b });
        expect(hours.opensAtMinute).toBeGreaterThanOrEqual(480);
        expect(hours.closesAtMinute).toBeLessThanOrEqual(1260);
        expect(hours.opensAtMinute).toBeLessThan(hours.closesAtMinute);
      }),
    );
    expect(textHours({ opensAtMinute: 540, closesAtMinute: 1200 })).toEqual({
      opensAtMinute: 540,
      closesAtMinute: 1200,
    });
  });
});

describe('milestoneText', () => {
  const facts = {
    company: 'Harbor Cold Repair',
    companyPhone: '(555) 555-0142',
    eta: '2:30-3:00 pm',
    technician: 'Marisol',
  };
  const everyText = MILESTONE_KINDS.flatMap((kind) =>
    TEXT_LANGUAGES.map((language) => [kind, language] as const),
  );

  it.each(everyText)('keeps "%s" in %s to GSM-7 and at most two segments', (kind, language) => {
    const length = textLength(milestoneText(kind, language, facts));
    expect(length.encoding).toBe('GSM-7');
    expect(length.segments).toBeLessThanOrEqual(2);
  });

  it.each(everyText)('names the company and the way out in "%s" in %s', (kind, language) => {
    const text = milestoneText(kind, language, facts);
    expect(text.startsWith('Harbor Cold Repair: ')).toBe(true);
    expect(text).toContain(kind === 'stop-confirmed' ? 'START' : 'STOP');
  });

  it('tells the window as it was formatted for the region', () => {
    expect(milestoneText('on-the-way', 'en', facts)).toContain('Marisol is on the way');
    expect(milestoneText('on-the-way', 'en', facts)).toContain('2:30-3:00 pm');
    expect(milestoneText('eta-moved', 'es', facts)).toContain('2:30-3:00 pm');
  });

  it('says "soon" and "your technician" where it does not know', () => {
    const text = milestoneText('on-the-way', 'en', { company: 'A', companyPhone: '555-0100' });
    expect(text).toContain('Your technician is on the way to you and should arrive soon');
  });

  it('lets no name break the line, hide letters or grow the text', () => {
    const wild = fc.string({ unit: 'binary', maxLength: 800 });
    fc.assert(
      fc.property(wild, wild, fc.constantFrom(...everyText), (name, eta, [kind, language]) => {
        const text = milestoneText(kind, language, {
          company: `Co\r\nBcc: x\u202e\u0000${name}`,
          companyPhone: '555-0100',
          technician: name,
          eta,
        });
        expect(text).not.toMatch(/[\p{Cc}\p{Cf}\p{Cs}\p{Zl}\p{Zp}]/u);
        expect([...text].length).toBeLessThanOrEqual(MAX_BODY_CHARACTERS);
      }),
    );
  });

  it('cuts between characters, never inside one', () => {
    expect(oneLine('😀'.repeat(10), 6)).toBe('😀😀😀...');
    expect(oneLine('short', 6)).toBe('short');
  });

  it('gives one key per call, milestone and count', () => {
    expect(milestoneKey('c1', 'on-the-way', 1)).toBe('c1:on-the-way:1');
    expect(milestoneKey('c1', 'eta-moved', 2)).not.toBe(milestoneKey('c1', 'eta-moved', 1));
  });
});

describe('etaMove', () => {
  const told = { eta: 0, at: -60 * MINUTE_MS };
  const rule = { movedMinutes: 15, gapMinutes: 10 };
  const move = (minutes: number, nowMinutes = 0) =>
    etaMove(told, minutes * MINUTE_MS, nowMinutes * MINUTE_MS, rule);

  it('says nothing up to the set number of minutes, in either direction', () => {
    expect(move(15)).toEqual({ text: 'none' });
    expect(move(-15)).toEqual({ text: 'none' });
  });

  it('texts as soon as it is more than that', () => {
    expect(move(16)).toEqual({ text: 'now', laterByMinutes: 16 });
    expect(move(-20)).toEqual({ text: 'now', laterByMinutes: -20 });
  });

  it('waits until the last text is old enough, and says until when', () => {
    expect(move(40, -55)).toEqual({ text: 'later', notBefore: -50 * MINUTE_MS });
    expect(move(40, -50)).toEqual({ text: 'now', laterByMinutes: 40 });
  });

  it('adds up small slips, because it is set against what was told', () => {
    const slips = [5, 10, 15, 20].map((minutes) => move(minutes).text);
    expect(slips).toEqual(['none', 'none', 'none', 'now']);
  });

  it('tells a window that holds the arrival', () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 4e12 }), (eta) => {
        const { from, to } = toldWindow(eta);
        expect(from).toBeLessThanOrEqual(eta);
        expect(to).toBeGreaterThan(eta);
        expect(from % (5 * MINUTE_MS)).toBe(0);
      }),
    );
  });
});
