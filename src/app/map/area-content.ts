import type { AreaDto } from '@shared/contract/areas';
import { isSameShape } from './area-ground';

/** What a person can change of an outage area. */
export type AreaContent = Pick<AreaDto, 'name' | 'shape' | 'outAt' | 'backAt'>;

/** Only what the person changed, so that nothing else is written over. */
export function changedOnly(base: AreaDto, content: AreaContent): Partial<AreaContent> {
  return {
    ...(content.name === base.name ? {} : { name: content.name }),
    ...(isSameShape(content.shape, base.shape) ? {} : { shape: content.shape }),
    ...(content.outAt === base.outAt ? {} : { outAt: content.outAt }),
    ...(content.backAt === base.backAt ? {} : { backAt: content.backAt }),
  };
}
