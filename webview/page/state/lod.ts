/** How a surface that faces the camera is looked at. */
export interface Outlook {
  /** Texels of level 0 per meter of surface. */
  readonly texelsPerMeter: number;
  /** Vertical field of view in degrees. */
  readonly fovY: number;
  /** Pixels. */
  readonly screenHeight: number;
}

/** Level of detail at a distance in meters: the logarithm of the texels that one pixel steps over. Below 0 the texture is
 *  magnified. No bias, no anisotropy.  [Vulkan, LOD Operation, with m_x = m_y = rho] */
export function lodAt(distance: number, outlook: Outlook): number {
  return Math.log2(distance * texelsPerPixelMeter(outlook));
}

/** The distance in meters at which a surface is seen at a level of detail. */
export function distanceOf(lod: number, outlook: Outlook): number {
  return 2 ** lod / texelsPerPixelMeter(outlook);
}

/** Level of detail of `texels` spread over `pixels`.  [Vulkan, Scale Factor Operation] */
export function lodOfRatio(texels: number, pixels: number): number {
  return Math.log2(texels / pixels);
}

/** Texels that a pixel steps over, for each meter of distance: a screen of height H shows 2 d tan(fov / 2) meters. */
function texelsPerPixelMeter({ texelsPerMeter, fovY, screenHeight }: Outlook): number {
  return (texelsPerMeter * 2 * Math.tan((fovY * Math.PI) / 360)) / screenHeight;
}
