export const figureTexts = {
  asTable: 'As a table (T)',
  asFigure: 'As a figure (T)',
  saveSvg: 'Save as SVG',
  savePng: 'Save as PNG',
  copySvg: 'Copy as SVG',
  copied: 'Copied',
  saved: 'Saved',
  help: 'T shows the numbers as a table; the arrow keys walk along the cells.',
  largeHelp:
    'Plus and minus, or Control and the wheel, come nearer and go further; drag, click a place or press Shift and an arrow to move; 0 shows all again.',
  nearer: 'Nearer',
  further: 'Further',
  all: 'Show all',
} as const;
