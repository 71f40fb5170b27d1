import { TestBed } from '@angular/core/testing';
import { signal } from '@angular/core';
import { MatDialog } from '@angular/material/dialog';
import { Router } from '@angular/router';
import { of } from 'rxjs';
import { Api } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { Drafts } from '../core/drafts';
import { Session } from '../core/session';
import { NOW, STORM_ID } from '../core/testing';
import { IntakeModel } from '../intake/intake-model';
import { draftFrom, IntakePrefill } from './intake-prefill';

const FACTS = {
  phone: '+12525550142',
  name: 'Wren Ashdown',
  address: '12 Larch Ave, Pell Harbor',
  units: 'fridge, chest freezer',
  remark: 'Night log, line 4: burning smell',
};

describe('IntakePrefill', () => {
  let answer: 'go-on' | 'replace' | undefined;
  const navigate = jest.fn();
  const open = jest.fn(() => ({ afterClosed: () => of(answer) }));

  beforeEach(() => {
    localStorage.clear();
    navigate.mockReset();
    open.mockClear();
    answer = undefined;
    TestBed.configureTestingModule({
      providers: [
        { provide: Router, useValue: { navigate } },
        { provide: MatDialog, useValue: { open, openDialogs: [] } },
        { provide: Api, useValue: { call: () => new Promise(() => undefined) } },
        { provide: BoardStore, useValue: { areas: signal(new Map()) } },
        { provide: Clock, useValue: { now: signal(NOW), exact: () => NOW } },
        {
          provide: Session,
          useValue: { storm: signal({ id: STORM_ID }), zone: signal('America/New_York') },
        },
      ],
    });
    TestBed.inject(Drafts).of('user-1');
  });

  const intakeFinds = () => TestBed.runInInjectionContext(() => new IntakeModel()).draft();

  it('hands the intake a call with everything filled in, under an id that is known already', async () => {
    const callId = await TestBed.inject(IntakePrefill).take(FACTS);
    expect(navigate).toHaveBeenCalledWith(['/board'], { queryParams: { call: 'new' } });
    expect(intakeFinds()).toMatchObject({
      callId,
      phone: '(252) 555-0142',
      name: 'Wren Ashdown',
      address: { text: '12 Larch Ave, Pell Harbor', kind: 'unlocated' },
      units: [{ kind: 'fridge-freezer' }, { kind: 'chest-freezer' }],
      remark: 'Night log, line 4: burning smell',
    });
  });

  it('marks what sounds dangerous, and nothing that is denied', () => {
    expect(draftFrom(FACTS).danger).toBe(true);
    expect(draftFrom({ ...FACTS, remark: 'no smoke, no burning smell' }).danger).toBe(false);
  });

  it('never throws away a call that is being taken without asking', async () => {
    const prefill = TestBed.inject(IntakePrefill);
    const first = await prefill.take(FACTS);
    expect(await prefill.take({ ...FACTS, name: 'Otis Fern' })).toBeNull();
    expect(open).toHaveBeenCalledTimes(1);
    expect(intakeFinds()).toMatchObject({ callId: first, name: 'Wren Ashdown' });
    answer = 'replace';
    expect(await prefill.take({ ...FACTS, name: 'Otis Fern' })).not.toBeNull();
    expect(intakeFinds()).toMatchObject({ name: 'Otis Fern' });
  });
});
