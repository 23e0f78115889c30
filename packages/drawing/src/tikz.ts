/** The same marks as TikZ, for a paper: ink on white, at most 16 cm wide, on its side where letters would get too small. */
import type { Drawing, Mark, PathStep, TextMark } from './marks.ts';
import { PRINT } from './palettes.ts';
import type { Fit } from './paper.ts';

export interface TikzOptions {
  /** Becomes a comment above the picture. */
  readonly title: string;
  readonly fit: Fit;
}

const n = (x: number): string => String(Math.round(x * 1000) / 1000);

/** @returns a `tikzpicture` that needs no library beyond TikZ itself */
export function drawingToTikz(drawing: Drawing, { title, fit }: TikzOptions): string {
  const pt = fit.pointsPerPixel;
  const at = (x: number, y: number) => `(${n(x * pt)},${n(-y * pt)})`;
  const context: Context = { at, pt };
  const body = drawing.marks.map((mark) => markToTikz(mark, context)).filter((line) => line !== '');
  return [
    ...title.split('\n').map((line) => `% ${line}`),
    `\\begin{tikzpicture}[x=1pt,y=1pt,line cap=round,line join=round${fit.turned ? ',rotate=90,transform shape' : ''}]`,
    ...body.map((line) => `  ${line}`),
    '\\end{tikzpicture}',
    '',
  ].join('\n');
}

interface Context {
  readonly at: (x: number, y: number) => string;
  readonly pt: number;
}

/** The print palette knows three inks. */
function ink(tone: keyof typeof PRINT): string | null {
  const colour = PRINT[tone];
  if (colour === null) return null;
  return { '#FFFFFF': 'white', '#B3B3B3': 'black!30' }[colour] ?? 'black';
}

function markToTikz(mark: Mark, context: Context): string {
  const { at, pt } = context;
  const dash =
    'dash' in mark && mark.dash !== undefined
      ? `,dash pattern=on ${n(mark.dash[0] * pt)}pt off ${n(mark.dash[1] * pt)}pt`
      : '';
  switch (mark.kind) {
    case 'line': {
      const stroke = ink(mark.stroke);
      if (stroke === null) return '';
      return `\\draw[${stroke},line width=${n(mark.width * pt)}pt${dash}] ${at(mark.x1, mark.y1)} -- ${at(mark.x2, mark.y2)};`;
    }
    case 'path':
      return `${command(mark, pt, dash)} ${pathToTikz(mark.steps, at)};`;
    case 'round': {
      const corner = `${at(mark.x - mark.halfWidth, mark.y - mark.radius)} rectangle ${at(mark.x + mark.halfWidth, mark.y + mark.radius)}`;
      const shape =
        mark.halfWidth > mark.radius
          ? `{[rounded corners=${n(mark.radius * pt)}pt] ${corner}}`
          : `${at(mark.x, mark.y)} circle[radius=${n(mark.radius * pt)}pt]`;
      return `${command(mark, pt, '')} ${shape};`;
    }
    case 'text':
      return textToTikz(mark, context);
  }
}

function command(mark: Extract<Mark, { kind: 'path' | 'round' }>, pt: number, dash: string): string {
  const fill = mark.fill === null ? null : ink(mark.fill);
  const stroke = mark.stroke === null ? null : ink(mark.stroke);
  const options = [
    ...(fill === null ? [] : [`fill=${fill}`]),
    ...(stroke === null ? [] : [`draw=${stroke}`, `line width=${n(mark.width * pt)}pt`]),
  ];
  return `\\path[${options.join(',')}${dash}]`;
}

function pathToTikz(steps: readonly PathStep[], at: Context['at']): string {
  return steps
    .map((step) => {
      switch (step[0]) {
        case 'M':
          return at(step[1], step[2]);
        case 'L':
          return `-- ${at(step[1], step[2])}`;
        case 'C':
          return `.. controls ${at(step[1], step[2])} and ${at(step[3], step[4])} .. ${at(step[5], step[6])}`;
        case 'Z':
          return '-- cycle';
      }
    })
    .join(' ');
}

const ANCHORS = { start: 'base west', middle: 'base', end: 'base east' } as const;

function textToTikz(mark: TextMark, { at, pt }: Context): string {
  const size = n(mark.size * pt);
  const font = `\\fontsize{${size}}{${size}}\\selectfont${mark.weight === 600 ? '\\boldmath' : ''}`;
  const options = [`anchor=${ANCHORS[mark.anchor]}`, 'inner sep=0pt', `font=${font}`];
  const fill = ink(mark.fill);
  if (fill !== 'black') options.push(`text=${fill}`);
  return `\\node[${options.join(',')}] at ${at(mark.x, mark.y)} {${textInTex(mark)}};`;
}

const SIGNS: Readonly<Record<string, string>> = {
  '−': '-',
  '…': '\\ldots ',
  '×': '\\times ',
  '→': '\\to ',
  '·': '\\cdot ',
  '\u202f': '\\,',
  ' ': '\\ ',
  '\\': '\\backslash ',
  '~': '{\\sim}',
  '^': '\\hat{\\ }',
};

/** Words are set upright, everything else is mathematics; what TeX takes for a command is escaped. */
function textInTex(mark: TextMark): string {
  const words = mark.runs.map(({ text, level }) => {
    const plain = text
      .replaceAll(/[A-Za-z]{2,}|[^]/gu, (token) =>
        token.length > 1 && /^[A-Za-z]/.test(token)
          ? `\\mathrm{${token}}`
          : (SIGNS[token] ?? token.replace(/[#$%&_{}]/, '\\$&')),
      )
      .trim();
    if (level === 'low') return `_{${plain}}`;
    return level === 'high' ? `^{${plain}}` : plain;
  });
  return `$${words.join('')}$`;
}
