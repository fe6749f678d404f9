const CAPTION_PX = 40;
const SIDE_PX = 16;
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

/** The same as a PNG of twice as many points each way; rejects where the browser cannot draw it. */
export async function pngOf(svgText: string): Promise<Blob> {
  const image = new Image();
  image.src = `data:image/svg+xml;charset=utf-8,${encodeURIComponent(svgText)}`; // the page's policy lets no blob be an image
  await image.decode();
  const canvas = document.createElement('canvas');
  canvas.width = image.naturalWidth * 2;
  canvas.height = image.naturalHeight * 2;
  canvas.getContext('2d')?.drawImage(image, 0, 0, canvas.width, canvas.height);
  const blob = await new Promise<Blob | null>((resolve) => canvas.toBlob(resolve, 'image/png'));
  if (!blob) throw new Error('this browser made no picture of it');
  return blob;
}

function shape(name: string, attributes: Readonly<Record<string, string>>): SVGElement {
  const element = document.createElementNS(SVG, name);
  for (const [key, value] of Object.entries(attributes)) element.setAttribute(key, value);
  return element;
}
