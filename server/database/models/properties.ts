import { DataTypes } from 'sequelize';
import type { CreationOptional, InferAttributes, InferCreationAttributes, Model, Sequelize } from 'sequelize';
import type { Role, System, Tariff } from '../../../shared/api/property.ts';

type Row<M extends Model> = Model<InferAttributes<M>, InferCreationAttributes<M>>;

export interface PropertyRow extends Row<PropertyRow> {
  id: string;
  name: string;
  timeZone: string;
  country: string | null;
  latitude: number | null;
  longitude: number | null;
  /** Null: the default is taken. */
  readyTime: string | null;
  readyTemperatureC: number | null;
  /** The team that keeps the property. */
  teamId: string;
  demo: CreationOptional<boolean>;
  firstDay: CreationOptional<string | null>;
  lastDay: CreationOptional<string | null>;
  createdBy: string | null;
  createdAt: CreationOptional<Date>;
}

/** A record and the civil day from which it holds. */
interface DatedRow<Content> {
  propertyId: string;
  fromDate: string;
  record: Content;
  createdBy: string | null;
  createdAt: CreationOptional<Date>;
}
export interface SystemRow extends Row<SystemRow>, DatedRow<System> {}
export interface TariffRow extends Row<TariffRow>, DatedRow<Tariff> {}

export interface GrantRow extends Row<GrantRow> {
  propertyId: string;
  /** Unique within the property. */
  id: string;
  role: Role;
  /** To whom it was given; null for the first grant, which no letter went out for. */
  email: string | null;
  /** Whose it is, once accepted. */
  teamId: string | null;
  givenBy: string | null;
  /** The role of who gave it; null for the first grant. */
  givenAs: Role | null;
  givenAt: CreationOptional<Date>;
  acceptedAt: CreationOptional<Date | null>;
  startsAt: CreationOptional<Date>;
  endsAt: CreationOptional<Date | null>;
  withdrawnAt: CreationOptional<Date | null>;
  /** On an occupier's grant: since when landlords may see traces. */
  tracesConsentAt: CreationOptional<Date | null>;
}

// Sequelize writes into these, so each attribute gets its own.
const key = () => ({ type: DataTypes.TEXT, primaryKey: true });
const text = () => ({ type: DataTypes.TEXT, allowNull: false });
/** Filled in by the database, whose clock decides what holds. */
const created = () => ({ type: DataTypes.DATE });

const dated = () => ({
  propertyId: key(),
  fromDate: { type: DataTypes.DATEONLY, primaryKey: true },
  record: { type: DataTypes.JSONB, allowNull: false },
  createdBy: DataTypes.TEXT,
  createdAt: created(),
});

export function defineProperties(sequelize: Sequelize) {
  return {
    Property: sequelize.define<PropertyRow>(
      'property',
      {
        id: key(),
        name: text(),
        timeZone: text(),
        country: DataTypes.TEXT,
        latitude: DataTypes.DOUBLE,
        longitude: DataTypes.DOUBLE,
        readyTime: DataTypes.TEXT,
        readyTemperatureC: DataTypes.DOUBLE,
        teamId: text(),
        demo: DataTypes.BOOLEAN,
        firstDay: DataTypes.DATEONLY,
        lastDay: DataTypes.DATEONLY,
        createdBy: DataTypes.TEXT,
        createdAt: created(),
      },
      { tableName: 'properties' },
    ),
    SystemRecord: sequelize.define<SystemRow>('systemRecord', dated(), { tableName: 'system_records' }),
    TariffRecord: sequelize.define<TariffRow>('tariffRecord', dated(), { tableName: 'tariffs' }),
    Grant: sequelize.define<GrantRow>(
      'grant',
      {
        propertyId: key(),
        id: key(),
        role: text(),
        email: DataTypes.TEXT,
        teamId: DataTypes.TEXT,
        givenBy: DataTypes.TEXT,
        givenAs: DataTypes.TEXT,
        givenAt: created(),
        acceptedAt: DataTypes.DATE,
        startsAt: created(),
        endsAt: DataTypes.DATE,
        withdrawnAt: DataTypes.DATE,
        tracesConsentAt: DataTypes.DATE,
      },
      { tableName: 'grants' },
    ),
  };
}
