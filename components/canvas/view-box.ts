/**
 * How an image lies in a well: screen = image * scale + offset, in CSS px. Image positions have the
 * centre of the top left pixel at (0, 0), so that pixel's corner is at (-0.5, -0.5).
 */
export interface ViewBox {
  scale: number;
  offsetX: number;
  offsetY: number;
}

export interface Size {
  width: number;
  height: number;
}

export interface Point {
  x: number;
  y: number;
}

/** A camera pixel is never drawn larger than this. */
export const SCALE_MAX = 64;
/** This much of the image always stays inside the well, so that it can't be lost. */
const KEEP_PX = 48;

/** The whole image as large as the well allows, in the middle. */
export function fitView(image: Size, well: Size): ViewBox {
  const scale = Math.min(well.width / image.width, well.height / image.height);
  return centred(image, well, scale > 0 && Number.isFinite(scale) ? scale : 1);
}

/** The image over the whole well, cut at the longer side: how a page opens. */
export function fillView(image: Size, well: Size): ViewBox {
  const scale = Math.max(well.width / image.width, well.height / image.height);
  return centred(image, well, scale > 0 && Number.isFinite(scale) ? scale : 1);
}

function centred(image: Size, well: Size, scale: number): ViewBox {
  return {
    scale,
    offsetX: (well.width - image.width * scale) / 2 + scale / 2,
    offsetY: (well.height - image.height * scale) / 2 + scale / 2,
  };
}

export const toScreen = (view: ViewBox, p: Point): Point => ({
  x: p.x * view.scale + view.offsetX,
  y: p.y * view.scale + view.offsetY,
});

export const toImage = (view: ViewBox, p: Point): Point => ({
  x: (p.x - view.offsetX) / view.scale,
  y: (p.y - view.offsetY) / view.scale,
});

/** Zooms about a point of the screen, which keeps showing the same place of the image. */
export function zoomAt(view: ViewBox, factor: number, at: Point, image: Size, well: Size): ViewBox {
  const least = Math.min(fitView(image, well).scale / 2, 1);
  const scale = Math.min(SCALE_MAX, Math.max(least, view.scale * factor));
  const fixed = toImage(view, at);
  return keepInside({ scale, offsetX: at.x - fixed.x * scale, offsetY: at.y - fixed.y * scale }, image, well);
}

/** Moves the image by a distance on the screen, CSS px. */
export function panBy(view: ViewBox, dx: number, dy: number, image: Size, well: Size): ViewBox {
  return keepInside({ ...view, offsetX: view.offsetX + dx, offsetY: view.offsetY + dy }, image, well);
}

/** Brings a place of the image into the middle of the well without changing the zoom. */
export function centreOn(view: ViewBox, place: Point, image: Size, well: Size): ViewBox {
  const offsetX = well.width / 2 - place.x * view.scale;
  const offsetY = well.height / 2 - place.y * view.scale;
  return keepInside({ ...view, offsetX, offsetY }, image, well);
}

function keepInside(view: ViewBox, image: Size, well: Size): ViewBox {
  const half = view.scale / 2;
  const keepX = Math.min(KEEP_PX, image.width * view.scale);
  const keepY = Math.min(KEEP_PX, image.height * view.scale);
  const clamp = (value: number, least: number, most: number) => Math.min(most, Math.max(least, value));
  return {
    scale: view.scale,
    offsetX: clamp(view.offsetX, half + keepX - image.width * view.scale, half + well.width - keepX),
    offsetY: clamp(view.offsetY, half + keepY - image.height * view.scale, half + well.height - keepY),
  };
}
