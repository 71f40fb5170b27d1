import { TestBed } from '@angular/core/testing';
import { MapLayers } from './map-layers';

describe('MapLayers', () => {
  beforeEach(() => localStorage.clear());

  it('shows everything at first', () => {
    expect(TestBed.inject(MapLayers).isShown('routes')).toBe(true);
  });

  it('remembers what was hidden in this browser', () => {
    TestBed.inject(MapLayers).toggle('routes');
    TestBed.resetTestingModule();
    const later = TestBed.inject(MapLayers);
    expect(later.isShown('routes')).toBe(false);
    later.toggle('routes');
    expect(later.isShown('routes')).toBe(true);
  });
});
