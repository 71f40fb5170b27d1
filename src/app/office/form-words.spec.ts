import { FormControl, FormGroup } from '@angular/forms';
import { ProblemError } from '../core/problem-error';
import { showFaults } from './form-words';
import { overtaken } from './merge';
import { OrderId } from './order-id';

const refusal = (...pointers: string[]): ProblemError =>
  new ProblemError({
    type: '/problems/invalid-request',
    title: 'The request does not fit',
    status: 422,
    errors: pointers.map((pointer) => ({ pointer, detail: 'Too small' })),
  });

describe('showFaults', () => {
  const aForm = () => new FormGroup({ name: new FormControl(''), van: new FormControl('') });

  it('puts each fault beside its field, in words of our own where there are any', () => {
    const form = aForm();
    expect(showFaults(form, refusal('/name', '#/van/start-relay'), { name: 'A name.' })).toBe(true);
    expect(form.controls.name.getError('words')).toBe('A name.');
    expect(form.controls.van.getError('words')).toBe('Too small');
    expect(form.controls.van.touched).toBe(true);
  });

  it('says when a fault has no field, so that it is shown above', () => {
    expect(showFaults(aForm(), refusal('/name', '/commandId'))).toBe(false);
    expect(showFaults(aForm(), refusal())).toBe(false);
  });
});

describe('OrderId', () => {
  it('stays the same for the same order until it is carried out', () => {
    const order = new OrderId();
    const first = order.idFor({ name: 'A' });
    expect(order.idFor({ name: 'A' })).toBe(first);
    expect(order.idFor({ name: 'B' })).not.toBe(first);
    const again = order.idFor({ name: 'B' });
    order.done();
    expect(order.idFor({ name: 'B' })).not.toBe(again);
  });
});

describe('overtaken', () => {
  it('tells what somebody else changed, and what this person had written there', () => {
    const texts = {
      base: { a: '1', b: '2', c: '3' },
      theirs: { a: '1', b: '5', c: '6' },
      mine: { a: '9', b: '2', c: '7' },
    };
    expect(
      overtaken(['a', 'b', 'c'] as const, {
        base: (key) => texts.base[key],
        theirs: (key) => texts.theirs[key],
        mine: (key) => texts.mine[key],
      }),
    ).toEqual([
      { key: 'b', was: '2', now: '5', mine: null },
      { key: 'c', was: '3', now: '6', mine: '7' },
    ]);
  });
});
