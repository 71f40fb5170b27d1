import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import { ROLES, type Role } from '@shared/contract/common';

/** One row of `users`. */
export class UserRecord extends Model<
  InferAttributes<UserRecord>,
  InferCreationAttributes<UserRecord>
> {
  declare id: string;
  declare name: string;
  declare signInName: string;
  declare role: Role;
  declare technicianId: CreationOptional<string | null>;
  declare passwordHash: string;
  declare mustChangePassword: CreationOptional<boolean>;
  declare disabled: CreationOptional<boolean>;
  declare sessionEpoch: CreationOptional<number>;
  declare version: CreationOptional<number>;

  static register(sequelize: Sequelize): void {
    UserRecord.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        name: { type: DataTypes.STRING(80), allowNull: false },
        signInName: { type: DataTypes.STRING(120), allowNull: false },
        role: { type: DataTypes.ENUM(...ROLES), allowNull: false },
        technicianId: DataTypes.UUID,
        passwordHash: { type: DataTypes.STRING(200), allowNull: false },
        mustChangePassword: { type: DataTypes.BOOLEAN, allowNull: false, defaultValue: false },
        disabled: { type: DataTypes.BOOLEAN, allowNull: false, defaultValue: false },
        sessionEpoch: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
        version: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
      },
      { sequelize, tableName: 'users' },
    );
  }
}
