// src-main/engine/wrong-csv.ts | layers | one-importer-of-papaparse
import Papa from 'papaparse';
export const wrong = Papa;
