import { computed, inject, Injectable, signal } from '@angular/core';
import type { LonLat } from '@shared/contract/common';
import { BoardStore } from '../core/board-store';
import type { CallMark } from './call-mark';

const WIDTH_PX = 290;
const BESIDE_PX = 20;
const EDGE_PX = 8;
/** Time to move the pointer from a mark onto what is said about it (WCAG 2.2, 1.4.13). */
const LINGER_MS = 300;

interface Shown {
  readonly callIds: readonly string[];
  readonly technicianId: string | null;
  readonly isPinned: boolean;
  readonly at: LonLat | null;
}

const NOTHING: Shown = { callIds: [], technicianId: null, isPinned: false, at: null };

/** What is told beside a mark: while the pointer rests on it, or until it is closed. */
@Injectable()
export class MapPopover {
  private readonly board = inject(BoardStore);
  private readonly shown = signal<Shown>(NOTHING);
  private timer: ReturnType<typeof setTimeout> | undefined;
  private isHeld = false;

  readonly isPinned = computed(() => this.shown().isPinned);
  readonly calls = computed(() => {
    const calls = this.board.calls();
    return this.shown().callIds.flatMap((id) => calls.get(id) ?? []);
  });
  readonly technician = computed(
    () => this.board.technicians().get(this.shown().technicianId ?? '') ?? null,
  );
  readonly technicianStops = computed(
    () => this.board.routes().get(this.shown().technicianId ?? '') ?? [],
  );
  /** Where it belongs; `null` while nothing is shown. */
  readonly at = computed<LonLat | null>(() => {
    const { at } = this.shown();
    const technician = this.technician();
    if (technician) return technician.position?.lonLat ?? technician.start;
    return this.calls().length > 0 ? at : null;
  });

  showsSame(marks: readonly CallMark[]): boolean {
    const { callIds, isPinned, technicianId } = this.shown();
    if (isPinned && marks.length === 0) return true;
    if (marks.length === 0) return callIds.length === 0 && technicianId === null;
    return callIds.length === marks.length && callIds[0] === marks[0]?.call.id;
  }

  hoverCalls(marks: readonly CallMark[]): void {
    clearTimeout(this.timer);
    if (this.shown().isPinned) return;
    if (marks.length === 0) {
      this.timer = setTimeout(() => {
        if (!this.isHeld) this.shown.set(NOTHING);
      }, LINGER_MS);
      return;
    }
    this.show(marks, false);
  }

  pinCalls(marks: readonly CallMark[]): void {
    this.show(marks, true);
  }

  pinTechnician(technicianId: string): void {
    clearTimeout(this.timer);
    this.shown.set({ ...NOTHING, technicianId, isPinned: true });
  }

  /** The pointer is on what is shown; it stays as long. */
  hold(isHeld: boolean): void {
    this.isHeld = isHeld;
    if (!isHeld) this.hoverCalls([]);
  }

  /** Another call was selected elsewhere: what was pinned here is about the past. */
  selectionIs(callId: string): void {
    const { callIds, isPinned } = this.shown();
    if (isPinned && callIds.length > 0 && !callIds.includes(callId)) this.close();
  }

  close(): void {
    clearTimeout(this.timer);
    this.isHeld = false;
    this.shown.set(NOTHING);
  }

  /** Beside the mark, on the side with more room; above or below so that it stays in the window. */
  placeIn(
    mark: { readonly x: number; readonly y: number },
    size: { readonly x: number; readonly y: number },
  ): Readonly<Record<'left' | 'top' | 'bottom', number | null>> {
    const right = mark.x + BESIDE_PX;
    const left = mark.x - BESIDE_PX - WIDTH_PX;
    const fitsRight = right + WIDTH_PX + EDGE_PX <= size.x;
    const fitsLeft = left >= EDGE_PX;
    const middle = Math.max(EDGE_PX, Math.min(mark.x - WIDTH_PX / 2, size.x - WIDTH_PX - EDGE_PX));
    const isBeside = fitsRight || fitsLeft;
    const gap = isBeside ? -BESIDE_PX : BESIDE_PX;
    const isLow = mark.y > size.y / 2;
    return {
      left: fitsRight ? right : fitsLeft ? left : middle,
      top: isLow ? null : Math.max(EDGE_PX, mark.y + gap),
      bottom: isLow ? Math.max(EDGE_PX, size.y - mark.y + gap) : null,
    };
  }

  private show(marks: readonly CallMark[], isPinned: boolean): void {
    clearTimeout(this.timer);
    this.shown.set({
      callIds: marks.map(({ call }) => call.id),
      technicianId: null,
      isPinned,
      at: marks[0]?.call.address.lonLat ?? null,
    });
  }
}
