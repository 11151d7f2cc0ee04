import type { Scene } from '../figures/scene.ts';
import type { FontName } from './fonts.ts';
import { drawScene } from './scenePdf.ts';

type Document = PDFKit.PDFDocument;
type Structure = PDFKit.PDFStructureElement;

/** A4 in points, and the frame that the text keeps to. */
export const PAGE = { width: 595.28, height: 841.89, left: 56, right: 56, top: 70, bottom: 64 } as const;
export const TEXT_WIDTH = PAGE.width - PAGE.left - PAGE.right;

/** A heading must have at least this much of its section below it on the same page, points. */
const KEEP_WITH_HEADING = 96;

export interface HeadingMark {
  readonly level: 1 | 2;
  readonly text: string;
  readonly pageIndex: number;
}

export interface TextStyle {
  readonly font?: FontName;
  readonly size?: number;
  readonly color?: string;
  readonly indent?: number;
  readonly gapAfter?: number;
}

/**
 * Sets text, figures and boxes down a page and opens the next page when one is full. Everything it sets is tagged, in
 * reading order. Positions are decided here and not by the PDF library, so that nothing is split where it reads badly.
 */
const FIGURE_GAP = 14;

export class PageFlow {
  readonly doc: Document;
  readonly headings: HeadingMark[] = [];
  y: number = PAGE.top;
  private section: Structure;
  private pageIndex = 0;
  private figureCount = 0;
  private tableCount = 0;
  private outlineParent: PDFKit.PDFOutline | undefined;

  constructor(doc: Document) {
    this.doc = doc;
    this.section = doc.struct('Sect');
    doc.addStructure(this.section);
  }

  get bottom(): number {
    return PAGE.height - PAGE.bottom;
  }

  get currentPageIndex(): number {
    return this.pageIndex;
  }

  nextFigureNumber(): number {
    this.figureCount += 1;
    return this.figureCount;
  }

  nextTableNumber(): number {
    this.tableCount += 1;
    return this.tableCount;
  }

  newPage(): void {
    this.doc.addPage();
    this.pageIndex += 1;
    this.y = PAGE.top;
  }

  /** Opens a new page unless `height` points are left on this one. */
  ensure(height: number): void {
    if (this.y + height > this.bottom && this.y > PAGE.top) this.newPage();
  }

  space(points: number): void {
    this.y = Math.min(this.y + points, this.bottom);
  }

  /** Adds tagged content: `draw` runs at once, between the marks of a structure element of this type. */
  tag(type: string, draw: () => void, options: PDFKit.Mixins.StructureElementOptions = {}): void {
    const element = this.doc.struct(type, options, [draw]);
    this.section.add(element);
  }

  /** A structure element with children of its own; the caller adds to it and ends it. */
  group(type: string): Structure {
    const element = this.doc.struct(type);
    this.section.add(element);
    return element;
  }

  heading(level: 1 | 2, text: string, keep = KEEP_WITH_HEADING): void {
    const size = level === 1 ? 15 : 11;
    this.space(level === 1 ? 14 : 9);
    this.doc.font('bold').fontSize(size);
    const height = this.doc.heightOfString(text, { width: TEXT_WIDTH });
    this.ensure(height + keep);
    if (level === 1) {
      this.section.end();
      this.section = this.doc.struct('Sect', { title: text });
      this.doc.addStructure(this.section);
      this.outlineParent = this.doc.outline.addItem(text);
    } else {
      (this.outlineParent ?? this.doc.outline).addItem(text);
    }
    this.headings.push({ level, text, pageIndex: this.pageIndex });
    this.tag(level === 1 ? 'H1' : 'H2', () => {
      this.doc.font('bold').fontSize(size).fillColor('#0d2b45');
      this.doc.text(text, PAGE.left, this.y, { width: TEXT_WIDTH });
    });
    this.y += height + (level === 1 ? 7 : 4);
  }

  paragraph(text: string, style: TextStyle = {}): void {
    const { font = 'body', size = 9.5, color = '#1a1a1a', indent = 0, gapAfter = 6 } = style;
    const width = TEXT_WIDTH - indent;
    const doc = this.doc;
    doc.font(font).fontSize(size);
    const height = doc.heightOfString(text, { width, lineGap: 1.6 });
    this.ensure(Math.min(height, this.bottom - PAGE.top));
    this.tag('P', () => {
      doc.font(font).fontSize(size).fillColor(color);
      doc.text(text, PAGE.left + indent, this.y, { width, lineGap: 1.6 });
    });
    this.y += height + gapAfter;
  }

  bullets(items: readonly string[], style: TextStyle = {}): void {
    const { font = 'body', size = 9.5, color = '#1a1a1a', indent = 12 } = style;
    const doc = this.doc;
    const list = this.group('L');
    for (const item of items) {
      doc.font(font).fontSize(size);
      const width = TEXT_WIDTH - indent;
      const height = doc.heightOfString(item, { width, lineGap: 1.4 });
      this.ensure(height);
      const entry = doc.struct('LI');
      list.add(entry);
      entry.add(
        doc.struct('Lbl', {}, [
          () => {
            doc.font(font).fontSize(size).fillColor(color);
            doc.text('–', PAGE.left, this.y, { lineBreak: false });
          },
        ]),
      );
      entry.add(
        doc.struct('LBody', {}, [
          () => {
            doc.font(font).fontSize(size).fillColor(color);
            doc.text(item, PAGE.left + indent, this.y, { width, lineGap: 1.4 });
          },
        ]),
      );
      entry.end();
      this.y += height + 3;
    }
    list.end();
    this.space(4);
  }

  /** Caution notes: a ruled box that no setting of the report can leave out. */
  caution(title: string, notes: readonly string[]): void {
    const doc = this.doc;
    const inset = 9;
    const width = TEXT_WIDTH - 2 * inset;
    const text = notes.map((note) => `•  ${note}`).join('\n');
    doc.font('bold').fontSize(9);
    const titleHeight = doc.heightOfString(title, { width });
    doc.font('body').fontSize(8.5);
    const textHeight = doc.heightOfString(text, { width, lineGap: 1.2, paragraphGap: 2 });
    const height = titleHeight + textHeight + 2 * inset + 3;
    this.ensure(height);
    const top = this.y;
    doc.markContent('Artifact', { type: 'Layout' });
    doc.save().lineWidth(1.4).rect(PAGE.left, top, TEXT_WIDTH, height).fillAndStroke('#f4f4f4', '#1a1a1a').restore();
    doc.endMarkedContent();
    this.tag('P', () => {
      doc.font('bold').fontSize(9).fillColor('#1a1a1a');
      doc.text(title, PAGE.left + inset, top + inset, { width });
    });
    this.tag('P', () => {
      doc.font('body').fontSize(8.5).fillColor('#1a1a1a');
      doc.text(text, PAGE.left + inset, top + inset + titleHeight + 3, { width, lineGap: 1.2, paragraphGap: 2 });
    });
    this.y = top + height + 8;
  }

  /** A numbered vector figure with its caption, kept together. */
  figure(scene: Scene, caption: string, widthPt: number = TEXT_WIDTH): void {
    this.figures([{ scene, caption }], widthPt);
  }

  /** Figures side by side, each with its number and its caption under it. */
  figures(
    items: readonly { readonly scene: Scene; readonly caption: string }[],
    widthPt: number = (TEXT_WIDTH - FIGURE_GAP * (items.length - 1)) / items.length,
  ): void {
    const doc = this.doc;
    const column = items.length === 1 ? TEXT_WIDTH : widthPt;
    const numbered = items.map(({ scene, caption }) => ({
      scene,
      text: `Figure ${this.nextFigureNumber()}. ${caption}`,
      height: (scene.heightPx / scene.widthPx) * widthPt,
    }));
    doc.font('italic').fontSize(8.5);
    const captionHeight = Math.max(...numbered.map(({ text }) => doc.heightOfString(text, { width: column })));
    const height = Math.max(...numbered.map((one) => one.height));
    this.ensure(height + captionHeight + 8);
    const top = this.y;
    for (const [index, { scene, text, height: own }] of numbered.entries()) {
      const at = PAGE.left + index * (column + FIGURE_GAP);
      const left = at + (column - widthPt) / 2;
      this.tag('Figure', () => drawScene(doc, scene, left, top, widthPt), {
        alt: `${scene.title}. ${scene.description}`,
        bbox: [left, top, left + widthPt, top + own],
      } as PDFKit.Mixins.StructureElementOptions);
      this.tag('Caption', () => {
        doc.font('italic').fontSize(8.5).fillColor('#333333');
        doc.text(text, at, top + height + 4, { width: column });
      });
    }
    this.y = top + height + 4 + captionHeight + 10;
  }

  finish(): void {
    this.section.end();
  }
}
