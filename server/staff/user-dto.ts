import type { UserDto } from '@shared/contract/office';
import type { UserRecord } from './user-record';

export function toUserDto(user: UserRecord): UserDto {
  return {
    id: user.id,
    name: user.name,
    signInName: user.signInName,
    role: user.role,
    technicianId: user.technicianId,
    disabled: user.disabled,
    mustChangePassword: user.mustChangePassword,
    version: user.version,
  };
}
