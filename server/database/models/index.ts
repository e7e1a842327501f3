import type { Sequelize } from 'sequelize';
import { definePeople } from './people.ts';
import { defineProperties } from './properties.ts';

/** The models of one connection. Nothing global: two databases in one process do not meet. */
export function defineModels(sequelize: Sequelize) {
  return { ...definePeople(sequelize), ...defineProperties(sequelize) };
}
export type Models = ReturnType<typeof defineModels>;
