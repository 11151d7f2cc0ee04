import { useId, useState } from 'preact/hooks';
import type { Scene, SceneNode } from '../server/figures/index.ts';

/** Draws a scene as SVG. Paints are classes, so that light, dark and contrast come from the style sheet. */
export function Figure({ scene, caption }: { scene: Scene; caption: string }) {
  const [at, setAt] = useState(-1);
  const id = useId();
  const { readOuts } = scene;
  const move = (event: MouseEvent & { currentTarget: SVGSVGElement }) => {
    const box = event.currentTarget.getBoundingClientRect();
    const x = ((event.clientX - box.left) / box.width) * scene.widthPx;
    const y = ((event.clientY - box.top) / box.height) * scene.heightPx;
    let best = -1;
    let least = Number.POSITIVE_INFINITY;
    readOuts.forEach((entry, index) => {
      const distance = Math.abs(entry.x - x) + 0.3 * Math.abs(entry.y - y);
      if (distance < least) {
        least = distance;
        best = index;
      }
    });
    setAt(best);
  };
  const key = (event: KeyboardEvent) => {
    const step = event.key === 'ArrowRight' ? 1 : event.key === 'ArrowLeft' ? -1 : 0;
    if (step === 0 || readOuts.length === 0) return;
    event.preventDefault();
    setAt((old) => Math.min(Math.max(old + step, 0), readOuts.length - 1));
  };
  const shown = readOuts[at];
  return (
    <figure class="figure">
      <svg
        id={id}
        viewBox={`0 0 ${scene.widthPx} ${scene.heightPx}`}
        role="img"
        aria-label={`${scene.title}. ${scene.description}`}
        tabindex={0}
        onMouseMove={move}
        onMouseLeave={() => setAt(-1)}
        onKeyDown={key}
      >
        <title>{scene.title}</title>
        {scene.nodes.map((node, index) => (
          <Node key={index} node={node} />
        ))}
        {shown !== undefined && <circle cx={shown.x} cy={shown.y} r="5" class="readout" />}
      </svg>
      <p class="readout-text" aria-live="polite">
        {shown?.text ?? 'Point at the figure, or focus it and use the arrow keys, to read values.'}
      </p>
      <figcaption>
        {caption}{' '}
        <button type="button" class="plain" onClick={() => save(`${scene.title}.svg`, 'image/svg+xml', svgText(id))}>
          SVG
        </button>{' '}
        <button type="button" class="plain" onClick={() => save(`${scene.title}.csv`, 'text/csv', csvText(scene))}>
          CSV
        </button>
      </figcaption>
    </figure>
  );
}

function Node({ node }: { node: SceneNode }) {
  if (node.kind === 'group') {
    const { clip, translate } = node;
    const clipId = clip === undefined ? undefined : `c${clip.x}-${clip.y}-${clip.width}-${clip.height}`;
    return (
      <g
        {...(translate === undefined ? {} : { transform: `translate(${translate[0]} ${translate[1]})` })}
        {...(clipId === undefined ? {} : { 'clip-path': `url(#${clipId})` })}
      >
        {clip !== undefined && (
          <clipPath id={clipId}>
            <rect x={clip.x} y={clip.y} width={clip.width} height={clip.height} />
          </clipPath>
        )}
        {node.children.map((child, index) => (
          <Node key={index} node={child} />
        ))}
      </g>
    );
  }
  if (node.kind === 'text') {
    return (
      <text
        x={node.x}
        y={node.y}
        font-size={node.sizePx}
        text-anchor={node.anchor}
        class={`fill-${node.fill ?? 'ink'}`}
        {...(node.weight === 'bold' ? { 'font-weight': '600' } : {})}
        {...(node.rotateDeg === undefined ? {} : { transform: `rotate(${node.rotateDeg} ${node.x} ${node.y})` })}
      >
        {node.text}
      </text>
    );
  }
  return (
    <path
      d={node.d}
      class={`fill-${node.fill ?? 'none'} stroke-${node.stroke ?? 'none'}`}
      stroke-width={node.strokeWidth ?? 1}
      {...(node.fillOpacity === undefined ? {} : { 'fill-opacity': node.fillOpacity })}
      {...(node.dash === undefined ? {} : { 'stroke-dasharray': node.dash.join(' ') })}
    />
  );
}

/** The drawn figure with its computed colours written in, so that the file stands alone. */
function svgText(id: string): string {
  const svg = document.getElementById(id);
  if (svg === null) return '';
  const copy = svg.cloneNode(true) as SVGElement;
  copy.setAttribute('xmlns', 'http://www.w3.org/2000/svg');
  const originals = svg.querySelectorAll('path, text');
  copy.querySelectorAll('path, text').forEach((element, index) => {
    const computed = getComputedStyle(originals[index]);
    element.setAttribute('fill', computed.fill);
    element.setAttribute('stroke', computed.stroke);
  });
  return copy.outerHTML;
}

function csvText(scene: Scene): string {
  const cell = (value: string | number | null) =>
    value === null ? '' : typeof value === 'number' ? String(value) : `"${value.replaceAll('"', '""')}"`;
  return [scene.data.columns, ...scene.data.rows].map((row) => row.map(cell).join(',')).join('\r\n');
}

function save(name: string, type: string, text: string): void {
  const url = URL.createObjectURL(new Blob([text], { type }));
  const link = document.createElement('a');
  link.href = url;
  link.download = name.replaceAll(/[^\w.-]+/g, '_');
  link.click();
  URL.revokeObjectURL(url);
}
