import PDFDocument from 'pdfkit';
import { SHIFT, type Figure, type FigureFace, type TextMark } from '@/lib/figures/figure';
import { figureFace } from './figure-faces';
import { runWidth } from './outline-text';

/** A figure as a PDF page of its own size, fonts embedded as subsets; the same figure makes the same bytes. */
export function figurePdf(figure: Figure): Promise<Buffer> {
  const { widthPt, heightPt, clip, marks, title } = figure;
  const document = new PDFDocument({
    size: [widthPt, heightPt],
    margin: 0,
    // The clock must not show in the file.
    info: { Title: title, Creator: 'Beadline', Producer: 'Beadline', CreationDate: new Date(0) },
  });
  const parts: Buffer[] = [];
  const done = new Promise<Buffer>((resolve, reject) => {
    document.on('data', (part: Buffer) => parts.push(part));
    document.on('end', () => resolve(Buffer.concat(parts)));
    document.on('error', reject);
  });
  for (const mark of marks) {
    if (mark.kind === 'text') {
      drawText(document, mark);
      continue;
    }
    if (mark.d === '') continue;
    document.save();
    if (mark.clipped) document.rect(clip.x, clip.y, clip.width, clip.height).clip();
    document.path(mark.d);
    if (mark.stroke) {
      document.lineWidth(mark.strokePt ?? 1).lineJoin('round');
      // A list of lengths, which the types of the library leave out.
      if (mark.dash) document.dash(mark.dash as unknown as number, {});
    }
    if (mark.fill) document.fillOpacity(mark.fillOpacity ?? 1);
    if (mark.fill && mark.stroke) document.fillAndStroke(mark.fill, mark.stroke);
    else if (mark.fill) document.fill(mark.fill);
    else document.stroke(mark.stroke ?? '#000000');
    document.restore();
  }
  document.end();
  return done;
}

function drawText(document: PDFKit.PDFDocument, { x, y, runs, sizePt, anchor, colour }: TextMark): void {
  const width = runs.reduce((sum, run) => sum + runWidth(run, sizePt), 0);
  let at = anchor === 'start' ? x : anchor === 'middle' ? x - width / 2 : x - width;
  document.fillColor(colour).fillOpacity(1);
  for (const run of runs) {
    const size = run.shift ? SHIFT[run.shift].size * sizePt : sizePt;
    const up = run.shift ? SHIFT[run.shift].up * sizePt : 0;
    setFace(document, run.face ?? 'sans');
    document.fontSize(size).text(run.text, at, y - up, { lineBreak: false, baseline: 'alphabetic' });
    at += runWidth(run, sizePt);
  }
}

function setFace(document: PDFKit.PDFDocument, face: FigureFace): void {
  const { family, bytes } = figureFace(face);
  document.registerFont(family, bytes as unknown as string);
  document.font(family);
}
