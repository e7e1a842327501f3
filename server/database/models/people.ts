import { DataTypes } from 'sequelize';
import type { CreationOptional, InferAttributes, InferCreationAttributes, Model, Sequelize } from 'sequelize';

type Row<M extends Model> = Model<InferAttributes<M>, InferCreationAttributes<M>>;

export const TEAM_KINDS = ['household', 'firm', 'landlord'] as const;
export type TeamKind = (typeof TEAM_KINDS)[number];
export type MemberRole = 'owner' | 'member' | 'reader';

export interface PersonRow extends Row<PersonRow> {
  id: string;
  /** In lower case. */
  email: string;
  name: string;
  /** argon2id; null: cannot sign in yet. */
  passwordHash: string | null;
  administrator: CreationOptional<boolean>;
  demo: CreationOptional<boolean>;
  createdAt: CreationOptional<Date>;
}

export interface TeamRow extends Row<TeamRow> {
  id: string;
  kind: TeamKind;
  name: string;
  createdAt: CreationOptional<Date>;
}

export interface MembershipRow extends Row<MembershipRow> {
  teamId: string;
  personId: string;
  role: MemberRole;
  createdAt: CreationOptional<Date>;
}

export interface TokenRow extends Row<TokenRow> {
  id: string;
  personId: string;
  name: string;
  /** SHA-256 of the token. */
  hash: Buffer;
  createdAt: CreationOptional<Date>;
  lastUsedAt: CreationOptional<Date | null>;
}

// Sequelize writes into these, so each attribute gets its own.
const id = () => ({ type: DataTypes.TEXT, primaryKey: true });
const text = () => ({ type: DataTypes.TEXT, allowNull: false });
/** Filled in by the database, whose clock decides what holds. */
const created = () => ({ type: DataTypes.DATE });
const flag = () => ({ type: DataTypes.BOOLEAN });

export function definePeople(sequelize: Sequelize) {
  return {
    Person: sequelize.define<PersonRow>(
      'person',
      {
        id: id(),
        email: text(),
        name: text(),
        passwordHash: DataTypes.TEXT,
        administrator: flag(),
        demo: flag(),
        createdAt: created(),
      },
      { tableName: 'people' },
    ),
    Team: sequelize.define<TeamRow>(
      'team',
      { id: id(), kind: text(), name: text(), createdAt: created() },
      { tableName: 'teams' },
    ),
    Membership: sequelize.define<MembershipRow>(
      'membership',
      {
        teamId: { type: DataTypes.TEXT, primaryKey: true },
        personId: { type: DataTypes.TEXT, primaryKey: true },
        role: text(),
        createdAt: created(),
      },
      { tableName: 'memberships' },
    ),
    Token: sequelize.define<TokenRow>(
      'token',
      {
        id: id(),
        personId: text(),
        name: text(),
        hash: { type: DataTypes.BLOB, allowNull: false },
        createdAt: created(),
        lastUsedAt: DataTypes.DATE,
      },
      { tableName: 'tokens' },
    ),
  };
}
