/** Marks as SVG text: title and description, text as text, no script, no style sheet. */
import {
  HIGH_SHIFT,
  LOW_SHIFT,
  SCRIPT_SIZE,
  type Drawing,
  type Mark,
  type PathStep,
  type TextMark,
  type Tone,
} from './marks.ts';
import { LIGHT, type Palette } from './palettes.ts';

export interface SvgOptions {
  readonly title: string;
  readonly description?: string;
  readonly palette?: Palette;
  /** Width on paper, with its unit; pixels if left out. */
  readonly physicalWidth?: { readonly value: number; readonly unit: 'cm' };
  /** Turned by a quarter, for a page on its side. */
  readonly turned?: boolean;
}

/** Two decimals are finer than any screen. */
const n = (x: number): string => String(Math.round(x * 100) / 100);

export function pathData(steps: readonly PathStep[]): string {
  return steps.map(([letter, ...at]) => letter + at.map(n).join(' ')).join('');
}

export function drawingToSvg(drawing: Drawing, options: SvgOptions): string {
  const palette = options.palette ?? LIGHT;
  const [w, h] = [drawing.width, drawing.height];
  const turned = options.turned === true;
  const [width, height] = turned ? [h, w] : [w, h];
  const { physicalWidth: paper } = options;
  const scale = paper === undefined ? 1 : paper.value / width;
  const unit = paper?.unit ?? '';
  const body = drawing.marks.map((mark) => markToSvg(mark, palette)).filter((text) => text !== '');
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 ${n(width)} ${n(height)}" width="${n(width * scale)}${unit}" height="${n(height * scale)}${unit}" role="img">`,
    `<title>${escape(options.title)}</title>`,
    ...(options.description === undefined ? [] : [`<desc>${escape(options.description)}</desc>`]),
    `<g font-family="'IBM Plex Sans', sans-serif" stroke-linecap="round" stroke-linejoin="round"${turned ? ` transform="translate(0 ${n(w)}) rotate(-90)"` : ''}>`,
    ...body,
    '</g>',
    '</svg>',
    '',
  ].join('\n');
}

function markToSvg(mark: Mark, palette: Palette): string {
  const colour = (tone: Tone | null): string | null => (tone === null ? null : palette[tone]);
  const dash = 'dash' in mark && mark.dash !== undefined ? ` stroke-dasharray="${mark.dash.join(' ')}"` : '';
  switch (mark.kind) {
    case 'line': {
      const stroke = colour(mark.stroke);
      if (stroke === null) return '';
      return `<line x1="${n(mark.x1)}" y1="${n(mark.y1)}" x2="${n(mark.x2)}" y2="${n(mark.y2)}" stroke="${stroke}" stroke-width="${n(mark.width)}"${dash}/>`;
    }
    case 'path':
      return `<path d="${pathData(mark.steps)}" fill="${colour(mark.fill) ?? 'none'}"${strokeText(colour(mark.stroke), mark.width)}${dash}/>`;
    case 'round':
      return `<rect x="${n(mark.x - mark.halfWidth)}" y="${n(mark.y - mark.radius)}" width="${n(2 * mark.halfWidth)}" height="${n(2 * mark.radius)}" rx="${n(mark.radius)}" fill="${colour(mark.fill) ?? 'none'}"${strokeText(colour(mark.stroke), mark.width)}/>`;
    case 'text':
      return textToSvg(mark, colour(mark.fill) ?? palette.ink!);
  }
}

function strokeText(stroke: string | null, width: number): string {
  return stroke === null ? '' : ` stroke="${stroke}" stroke-width="${n(width)}"`;
}

function textToSvg(mark: TextMark, fill: string): string {
  let raised = 0;
  const runs = mark.runs.map(({ text, level }) => {
    const shift = level === 'low' ? LOW_SHIFT * mark.size : level === 'high' ? -HIGH_SHIFT * mark.size : 0;
    const dy = shift - raised;
    raised = shift;
    const size = level === undefined ? '' : ` font-size="${n(SCRIPT_SIZE * mark.size)}"`;
    return dy === 0 && size === '' ? escape(text) : `<tspan${size} dy="${n(dy)}">${escape(text)}</tspan>`;
  });
  const tip = mark.tip === undefined ? '' : `<title>${escape(mark.tip)}</title>`;
  return `<text x="${n(mark.x)}" y="${n(mark.y)}" font-size="${n(mark.size)}" font-weight="${mark.weight}" text-anchor="${mark.anchor}" fill="${fill}">${tip}${runs.join('')}</text>`;
}

function escape(text: string): string {
  return text.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;').replaceAll('"', '&quot;');
}
