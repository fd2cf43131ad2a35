import {
  getDocument,
  type PDFDocumentProxy,
  PDFWorker,
  type RenderTask,
  TextLayer,
} from 'pdfjs-dist/legacy/build/pdf.mjs';
import workerAddress from 'pdfjs-dist/legacy/build/pdf.worker.min.mjs?url';

/** A bookmark of the report: where a section begins. */
export interface Section {
  readonly title: string;
  /** 1 for the title of the report, 2 for its sections. */
  readonly level: 1 | 2;
  /** From 1. */
  readonly page: number;
  /** How far down its page, 0 to 1. */
  readonly top: number;
}

/** A printed report, ready to be drawn page by page. */
export interface Paper {
  readonly pages: number;
  readonly sections: readonly Section[];
  /** Height over width of a page. */
  readonly shape: number;
  readonly draw: (number: number, on: Easel) => Drawing;
  readonly close: () => void;
}

/** What a page is drawn on: the canvas, and over it a box for its text, which can be selected and searched. */
export interface Easel {
  readonly canvas: HTMLCanvasElement;
  readonly words: HTMLElement;
  /** In CSS pixels. */
  readonly width: number;
}

export interface Drawing {
  readonly done: Promise<void>;
  readonly stop: () => void;
}

let worker: { readonly pdf: PDFWorker; readonly failed: Promise<never> } | null = null;

/** One thread reads every report; it is started with the first. */
function startWorker() {
  const port = new Worker(workerAddress, { type: 'module' });
  const failed = new Promise<never>((_, reject) => {
    port.addEventListener('error', (event) =>
      reject(new Error(event.message || 'the thread that reads pages did not start')),
    );
  });
  failed.catch(() => {
    worker = null;
  });
  return { pdf: new PDFWorker({ port: port as never }), failed };
}

/** Opens the bytes of a report. Rejects where they cannot be read. */
export async function openPaper(bytes: Uint8Array): Promise<Paper> {
  worker ??= startWorker();
  const loading = getDocument({
    data: bytes.slice(), // it is handed over to the thread
    worker: worker.pdf,
    useWasm: false, // the content policy allows none, and the report holds no picture that needs it
    useSystemFonts: false,
    verbosity: 0,
  });
  const pdf = await Promise.race([loading.promise, worker.failed]);
  const first = (await pdf.getPage(1)).getViewport({ scale: 1 });
  return {
    pages: pdf.numPages,
    sections: await sectionsOf(pdf),
    shape: first.height / first.width,
    draw: (number, easel) => drawPage(pdf, number, easel),
    close: () => void loading.destroy(),
  };
}

type Bookmark = Awaited<ReturnType<PDFDocumentProxy['getOutline']>>[number];

/** The bookmarks: the report's title and its sections, in their order. */
async function sectionsOf(pdf: PDFDocumentProxy): Promise<Section[]> {
  const outline = ((await pdf.getOutline()) ?? []) as Bookmark[];
  const all = outline.flatMap((one) => [
    { ...one, level: 1 as const },
    ...(one.items as Bookmark[]).map((item) => ({ ...item, level: 2 as const })),
  ]);
  return Promise.all(
    all.map(async ({ title, level, dest }) => {
      const [page, , , top] = (Array.isArray(dest) ? dest : await pdf.getDestination(dest ?? '')) ?? [];
      const number = page ? (await pdf.getPageIndex(page)) + 1 : 1;
      const { height } = (await pdf.getPage(number)).getViewport({ scale: 1 });
      return {
        title,
        level,
        page: number,
        top: typeof top === 'number' ? Math.min(1, Math.max(0, 1 - top / height)) : 0,
      };
    }),
  );
}

function drawPage(pdf: PDFDocumentProxy, number: number, { canvas, words, width }: Easel): Drawing {
  let task: RenderTask | null = null;
  let layer: TextLayer | null = null;
  let stopped = false;
  const work = async () => {
    const page = await pdf.getPage(number);
    if (stopped) return;
    const scale = width / page.getViewport({ scale: 1 }).width;
    const viewport = page.getViewport({ scale });
    const sharp = globalThis.devicePixelRatio || 1;
    const drawn = document.createElement('canvas'); // the old page stays until the new one is whole
    drawn.width = Math.round(viewport.width * sharp);
    drawn.height = Math.round(viewport.height * sharp);
    task = page.render({ canvas: drawn, viewport, ...(sharp === 1 ? {} : { transform: [sharp, 0, 0, sharp, 0, 0] }) });
    await task.promise;
    if (stopped) return;
    canvas.width = drawn.width;
    canvas.height = drawn.height;
    canvas.getContext('2d')?.drawImage(drawn, 0, 0);
    words.replaceChildren();
    words.style.setProperty('--total-scale-factor', String(scale));
    layer = new TextLayer({ textContentSource: page.streamTextContent(), container: words, viewport });
    await layer.render();
  };
  return {
    done: work().catch((error: unknown) => {
      if (!stopped) throw error;
    }),
    stop: () => {
      stopped = true;
      task?.cancel();
      layer?.cancel();
    },
  };
}
