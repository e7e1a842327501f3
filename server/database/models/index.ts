import type { Sequelize } from 'sequelize';

/** The models of one connection. Nothing global: two databases in one process do not meet. */
export function defineModels(_sequelize: Sequelize) {
  return {};
}
export type Models = ReturnType<typeof defineModels>;
