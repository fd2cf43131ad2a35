// src-renderer/wrong-pages.ts | layers | one-importer-of-pdfjs-dist
export { getDocument } from 'pdfjs-dist';
