export const figureTexts = {
  asTable: 'As a table (T)',
  asFigure: 'As a figure (T)',
  saveSvg: 'Save as SVG',
  savePng: 'Save as PNG',
  copySvg: 'Copy as SVG',
  copied: 'Copied',
  saved: 'Saved',
  help: 'T shows the numbers as a table; the arrow keys walk along the cells.',
  largeHelp: 'Turn the wheel to come nearer, drag to move.',
} as const;
