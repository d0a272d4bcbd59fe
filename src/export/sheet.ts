import { fontFamily } from './picture-text.js';

export interface Look {
  readonly fill?: string;
  readonly stroke?: string;
  readonly strokeWidth?: number;
  readonly round?: boolean;
  readonly opacity?: number;
  /** Lengths of a dash and of the gap after it. */
  readonly dashes?: readonly [dash: number, gap: number];
}

interface Writing {
  readonly size: number;
  readonly colour: string;
  readonly bold?: boolean;
  readonly align?: 'left' | 'center' | 'right';
  /** A rim of this colour around the letters, for text over lines. */
  readonly halo?: string;
}

// paper compares the style of each item with that of all its siblings: long rows of texts are cut into groups of this many.
const GROUP = 50;

/** One picture in whole user units, x to the right and y down. */
export interface Sheet {
  /** One path of any number of subpaths. */
  path(pathData: string, look: Look): void;
  /** The baseline of the text starts, has its middle or ends at the point. */
  text(content: string, x: number, y: number, writing: Writing): void;
  /** The SVG file. */
  finish(title: string, description: string): string;
}

/**
 * Opens a sheet: paper on a document of its own (of the browser, or of jsdom elsewhere).
 * @param width @param height in user units. @param widthPx nominal width.
 */
export async function openSheet(width: number, height: number, widthPx: number): Promise<Sheet> {
  const { default: paper } = await import('paper');
  // From here to `finish` nothing waits for anything: the scope that is active stays ours.
  const scope = new paper.PaperScope();
  scope.setup(new paper.Size(width, height));
  const layer = scope.project.activeLayer;
  let texts: paper.Group | undefined;
  let textStyle = '';

  const put = (item: paper.Item, { fill, stroke, strokeWidth, round, opacity, dashes }: Look) => {
    item.fillColor = fill === undefined ? null : new paper.Color(fill);
    item.strokeColor = stroke === undefined ? null : new paper.Color(stroke);
    if (strokeWidth !== undefined) item.strokeWidth = strokeWidth;
    if (round) {
      item.strokeCap = 'round';
      item.strokeJoin = 'round';
    }
    if (opacity !== undefined) item.opacity = opacity;
    if (dashes !== undefined) item.dashArray = [...dashes];
  };

  return {
    path(pathData, look) {
      if (pathData === '') return;
      const item = new paper.CompoundPath(pathData);
      put(item, look);
      layer.addChild(item);
      textStyle = '';
    },
    text(content, x, y, writing) {
      if (content === '') return;
      const { size, colour, bold = false, align = 'left', halo } = writing;
      const style = JSON.stringify(writing);
      if (texts === undefined || style !== textStyle || texts.children.length >= GROUP) {
        texts = new paper.Group();
        layer.addChild(texts);
        textStyle = style;
      }
      const group = texts;
      const write = (look: Look) => {
        const item = new paper.PointText({
          point: [x, y],
          content,
          fontFamily,
          fontSize: size,
          fontWeight: bold ? 'bold' : 'normal',
          justification: align,
        });
        put(item, look);
        group.addChild(item);
      };
      if (halo !== undefined) write({ fill: halo, stroke: halo, strokeWidth: Math.round(size / 4), round: true });
      write({ fill: colour });
    },
    finish(title, description) {
      const root = scope.project.exportSVG({ precision: 2 }) as SVGElement;
      scope.project.remove();
      return finished(root, { width, height, widthPx, title, description });
    },
  };
}

interface Facts {
  readonly width: number;
  readonly height: number;
  readonly widthPx: number;
  readonly title: string;
  readonly description: string;
}

const XMLNS = 'http://www.w3.org/2000/svg';
// What paper writes where items of a group differ or nothing is set; none of it is a value of that attribute.
const empty = new Map([
  ['font-family', 'none'],
  ['font-weight', 'none'],
  ['font-size', 'none'],
  ['text-anchor', 'none'],
  ['stroke-width', 'none'],
  ['stroke-linecap', 'none'],
  ['stroke-linejoin', 'none'],
  ['stroke-dasharray', ''],
  ['style', 'mix-blend-mode: normal'],
]);

function finished(root: SVGElement, { width, height, widthPx, title, description }: Facts): string {
  for (const node of [root, ...root.querySelectorAll('*')])
    for (const [name, value] of empty) if (node.getAttribute(name) === value) node.removeAttribute(name);
  root.setAttribute('viewBox', `0 0 ${width} ${height}`);
  root.setAttribute('width', String(widthPx));
  root.setAttribute('height', String(Math.round((widthPx * height) / width)));
  root.setAttribute('role', 'img');
  const { ownerDocument } = root;
  for (const [tag, content] of [
    ['desc', description],
    ['title', title],
  ] as const) {
    const node = ownerDocument.createElementNS(XMLNS, tag);
    node.textContent = content;
    root.insertBefore(node, root.firstChild);
  }
  const window = ownerDocument.defaultView;
  if (window === null) throw new Error('a picture needs a document with a window');
  // An attribute or a text never holds "><": the serialiser escapes both.
  return `${new window.XMLSerializer().serializeToString(root).replaceAll('><', '>\n<')}\n`;
}
