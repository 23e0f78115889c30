export * from './door.ts';
// openStore(options): Promise<Store> — waits for the schema number it needs; migrate(options): Promise<void> — under the advisory lock
