import type { Role } from '@shared/contract/common';

export const ROLE_WORDS: Readonly<Record<Role, { readonly name: string; readonly does: string }>> =
  {
    dispatcher: {
      name: 'Dispatcher',
      does: 'Takes calls, settles them by phone, keeps the routes.',
    },
    technician: { name: 'Technician', does: 'Sees their own stops on their phone, nothing else.' },
    manager: { name: 'Manager', does: 'As a dispatcher, and the drain and the office.' },
    owner: { name: 'Owner', does: 'As a manager, and the accounts.' },
  };
