import PDFDocument from 'pdfkit';
import { FONT_FILES, type FontName, fontBytes } from './fonts.ts';
import { type HeadingMark, PAGE, PageFlow, TEXT_WIDTH } from './pageFlow.ts';
import { SECTIONS } from './sections.ts';
import type { ReportInput } from './types.ts';

/** Lines of the table of contents on one page. */
const CONTENTS_PER_PAGE = 44;

/**
 * The report as PDF bytes: tagged, with bookmarks, embedded fonts and vector figures. Dates come from the report, so the
 * same report gives the same bytes.
 */
export async function renderReport(input: ReportInput): Promise<Uint8Array> {
  // The first pass finds the pages of the headings; the second prints them. Contents take whole pages of their own.
  const draft = draw(input, []);
  const first = draft.flow.headings;
  draft.doc.end();
  draft.doc.resume();
  return bytesOf(draw(input, first).doc);
}

function draw(input: ReportInput, contents: readonly HeadingMark[]): { doc: PDFKit.PDFDocument; flow: PageFlow } {
  const date = new Date(`${input.dateIso}T00:00:00Z`);
  const doc = new PDFDocument({
    size: [PAGE.width, PAGE.height],
    margins: { top: 0, bottom: 0, left: 0, right: 0 },
    bufferPages: true,
    pdfVersion: '1.7',
    tagged: true,
    lang: 'en',
    displayTitle: true,
    info: {
      Title: `${input.title} (${input.documentNumber}, issue ${input.issue})`,
      Author: input.preparer === '' ? 'Sidelong' : input.preparer,
      Subject: 'Radiation dose and design margins',
      Creator: 'Sidelong',
      Producer: 'Sidelong',
      CreationDate: date,
      ModDate: date,
    },
  });
  for (const name of Object.keys(FONT_FILES) as FontName[]) doc.registerFont(name, fontBytes(name) as never);
  const flow = new PageFlow(doc);
  cover(flow, input);
  contentsPages(flow, contents);
  flow.space(16);
  for (const section of SECTIONS) section(flow, input);
  flow.finish();
  runningLines(doc, input);
  return { doc, flow };
}

function cover(flow: PageFlow, input: ReportInput): void {
  flow.y = 190;
  flow.tag('P', () => {
    flow.doc.font('bold').fontSize(24).fillColor('#0d2b45');
    flow.doc.text(input.title, PAGE.left, flow.y, { width: TEXT_WIDTH });
  });
  flow.doc.font('bold').fontSize(24);
  flow.y += flow.doc.heightOfString(input.title, { width: TEXT_WIDTH }) + 8;
  flow.paragraph('Radiation dose and design margins at Uranus and Neptune', {
    size: 13,
    color: '#444444',
    gapAfter: 40,
  });
  const lines: [string, string][] = [
    ['Document', input.documentNumber],
    ['Issue', input.issue],
    ['Date', input.dateIso],
    ['Prepared by', input.preparer],
    ['Checked by', input.checker],
    ['Approved by', input.approver],
    ['Distribution', input.distribution],
    ['Study', input.result.study.name],
    ['Assessment', input.result.name],
    ['Result SHA-256', input.result.provenance.resultSha256],
  ];
  for (const [label, value] of lines) {
    flow.paragraph(`${label}:  ${value === '' ? '–' : value}`, { size: 10, gapAfter: 5 });
  }
  flow.space(30);
  flow.caution('Preliminary planning aid', [
    'The environment specification of the project and agency standards take precedence. The caution notes inside belong to every number.',
  ]);
}

function contentsPages(flow: PageFlow, contents: readonly HeadingMark[]): void {
  const entries = contents.filter((entry) => entry.level === 1);
  const pages = Math.max(1, Math.ceil(entries.length / CONTENTS_PER_PAGE));
  for (let page = 0; page < pages; page++) {
    flow.newPage();
    if (page === 0) flow.paragraph('Contents', { font: 'bold', size: 15, color: '#0d2b45', gapAfter: 10 });
    for (const entry of entries.slice(page * CONTENTS_PER_PAGE, (page + 1) * CONTENTS_PER_PAGE)) {
      const top = flow.y;
      flow.tag('P', () => {
        flow.doc.font('body').fontSize(10).fillColor('#1a1a1a');
        flow.doc.text(entry.text, PAGE.left, top, { lineBreak: false });
        const number = String(entry.pageIndex + 1);
        flow.doc.text(number, PAGE.left + TEXT_WIDTH - flow.doc.widthOfString(number), top, { lineBreak: false });
      });
      flow.y += 15;
    }
  }
}

/** Head and foot of every page, drawn last, when the number of pages is known. */
function runningLines(doc: PDFKit.PDFDocument, input: ReportInput): void {
  const { count } = doc.bufferedPageRange();
  for (let index = 0; index < count; index++) {
    doc.switchToPage(index);
    doc.markContent('Artifact', { type: 'Pagination' });
    doc.font('body').fontSize(8).fillColor('#444444');
    const head = `${input.documentNumber} · issue ${input.issue}`;
    doc.text(head, PAGE.left, 36, { lineBreak: false });
    doc.text(input.distribution, PAGE.left + TEXT_WIDTH - doc.widthOfString(input.distribution), 36, {
      lineBreak: false,
    });
    const foot = `Page ${index + 1} of ${count}`;
    doc.text(
      'Preliminary planning aid: project specification and agency standards take precedence',
      PAGE.left,
      PAGE.height - 40,
      {
        lineBreak: false,
      },
    );
    doc.text(foot, PAGE.left + TEXT_WIDTH - doc.widthOfString(foot), PAGE.height - 40, { lineBreak: false });
    doc.endMarkedContent();
  }
}

function bytesOf(doc: PDFKit.PDFDocument): Promise<Uint8Array> {
  return new Promise((resolve, reject) => {
    const chunks: Uint8Array[] = [];
    doc.on('data', (chunk: Uint8Array) => chunks.push(chunk));
    doc.on('end', () => resolve(Buffer.concat(chunks)));
    doc.on('error', reject);
    doc.end();
  });
}
