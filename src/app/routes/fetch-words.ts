import { PART_WORDS, PARTS, type Part } from '@shared/domain/skills';

/** "2 × start relay, 1 × power cord": what a van fetches at the store. */
export const fetchWords = (fetches: Readonly<Partial<Record<Part, number>>>): string =>
  PARTS.flatMap((part) => {
    const count = fetches[part] ?? 0;
    return count > 0 ? [`${count} × ${PART_WORDS[part]}`] : [];
  }).join(', ');
