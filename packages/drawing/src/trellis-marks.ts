/** Draws a trellis that has been placed: wires behind, then stems, edges, leaves and fruits, dots and weights in front. */
import { fruitSize } from './fruit.ts';
import { leafPath } from './leaf.ts';
import { grouped, numeral } from './numerals.ts';
import type { LineMark, Mark, Part, TextMark, TextRun, Tone } from './marks.ts';
import type { Trellis } from './trellis.ts';
import { radicalLabel } from './trellis-labels.ts';

type Placed = Omit<Trellis, 'marks'>;

/** How far a wire reaches beyond its first and last entry, as a part of the pitch. */
const REACH = 0.34;
const DOUBLE_GAP = 1.6;
/** Edges whose entry is negative. */
const NEGATIVE_DASH = [5, 4] as const;
const BARE_DASH = [1.5, 6] as const;

export function trellisMarks(trellis: Placed): Mark[] {
  return [
    ...wireMarks(trellis),
    ...stemMarks(trellis),
    ...edgeMarks(trellis),
    ...entryMarks(trellis),
    ...vertexMarks(trellis),
    ...radicalMarks(trellis),
  ];
}

function line(x1: number, y1: number, x2: number, y2: number, stroke: Tone, width: number, part: Part): LineMark {
  return { kind: 'line', x1, y1, x2, y2, stroke, width, part };
}

function text(
  x: number,
  y: number,
  runs: readonly TextRun[],
  part: Part,
  style: Pick<TextMark, 'size' | 'weight' | 'anchor' | 'fill'> & { readonly tip?: string | undefined },
): TextMark {
  const { tip, ...rest } = style;
  return { kind: 'text', x, y, runs, part, ...rest, ...(tip === undefined ? {} : { tip }) };
}

function wireMarks(t: Placed): Mark[] {
  const { size, wireStart, wireEnd } = t;
  const labelX = wireStart - 0.5 * size.font;
  const rightX = wireEnd + 0.5 * size.font;
  const label = { size: size.font, weight: 400, anchor: 'end', fill: 'soft' } as const;
  const marks: Mark[] = [];
  t.wires.forEach((wire, no) => {
    const part = (role: Part['role']): Part => ({ role, wire: no });
    const from = t.vertices[wire.entries[0]!.place]!.x - REACH * t.px;
    const to = t.vertices[wire.entries.at(-1)!.place]!.x + REACH * t.px;
    marks.push(line(wireStart, wire.y, wireEnd, wire.y, 'hair', 1, part('hair')));
    if (wire.columns.length === 1) marks.push(line(from, wire.y, to, wire.y, 'wire', size.wire, part('wire')));
    else
      for (const shift of [-DOUBLE_GAP, DOUBLE_GAP])
        marks.push(line(from, wire.y + shift, to, wire.y + shift, 'wire', 1.1, part('wire')));
    if (!t.labelled) return;
    const baseline = wire.y + 0.34 * size.font;
    marks.push(text(labelX, baseline, wire.label, part('label'), label));
    if (wire.columns.length > 1)
      marks.push(
        text(rightX, baseline, [{ text: `×${wire.columns.length}` }], part('count'), {
          ...label,
          weight: 600,
          anchor: 'start',
          fill: 'ink',
        }),
      );
  });
  if (t.bare > 0) {
    marks.push({ ...line(wireStart, t.bareY, wireEnd, t.bareY, 'wire', 1.3, { role: 'bare' }), dash: BARE_DASH });
    if (t.labelled)
      marks.push(
        text(
          rightX,
          t.bareY + 0.34 * size.font,
          [{ text: `${grouped(t.bare)} bare` }],
          { role: 'bare' },
          {
            ...label,
            size: 0.87 * size.font,
            anchor: 'start',
          },
        ),
      );
  }
  return marks;
}

function stemMarks(t: Placed): Mark[] {
  const { size } = t;
  return t.vertices.flatMap(({ x, lowest }, vertex) => {
    if (lowest >= 0)
      return [line(x, t.barY, x, t.wires[lowest]!.y, size.stemTone, size.stem, { role: 'stem', vertex })];
    const end = t.barY + 1.6 * size.font;
    return [
      line(x, t.barY, x, end, size.stemTone, size.stem, { role: 'stem', vertex }),
      line(x - 0.16 * t.px, end, x + 0.16 * t.px, end, size.stemTone, size.stem, { role: 'foot', vertex }),
    ];
  });
}

function edgeMarks(t: Placed): Mark[] {
  return t.edges.flatMap((edge, no): Mark[] => {
    const path: Mark = {
      kind: 'path',
      steps: edge.steps,
      fill: null,
      stroke: 'ink',
      width: t.size.name === 'fine' ? 1.3 : t.size.stem,
      ...(edge.value < 0 ? { dash: NEGATIVE_DASH } : {}),
      part: { role: 'edge', edge: no },
    };
    if (Math.abs(edge.value) === 1) return [path];
    const middle = (t.vertices[edge.from]!.x + t.vertices[edge.to]!.x) / 2;
    const { text: shown, tip } = numeral(edge.value);
    return [
      path,
      text(
        middle,
        edge.top - 0.3 * t.size.font,
        [{ text: shown }],
        { role: 'edge', edge: no },
        {
          size: 0.8 * t.size.font,
          weight: 400,
          anchor: 'middle',
          fill: 'soft',
          tip,
        },
      ),
    ];
  });
}

function entryMarks(t: Placed): Mark[] {
  const { size } = t;
  const marks: Mark[] = [];
  t.wires.forEach((wire, no) =>
    wire.entries.forEach(({ place, value }) => {
      const { x } = t.vertices[place]!;
      const hollow = value < 0n;
      const part = (role: Part['role']): Part => ({ role, wire: no, vertex: place });
      const fruit = fruitSize(size, value);
      if (fruit.radius === 0) {
        marks.push({
          kind: 'path',
          steps: leafPath(x, wire.y, size.leafLength, size.leafWidth, hollow ? -1 : 1),
          fill: hollow ? 'paper' : 'leaf',
          stroke: hollow ? 'leaf' : null,
          width: size.hollow,
          part: part('leaf'),
        });
        return;
      }
      marks.push({
        kind: 'round',
        x,
        y: wire.y,
        radius: fruit.radius,
        halfWidth: fruit.halfWidth,
        fill: hollow ? 'paper' : 'leaf',
        stroke: 'leaf',
        width: size.hollow,
        part: part('fruit'),
      });
      marks.push(
        text(x, wire.y + 0.35 * fruit.font, [{ text: fruit.text.text }], part('fruit'), {
          size: fruit.font,
          weight: 600,
          anchor: 'middle',
          fill: hollow ? 'leaf' : 'paper',
          tip: fruit.text.tip,
        }),
      );
    }),
  );
  return marks;
}

function vertexMarks(t: Placed): Mark[] {
  const { size } = t;
  const weight = { size: size.font, weight: 500, fill: 'ink' } as const;
  const marks: Mark[] = [];
  t.vertices.forEach(({ x, weight: shown }, vertex) => {
    marks.push({
      kind: 'round',
      x,
      y: t.barY,
      radius: size.dot,
      halfWidth: size.dot,
      fill: 'ink',
      stroke: null,
      width: 0,
      part: { role: 'dot', vertex },
    });
    if (t.labelled)
      marks.push(
        text(
          x + size.dot + 0.7,
          t.barY + 1.2 * size.font,
          [{ text: shown.text }],
          { role: 'weight', vertex },
          {
            ...weight,
            anchor: 'start',
            tip: shown.tip,
          },
        ),
      );
  });
  if (t.minusAtLeft)
    marks.push(
      text(
        t.wireStart - 0.5 * size.font,
        t.barY + 1.2 * size.font,
        [{ text: '−' }],
        { role: 'weight' },
        {
          ...weight,
          anchor: 'end',
        },
      ),
    );
  return marks;
}

function radicalMarks(t: Placed): Mark[] {
  if (t.radicalCount === 0) return [];
  const { size } = t;
  const part: Part = { role: 'radical' };
  const marks: Mark[] = [line(t.wireStart, t.radicalY, t.wireEnd, t.radicalY, 'ink', 1, part)];
  const rows = t.radical.length === 0 ? [null] : t.radical;
  rows.forEach((vector, no) => {
    const y = t.radicalY + (1.25 + 1.6 * no) * size.font;
    marks.push(
      text(t.wireStart - 0.5 * size.font, y, radicalLabel(t.radicalCount, vector === null), part, {
        size: 0.87 * size.font,
        weight: 400,
        anchor: 'end',
        fill: 'soft',
      }),
      text(t.wireEnd + 0.5 * size.font, y, [{ text: '→ 0' }], part, {
        size: size.font,
        weight: 400,
        anchor: 'start',
        fill: 'ink',
      }),
    );
    vector?.forEach(({ text: shown, tip }, vertex) =>
      marks.push(
        text(
          t.vertices[vertex]!.x,
          y,
          [{ text: shown === '0' ? '·' : shown }],
          { role: 'radical', vertex },
          {
            size: size.font,
            weight: shown === '0' ? 400 : 500,
            anchor: 'middle',
            fill: shown === '0' ? 'soft' : 'ink',
            tip,
          },
        ),
      ),
    );
  });
  return marks;
}
