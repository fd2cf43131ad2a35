declare module 'svg-to-pdfkit' {
  interface DrawOptions {
    readonly width?: number;
    readonly height?: number;
    readonly assumePt?: boolean;
    readonly preserveAspectRatio?: string;
    readonly warningCallback?: (warning: string) => void;
  }
  export default function draw(pdf: PDFKit.PDFDocument, svg: string, x: number, y: number, options?: DrawOptions): void;
}
