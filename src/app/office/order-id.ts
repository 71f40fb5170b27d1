import { newId } from '../core/api';

/**
 * The command id of one order. The same order sent again, after a lost connection, keeps its id, so
 * that it is carried out once; another order gets another.
 */
export class OrderId {
  private last: { readonly asked: string; readonly id: string } | null = null;

  idFor(asked: object): string {
    const text = JSON.stringify(asked);
    if (this.last?.asked !== text) this.last = { asked: text, id: newId() };
    return this.last.id;
  }

  /** The order was carried out: the next one is new, even if it reads the same. */
  done(): void {
    this.last = null;
  }
}
