// src-main/command/wrong-database.ts | layers | one-importer-of-better-sqlite3
import Database from 'better-sqlite3';
export const wrong = Database;
