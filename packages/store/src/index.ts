export * from './door.ts';
export { openStore, TimeZoneFault } from './open-store.ts';
export { migrate, SchemaTooNew } from './migrate.ts';
export { SchemaNameFault } from './database.ts';
