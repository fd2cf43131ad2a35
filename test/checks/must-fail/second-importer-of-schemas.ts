// src-core/table/wrong-schema.ts | layers | one-importer-of-valibot
export { object } from 'valibot';
