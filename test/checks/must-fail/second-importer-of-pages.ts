// src-main/command/wrong-pages.ts | layers | one-importer-of-pdfkit-svg-to-pdfkit
import PDFDocument from 'pdfkit';
export const wrong = PDFDocument;
