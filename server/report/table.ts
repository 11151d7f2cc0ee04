import { PAGE, type PageFlow, TEXT_WIDTH } from './pageFlow.ts';

export interface TableColumn {
  /** Header with its unit, for example `Dose, krad(Si)`. */
  readonly header: string;
  /** Share of the text width, relative to the other columns. */
  readonly weight: number;
  readonly align?: 'left' | 'right';
  readonly font?: 'body' | 'bold' | 'mono';
}

export interface TableContent {
  readonly caption: string;
  readonly columns: readonly TableColumn[];
  /** Cells in the order of the columns; a row may be emphasised. */
  readonly rows: readonly (readonly string[])[];
  /** Where the numbers come from and what they mean, set below the table. */
  readonly note?: string;
  readonly size?: number;
}

const PADDING = 3;

/**
 * A numbered table: caption above, header repeated on every page it runs over, never a header without two rows below.
 */
export function drawTable(flow: PageFlow, content: TableContent): void {
  const { doc } = flow;
  const size = content.size ?? 8;
  const totalWeight = content.columns.reduce((sum, column) => sum + column.weight, 0);
  const widths = content.columns.map((column) => (column.weight / totalWeight) * TEXT_WIDTH);
  const lefts: number[] = [];
  let left: number = PAGE.left;
  for (const width of widths) {
    lefts.push(left);
    left += width;
  }

  const heightOf = (cells: readonly string[], header: boolean): number => {
    let height = 0;
    cells.forEach((cell, index) => {
      doc.font(header ? 'bold' : (content.columns[index].font ?? 'body')).fontSize(size);
      height = Math.max(height, doc.heightOfString(cell === '' ? ' ' : cell, { width: widths[index] - 2 * PADDING }));
    });
    return height + 2 * PADDING;
  };

  const headers = content.columns.map((column) => column.header);
  const headerHeight = heightOf(headers, true);
  const rowHeights = content.rows.map((row) => heightOf(row, false));
  const caption = `Table ${flow.nextTableNumber()}. ${content.caption}`;
  doc.font('italic').fontSize(8.5);
  const captionHeight = doc.heightOfString(caption, { width: TEXT_WIDTH }) + 3;
  flow.ensure(captionHeight + headerHeight + (rowHeights[0] ?? 0) + (rowHeights[1] ?? 0) + 4);

  flow.tag('Caption', () => {
    doc.font('italic').fontSize(8.5).fillColor('#333333');
    doc.text(caption, PAGE.left, flow.y, { width: TEXT_WIDTH });
  });
  flow.y += captionHeight;

  const table = flow.group('Table');
  const drawRow = (cells: readonly string[], height: number, header: boolean, shaded: boolean): void => {
    const top = flow.y;
    doc.markContent('Artifact', { type: 'Layout' });
    doc.save();
    if (header) doc.rect(PAGE.left, top, TEXT_WIDTH, height).fill('#e3e6e9');
    else if (shaded) doc.rect(PAGE.left, top, TEXT_WIDTH, height).fill('#f6f7f8');
    doc.lineWidth(header ? 0.8 : 0.3).strokeColor(header ? '#1a1a1a' : '#b5b5b5');
    doc
      .moveTo(PAGE.left, top + height)
      .lineTo(PAGE.left + TEXT_WIDTH, top + height)
      .stroke();
    doc.restore();
    doc.endMarkedContent();
    const row = doc.struct('TR');
    table.add(row);
    cells.forEach((cell, index) => {
      const column = content.columns[index];
      const options = header ? { scope: 'Column' } : {};
      row.add(
        doc.struct(header ? 'TH' : 'TD', options as PDFKit.Mixins.StructureElementOptions, [
          () => {
            doc.font(header ? 'bold' : (column.font ?? 'body')).fontSize(size);
            doc.fillColor('#1a1a1a');
            doc.text(cell, lefts[index] + PADDING, top + PADDING, {
              width: widths[index] - 2 * PADDING,
              align: column.align ?? 'left',
            });
          },
        ]),
      );
    });
    row.end();
    flow.y = top + height;
  };

  drawRow(headers, headerHeight, true, false);
  content.rows.forEach((cells, index) => {
    if (flow.y + rowHeights[index] > flow.bottom) {
      flow.newPage();
      drawRow(headers, headerHeight, true, false);
    }
    drawRow(cells, rowHeights[index], false, index % 2 === 1);
  });
  table.end();
  if (content.note !== undefined) {
    flow.space(3);
    flow.paragraph(content.note, { size: 7.5, color: '#444444', gapAfter: 9 });
  } else {
    flow.space(9);
  }
}
