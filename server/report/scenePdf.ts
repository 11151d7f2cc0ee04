import type { Scene, SceneGroup, SceneNode, ScenePath, SceneText } from '../figures/scene.ts';
import { inkOf } from './inks.ts';

type Document = PDFKit.PDFDocument;

/**
 * Draws a scene as vector paths and text at a place on the current page.
 *
 * @param xPt,yPt - upper left corner, points
 * @param widthPt - width to fill; the height follows from the scene's own proportions
 */
export function drawScene(doc: Document, scene: Scene, xPt: number, yPt: number, widthPt: number): void {
  const scale = widthPt / scene.widthPx;
  doc.save();
  doc.translate(xPt, yPt).scale(scale);
  for (const node of scene.nodes) drawNode(doc, node);
  doc.restore();
}

function drawNode(doc: Document, node: SceneNode): void {
  if (node.kind === 'path') drawPath(doc, node);
  else if (node.kind === 'text') drawText(doc, node);
  else drawGroup(doc, node);
}

function drawGroup(doc: Document, group: SceneGroup): void {
  doc.save();
  if (group.translate !== undefined) doc.translate(group.translate[0], group.translate[1]);
  if (group.clip !== undefined) doc.rect(group.clip.x, group.clip.y, group.clip.width, group.clip.height).clip();
  for (const node of group.children) drawNode(doc, node);
  doc.restore();
}

function drawPath(doc: Document, path: ScenePath): void {
  const filled = path.fill !== undefined && path.fill !== 'none';
  const stroked = path.stroke !== undefined && path.stroke !== 'none';
  if (path.d === '' || (!filled && !stroked)) return;
  doc.save();
  if (filled) {
    doc.fillOpacity(path.fillOpacity ?? 1);
    doc.path(path.d).fill(inkOf(path.fill!).color);
    doc.fillOpacity(1);
  }
  if (stroked) {
    const ink = inkOf(path.stroke!);
    const dash = path.dash ?? ink.dash;
    doc.lineWidth(path.strokeWidth ?? 1).lineJoin('round');
    if (dash.length > 0) doc.dash(dash[0], { space: dash[1] ?? dash[0] });
    doc.path(path.d).stroke(ink.color);
    if (dash.length > 0) doc.undash();
  }
  doc.restore();
}

function drawText(doc: Document, node: SceneText): void {
  doc.save();
  doc.font(node.weight === 'bold' ? 'bold' : 'body').fontSize(node.sizePx);
  doc.fillColor(inkOf(node.fill !== undefined && node.fill !== 'none' ? node.fill : 'ink').color);
  if (node.rotateDeg !== undefined) doc.rotate(node.rotateDeg, { origin: [node.x, node.y] });
  const width = doc.widthOfString(node.text);
  const shift = node.anchor === 'start' ? 0 : node.anchor === 'middle' ? width / 2 : width;
  // A scene gives the baseline, as SVG does.
  doc.text(node.text, node.x - shift, node.y, { lineBreak: false, baseline: 'alphabetic' });
  doc.restore();
}
