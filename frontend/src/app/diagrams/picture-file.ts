const CAPTION_PX = 40;
const SIDE_PX = 16;
const DENSITY = 2;
/** What leads from a mark to the table beside it: to nothing, where the drawing stands alone. */
const LEADERS = '.leader, .to-edge';
const SVG = 'http://www.w3.org/2000/svg';
const KEPT = [
  ...['fill', 'fill-opacity', 'stroke', 'stroke-width', 'stroke-dasharray', 'stroke-linejoin', 'stroke-linecap', 'opacity', 'paint-order'],
  ...['font-family', 'font-size', 'font-style', 'font-weight', 'letter-spacing', 'text-anchor'],
];

/**
 * A drawing of the page as a picture of its own: its styles as they are shown, on its ground, with a caption below. What was painted on a
 * canvas under it is taken in as an image.
 *
 * @param svg the drawing
 * @param canvas under it; without size where nothing is painted
 * @param caption lines below the drawing
 */
export function standaloneSvg(svg: SVGSVGElement, canvas: HTMLCanvasElement | undefined, caption: readonly string[]): string {
  const copy = svg.cloneNode(true);
  if (!(copy instanceof SVGSVGElement)) return '';
  const [from, to] = [[...svg.querySelectorAll('*')], [...copy.querySelectorAll('*')]];
  from.forEach((element, i) => {
    const style = getComputedStyle(element);
    const target = to[i];
    if (element.matches(LEADERS)) target?.remove();
    for (const name of KEPT) target?.setAttribute(name, style.getPropertyValue(name));
    for (const name of ['class', 'tabindex', 'role', 'aria-hidden', 'aria-label']) target?.removeAttribute(name);
  });
  const { width, height } = svg.getBoundingClientRect();
  const ground = getComputedStyle(document.body);
  const whole = document.createElementNS(SVG, 'svg');
  const size = { width: Math.round(width + 2 * SIDE_PX), height: Math.round(height + CAPTION_PX + SIDE_PX * caption.length) };
  whole.setAttribute('xmlns', SVG);
  whole.setAttribute('viewBox', `0 0 ${size.width} ${size.height}`);
  whole.setAttribute('width', String(size.width));
  whole.setAttribute('height', String(size.height));
  const page = shape('rect', { width: String(size.width), height: String(size.height), fill: ground.backgroundColor });
  const drawing = shape('g', { transform: `translate(${SIDE_PX} ${SIDE_PX / 2})` });
  if (canvas && canvas.width > 0) {
    const { offsetLeft, offsetTop, offsetWidth, offsetHeight } = canvas;
    const place = { x: String(offsetLeft), y: String(offsetTop), width: String(offsetWidth), height: String(offsetHeight) };
    drawing.append(shape('image', { ...place, href: canvas.toDataURL('image/png') }));
  }
  drawing.append(...copy.childNodes);
  whole.append(page, drawing);
  caption.forEach((line, i) => {
    const y = height + 28 + i * SIDE_PX;
    const text = shape('text', { x: String(SIDE_PX), y: String(y), fill: ground.color, 'font-family': 'sans-serif', 'font-size': '12' });
    text.textContent = line;
    whole.append(text);
  });
  return new XMLSerializer().serializeToString(whole);
}

/**
 * The same as a PNG of twice as many points each way. It is painted shape by shape, since the page's policy lets no image come from anywhere
 * but the server; rejects where the browser makes no picture of it.
 */
export async function pngOf(svg: SVGSVGElement, canvas: HTMLCanvasElement | undefined, caption: readonly string[]): Promise<Blob> {
  const { left, top, width, height } = svg.getBoundingClientRect();
  const page = document.createElement('canvas');
  page.width = (width + 2 * SIDE_PX) * DENSITY;
  page.height = (height + CAPTION_PX + SIDE_PX * caption.length) * DENSITY;
  const context = page.getContext('2d');
  if (!context) throw new Error('this browser paints no pictures');
  const ground = getComputedStyle(document.body);
  context.fillStyle = ground.backgroundColor;
  context.fillRect(0, 0, page.width, page.height);
  const home = new DOMMatrix().scale(DENSITY).translate(SIDE_PX, SIDE_PX / 2);
  context.setTransform(home);
  if (canvas && canvas.width > 0) context.drawImage(canvas, canvas.offsetLeft, canvas.offsetTop, canvas.offsetWidth, canvas.offsetHeight);
  for (const element of svg.querySelectorAll<SVGGraphicsElement>('path, circle, rect, text')) {
    if (element.closest('defs') || element.matches(LEADERS)) continue;
    context.save();
    clipTo(context, element, svg);
    const own = element.getScreenCTM();
    if (own) context.setTransform(home.translate(-left, -top).multiply(own));
    paintElement(context, element);
    context.restore();
  }
  context.setTransform(home);
  context.fillStyle = ground.color;
  context.font = '12px sans-serif';
  caption.forEach((line, i) => context.fillText(line, 0, height + 20 + i * SIDE_PX));
  const blob = await new Promise<Blob | null>((resolve) => page.toBlob(resolve, 'image/png'));
  if (!blob) throw new Error('this browser made no picture of it');
  return blob;
}

/** Keeps what a clipped group holds within its box. */
function clipTo(context: CanvasRenderingContext2D, element: Element, svg: SVGSVGElement): void {
  if (!element.closest('[clip-path]')) return;
  const box = svg.querySelector('clipPath rect');
  const [x = 0, y = 0, width = 0, height = 0] = ['x', 'y', 'width', 'height'].map((name) => Number(box?.getAttribute(name)));
  const path = new Path2D();
  path.rect(x, y, width, height);
  context.clip(path);
}

function paintElement(context: CanvasRenderingContext2D, element: SVGGraphicsElement): void {
  const style = getComputedStyle(element);
  const number = (name: string): number => Number(element.getAttribute(name) ?? 0);
  context.globalAlpha = Number(style.opacity);
  context.fillStyle = style.fill;
  context.strokeStyle = style.stroke;
  context.lineWidth = parseFloat(style.strokeWidth);
  context.lineJoin = 'round';
  context.setLineDash(style.strokeDasharray === 'none' ? [] : style.strokeDasharray.split(/[\s,]+/).map(parseFloat));
  if (element.tagName === 'text') {
    const text = element.textContent;
    context.font = `${style.fontStyle} ${style.fontWeight} ${style.fontSize} ${style.fontFamily}`;
    context.textAlign = style.textAnchor === 'middle' ? 'center' : style.textAnchor === 'end' ? 'right' : 'left';
    if (style.stroke !== 'none') context.strokeText(text, number('x'), number('y'));
    context.fillText(text, number('x'), number('y'));
    return;
  }
  const path = new Path2D(element.tagName === 'path' ? (element.getAttribute('d') ?? '') : '');
  if (element.tagName === 'circle') path.arc(number('cx'), number('cy'), number('r'), 0, 2 * Math.PI);
  if (element.tagName === 'rect') path.rect(number('x'), number('y'), number('width'), number('height'));
  if (style.fill !== 'none') context.fill(path);
  if (style.stroke !== 'none') context.stroke(path);
}

function shape(name: string, attributes: Readonly<Record<string, string>>): SVGElement {
  const element = document.createElementNS(SVG, name);
  for (const [key, value] of Object.entries(attributes)) element.setAttribute(key, value);
  return element;
}
