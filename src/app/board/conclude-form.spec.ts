import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { provideZonelessChangeDetection, signal } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import type { CallDetail, CallRow } from '@shared/contract/calls';
import type { Conclusion } from '@shared/domain/phone-check/phone-check';
import { Announce } from '../core/announce';
import { BoardStore } from '../core/board-store';
import { aCallRow, idOf, settled } from '../core/testing';
import { CallModel } from './call-model';
import { ConcludeForm } from './conclude-form';

const aDetail = (version: number, answers: Record<string, string> = {}): CallDetail =>
  ({
    row: aCallRow(7, { version }),
    phoneCheck: { answers, startedAt: null, concludedAt: null },
  }) as unknown as CallDetail;
const ID = idOf(1007);
const NEEDS_VISIT = { outcome: 'visit', danger: null, referTo: null } as Conclusion;

/** The end of a check as the person at the keyboard has it, before a server that takes its time. */
class EndHarness {
  constructor(
    private readonly fixture: ComponentFixture<ConcludeForm>,
    readonly http: HttpTestingController,
    readonly call: CallModel,
    readonly noticed: string[],
  ) {}

  /** Presses Enter in the field: only a form whose button is not disabled is then submitted. */
  async enter(): Promise<void> {
    const host = this.fixture.nativeElement as HTMLElement;
    const isAble = !host.querySelector<HTMLButtonElement>('button[type=submit]')!.disabled;
    if (isAble) host.querySelector('form')!.requestSubmit();
    await this.settle();
  }
  async settle(): Promise<void> {
    await settled();
    await this.fixture.whenStable();
  }
  ends() {
    return this.http.match((request) => request.url.includes('conclusion'));
  }
}

async function aForm(): Promise<EndHarness> {
  const noticed: string[] = [];
  TestBed.configureTestingModule({
    providers: [
      provideZonelessChangeDetection(),
      provideHttpClient(),
      provideHttpClientTesting(),
      CallModel,
      {
        provide: BoardStore,
        useValue: { calls: signal(new Map<string, CallRow>()), takeReply: () => undefined },
      },
      { provide: Announce, useValue: { notice: (words: string) => noticed.push(words) } },
    ],
  });
  const http = TestBed.inject(HttpTestingController);
  const call = TestBed.inject(CallModel);
  call.open(ID);
  http.expectOne(`/api/calls/${ID}`).flush(aDetail(1));
  await settled();
  const fixture = TestBed.createComponent(ConcludeForm);
  fixture.componentRef.setInput('check', NEEDS_VISIT);
  const form = new EndHarness(fixture, http, call, noticed);
  await form.settle();
  return form;
}

const answersSent = (form: EndHarness) =>
  form.http.expectOne((request) => request.url.includes('phone-check'));

describe('ConcludeForm', () => {
  it('ends the check after the answer that is still on its way, with the version it gave', async () => {
    const form = await aForm();
    void form.call.answer({ fire: 'no' });
    await form.enter();
    expect(form.ends()).toEqual([]);
    answersSent(form).flush(aDetail(2, { fire: 'no' }));
    await form.settle();
    const [end] = form.ends();
    expect(end?.request.body).toMatchObject({ version: 2, outcome: 'waiting' });
    end?.flush(aDetail(3));
    await form.settle();
    expect(form.noticed).toEqual(['Call 7: Needs a visit.']);
  });

  it('waits also for answers that follow the one on its way', async () => {
    const form = await aForm();
    const both = form.call
      .answer({ fire: 'no' })
      .then(() => form.call.answer({ fire: 'no', line: 'no' }));
    await form.enter();
    answersSent(form).flush(aDetail(2));
    await form.settle();
    expect(form.ends()).toEqual([]);
    answersSent(form).flush(aDetail(3));
    await both;
    await form.settle();
    expect(form.ends().map(({ request }) => request.body.version)).toEqual([3]);
  });

  it('ends it once, however often Enter is pressed meanwhile', async () => {
    const form = await aForm();
    await form.enter();
    await form.enter();
    expect(form.ends()).toHaveLength(1);
  });

  it('ends no other call that was opened meanwhile, and says so', async () => {
    const form = await aForm();
    void form.call.answer({ fire: 'no' });
    await form.enter();
    const sent = answersSent(form);
    form.call.open(idOf(1008));
    sent.flush(aDetail(2));
    await form.settle();
    expect(form.ends()).toEqual([]);
    expect(form.noticed).toEqual(['Call 7 was left before its check had ended.']);
  });
});
