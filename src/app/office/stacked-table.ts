import { afterEveryRender, Directive, ElementRef, inject } from '@angular/core';

/** What the parts of a table are to whoever listens, whatever way they are laid out. */
const ROLES: readonly (readonly [parts: string, role: string])[] = [
  ['thead, tbody', 'rowgroup'],
  ['tr', 'row'],
  ['th[scope="col"]', 'columnheader'],
  ['th[scope="row"]', 'rowheader'],
  ['td', 'cell'],
];

/**
 * A table whose rows become blocks of lines on a hand's width (parts.scss). A table that is laid out as
 * blocks is no table any more to some browsers, so its parts say by their roles what they are.
 */
@Directive({ selector: 'table[thawStacks]', host: { role: 'table' } })
export class StackedTable {
  constructor() {
    const table = inject<ElementRef<HTMLTableElement>>(ElementRef).nativeElement;
    afterEveryRender({
      write: () => {
        for (const [parts, role] of ROLES)
          for (const part of table.querySelectorAll(`:is(${parts}):not([role])`))
            part.setAttribute('role', role);
      },
    });
  }
}
