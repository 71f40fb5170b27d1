import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { Api, newId } from './api';
import { ProblemError } from './problem-error';

const CALL_ID = '7a3f3f0e-7f5e-4a53-9a3f-2f1a2b3c4d5e';

describe('Api', () => {
  let api: Api;
  let http: HttpTestingController;

  beforeEach(() => {
    TestBed.configureTestingModule({
      providers: [provideHttpClient(), provideHttpClientTesting()],
    });
    api = TestBed.inject(Api);
    http = TestBed.inject(HttpTestingController);
  });
  afterEach(() => http.verify());

  it('fills the path, sends the body and gives the reply', async () => {
    const commandId = newId();
    const reply = api.call('addRemark', {
      params: { callId: CALL_ID },
      body: { commandId, text: 'Gate code 12' },
    });
    const request = http.expectOne({ method: 'POST', url: `/api/calls/${CALL_ID}/remarks` });
    expect(request.request.body).toEqual({ commandId, text: 'Gate code 12' });
    request.flush({ row: { id: CALL_ID } });
    await expect(reply).resolves.toEqual({ row: { id: CALL_ID } });
  });

  it('writes a query so that any text survives', async () => {
    const reply = api.call('suggestAddresses', { query: { text: '12 & half #3' } });
    http.expectOne('/api/addresses?text=12+%26+half+%233').flush({ suggestions: [] });
    await expect(reply).resolves.toEqual({ suggestions: [] });
  });

  it('sends a file as bytes', async () => {
    const body = new ArrayBuffer(3);
    void api.call('uploadNightLog', {
      params: { stormId: CALL_ID },
      query: { fileName: 'log.csv' },
      body,
    });
    const request = http.expectOne(`/api/storms/${CALL_ID}/night-logs?fileName=log.csv`);
    expect(request.request.headers.get('Content-Type')).toBe('application/octet-stream');
    expect(request.request.body).toBe(body);
    request.flush({});
  });

  it('turns a refusal into its code, its words, the row as it is now and the faulty fields', async () => {
    const reply = api.call('claimCall', {
      params: { callId: CALL_ID },
      body: { commandId: newId() },
    });
    const error = caught(reply);
    http.expectOne(`/api/calls/${CALL_ID}/claim`).flush(
      {
        type: '/problems/claimed-by-another',
        title: 'Claimed',
        status: 409,
        detail: 'Ana Ruiz has this call until 02:20.',
        current: { id: CALL_ID },
        errors: [{ pointer: '#/commandId', detail: 'is no id' }],
      },
      { status: 409, statusText: 'Conflict' },
    );
    const problem = await error;
    expect(problem.code).toBe('claimed-by-another');
    expect(problem.message).toBe('Ana Ruiz has this call until 02:20.');
    expect(problem.current).toEqual({ id: CALL_ID });
    expect([...problem.fieldErrors]).toEqual([['#/commandId', 'is no id']]);
  });

  it('says for how long to wait when the server does', async () => {
    const error = caught(api.call('signIn', { body: { signInName: 'a', password: 'b' } }));
    http
      .expectOne('/api/session')
      .flush(
        { type: '/problems/too-many-attempts', title: 'Too many attempts', status: 429 },
        { status: 429, statusText: 'Too Many Requests', headers: { 'Retry-After': '90' } },
      );
    expect((await error).retryAfterSeconds).toBe(90);
  });

  it('names a lost connection as such', async () => {
    const error = caught(api.call('me'));
    http.expectOne('/api/me').error(new ProgressEvent('error'));
    expect((await error).code).toBe('no-connection');
  });

  it('treats an answer that is no problem document as a fault of the server', async () => {
    const error = caught(api.call('me'));
    http.expectOne('/api/me').flush('<html>', { status: 502, statusText: 'Bad Gateway' });
    const problem = await error;
    expect(problem.code).toBe('internal');
    expect(problem.problem.status).toBe(502);
  });

  it('tells that the session is lost only for "not signed in"', async () => {
    const heard = jest.fn();
    api.sessionLost.subscribe(heard);
    for (const [code, status] of [
      ['not-allowed', 403],
      ['sign-in-failed', 401],
      ['not-signed-in', 401],
    ] as const) {
      const error = caught(api.call('settings'));
      http
        .expectOne('/api/settings')
        .flush({ type: `/problems/${code}`, title: code, status }, { status, statusText: code });
      await error;
      expect(heard).toHaveBeenCalledTimes(code === 'not-signed-in' ? 1 : 0);
    }
  });
});

async function caught(reply: Promise<unknown>): Promise<ProblemError> {
  const error = await reply.then(
    () => new Error('It did not reject.'),
    (reason: unknown) => reason,
  );
  expect(error).toBeInstanceOf(ProblemError);
  return error as ProblemError;
}
