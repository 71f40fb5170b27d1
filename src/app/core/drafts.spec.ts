import { TestBed } from '@angular/core/testing';
import { Drafts } from './drafts';

const isText = (value: unknown): value is string => typeof value === 'string';
const isNumber = (value: unknown): value is number => typeof value === 'number';

describe('Drafts', () => {
  let drafts: Drafts;
  beforeEach(() => {
    localStorage.clear();
    drafts = TestBed.inject(Drafts);
  });
  afterEach(() => jest.restoreAllMocks());

  it('gives back what was saved, after a reload too', () => {
    drafts.of('ana');
    drafts.save('call', 'half');
    const afterReload = TestBed.runInInjectionContext(() => new Drafts());
    afterReload.of('ana');
    expect(afterReload.load('call', isText)).toBe('half');
  });

  it('shows nobody the drafts of another person', () => {
    drafts.of('ana');
    drafts.save('call', 'half');
    drafts.of('ben');
    expect(drafts.load('call', isText)).toBeNull();
    drafts.clearAll();
    drafts.of('ana');
    expect(drafts.load('call', isText)).toBe('half');
  });

  it('refuses a draft of an older shape', () => {
    drafts.of('ana');
    drafts.save('call', 'half');
    expect(drafts.load('call', isNumber)).toBeNull();
  });

  it('refuses what is no draft at all', () => {
    drafts.of('ana');
    localStorage.setItem('thawline:draft:ana:call', '{"half"');
    expect(drafts.load('call', isText)).toBeNull();
  });

  it('clears one, or all', () => {
    drafts.of('ana');
    drafts.save('call', 'half');
    drafts.save('other', 'more');
    drafts.clear('call');
    expect(drafts.load('call', isText)).toBeNull();
    expect(drafts.hasAny()).toBe(true);
    drafts.clearAll();
    expect(drafts.hasAny()).toBe(false);
  });

  it('forgets drafts after a week', () => {
    drafts.of('ana');
    drafts.save('call', 'half');
    const later = Date.now() + 8 * 24 * 3_600_000;
    jest.spyOn(Date, 'now').mockReturnValue(later);
    drafts.of('ana');
    expect(drafts.load('call', isText)).toBeNull();
  });

  it('lets work go on when the browser keeps nothing', () => {
    drafts.of('ana');
    jest.spyOn(Storage.prototype, 'setItem').mockImplementation(() => {
      throw new DOMException('full', 'QuotaExceededError');
    });
    expect(() => drafts.save('call', 'half')).not.toThrow();
    expect(drafts.load('call', isText)).toBeNull();
  });
});
