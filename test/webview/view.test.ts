import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { decodeSrgb, encodeSrgb } from '../../core/color/transfer.ts';
import { eightBits, lampDirection } from '../../core/proof/screen.ts';
import { haloMark, type Meaning, type Picture } from '../../core/proof/want.ts';
import type { ChannelCount } from '../../core/raster/raster.ts';
import { type Rgb, rampAt } from '../../webview/page/prints/backdrop.ts';
import { fittingZoom, place, visibleSpan } from '../../webview/page/prints/frame.ts';
import { codeOfLight } from '../../webview/page/prints/texel.ts';
import { colorDistance, shaderOf, type View } from '../../webview/page/prints/view.ts';
import { printTrack, sectionCsv } from '../../webview/page/readings/section.ts';

const plain: Meaning = { transfer: 'srgb', color: true, alpha: null, premultiplied: false, normal: null };
const view: View = {
  show: 'color',
  metric: 'oklab',
  blend: 'linear',
  passing: 128,
  normalY: 'up',
  lamp: { x: 0, y: 0 },
};

function texels(channels: ChannelCount, codes: readonly number[], meaning: Partial<Meaning> = {}): Picture {
  const alpha = channels % 2 === 0 ? channels - 1 : null;
  return {
    extent: { width: codes.length / channels, height: 1 },
    channels,
    depth: 8,
    codes: Uint8Array.from(codes),
    meaning: { ...plain, alpha, ...meaning },
  };
}

function shade(picture: Picture, how: Partial<View> = {}, backdrop: Rgb = [0, 0, 0], reference: Picture | null = null) {
  const out = new Uint8ClampedArray(3);
  shaderOf({ ...view, ...how }, picture, reference)(0, backdrop, out);
  return [...out];
}

describe('opaque texels are shown code for code', () => {
  test.each([
    [texels(3, [1, 128, 254]), [1, 128, 254]],
    [texels(1, [77]), [77, 77, 77]],
    [texels(4, [9, 8, 7, 255]), [9, 8, 7]],
  ])('%#', (picture, codes) => {
    expect(shade(picture, {}, [200, 100, 50])).toEqual(codes);
  });

  test('16 bits are brought to 8 as PNG does', () => {
    expect([0, 128, 129, 257, 65535].map(eightBits)).toEqual([0, 0, 1, 1, 255]);
  });
});

test('half-covered texels blend in linear light or in codes, as asked', () => {
  const half = texels(4, [255, 255, 255, 128]);
  const linear = Math.round(encodeSrgb(128 / 255) * 255);
  expect(Math.abs(shade(half)[0] - linear)).toBeLessThanOrEqual(1);
  expect(shade(half, { blend: 'code' })).toEqual([128, 128, 128]);
  expect(shade(texels(4, [50, 60, 70, 0]), {}, [1, 2, 3])).toEqual([1, 2, 3]);
  expect(shade(texels(4, [50, 60, 70, 0], { premultiplied: true }), { blend: 'code' }, [1, 2, 3])).toEqual([
    51, 62, 73,
  ]);
});

test('color under alpha 0 is shown without alpha; a mask is tested, not blended', () => {
  const hidden = texels(4, [10, 20, 30, 0]);
  expect(shade(hidden, { show: 'bare' }, [255, 255, 255])).toEqual([10, 20, 30]);
  expect(shade(hidden, { show: 'a' })).toEqual([0, 0, 0]);
  expect(shade(texels(4, [10, 20, 30, 127]), { show: 'mask' }, [9, 9, 9])).toEqual([9, 9, 9]);
  expect(shade(texels(4, [10, 20, 30, 128]), { show: 'mask' }, [9, 9, 9])).toEqual([10, 20, 30]);
});

test('a surface that faces the lamp is lightest; green points where the treatment says', () => {
  const meaning: Partial<Meaning> = { transfer: 'linear', color: false, normal: { x: 0, y: 1, z: 2 } };
  const flat = texels(3, [128, 128, 255], meaning);
  const tilted = texels(3, [128, 218, 218], meaning);
  const above = { x: 0, y: 0.7 };
  expect(shade(flat, { show: 'lit' })[0]).toBeGreaterThan(shade(tilted, { show: 'lit' })[0]);
  expect(shade(tilted, { show: 'lit', lamp: above })[0]).toBeGreaterThan(shade(flat, { show: 'lit', lamp: above })[0]);
  expect(shade(tilted, { show: 'lit', lamp: above, normalY: 'down' })[0]).toBeLessThan(
    shade(flat, { show: 'lit', lamp: above })[0],
  );
  const { x, y, z } = lampDirection({ x: 3, y: 4 });
  expect(Math.hypot(x, y, z)).toBeCloseTo(1, 12);
});

test('equal texels differ by nothing, and hidden color does not count', () => {
  const one = texels(4, [10, 20, 30, 0, 200, 100, 50, 255]);
  const other = texels(4, [90, 80, 70, 0, 200, 100, 51, 255]);
  expect(colorDistance(one, other)(0)).toBe(0);
  expect(colorDistance(one, other)(1)).toBeGreaterThan(0);
  expect(colorDistance(one, one)(1)).toBe(0);
  expect(shade(one, { show: 'difference' }, [0, 0, 0], one)).toEqual([16, 18, 24]);
  expect(shade(texels(3, [30, 0, 0]), { show: 'difference', metric: 'r' }, [0, 0, 0], texels(3, [10, 0, 0]))).toEqual([
    255, 150, 40,
  ]);
});

test('the table of light is within a code of the exact rounding', () => {
  fc.assert(
    fc.property(fc.double({ min: 0, max: 1, noNaN: true }), (light) => {
      expect(Math.abs(codeOfLight(light) - encodeSrgb(light) * 255)).toBeLessThanOrEqual(1);
    }),
  );
  for (let code = 0; code < 256; code++)
    expect(Math.abs(codeOfLight(decodeSrgb(code / 255)) - code)).toBeLessThanOrEqual(1);
});

test('ramps begin and end with their colors', () => {
  const ramp: readonly Rgb[] = [
    [0, 0, 0],
    [100, 0, 0],
    [200, 100, 0],
  ];
  expect([-1, 0, 0.25, 1, 2].map((share) => rampAt(ramp, share))).toEqual([
    [0, 0, 0],
    [0, 0, 0],
    [50, 0, 0],
    [200, 100, 0],
    [200, 100, 0],
  ]);
});

describe('a frame', () => {
  const frame = { width: 100, height: 80 };

  test('fits by whole zooms', () => {
    expect(fittingZoom({ width: 16, height: 16 }, frame)).toBe(4);
    expect(fittingZoom({ width: 400, height: 16 }, frame)).toBe(1);
  });

  test('centers what fits and shows no void beside what does not', () => {
    expect(place({ width: 16, height: 16 }, frame, 4, { x: 0, y: 1 })).toEqual({ zoom: 4, left: 18, top: 8 });
    expect(place({ width: 100, height: 100 }, frame, 2, { x: 0, y: 1 })).toEqual({ zoom: 2, left: 0, top: -120 });
    expect(place({ width: 100, height: 100 }, frame, 2, { x: 0.5, y: 0.5 })).toEqual({ zoom: 2, left: -50, top: -60 });
  });

  test('shows every texel of which a part is seen', () => {
    expect(visibleSpan(-50, 8, 100, 0, 16)).toEqual({ first: 6, count: 10 });
    expect(visibleSpan(18, 4, 100, 0, 16)).toEqual({ first: 0, count: 16 });
    expect(visibleSpan(18, 4, 100, -16, 32)).toEqual({ first: -5, count: 26 });
    expect(visibleSpan(200, 4, 100, 0, 16).count).toBe(0);
  });
});

test('a section carries the marks of its channel alone, along its line', () => {
  const picture = texels(3, [...[1, 2, 3], ...[4, 5, 6], ...[7, 8, 9], ...[10, 11, 12]]);
  const marks = Uint16Array.of(0, haloMark({ above: 0b010, below: 0b100, clips: false }), 0, 0b110);
  const track = (letter: 'r' | 'g' | 'b', v: number) => {
    const print = { name: 'lanczos3', selected: true, picture: { ...picture, extent: { width: 2, height: 2 } }, marks };
    return printTrack(print, { from: [0, v], to: [1, v] }, letter);
  };
  expect(track('g', 0.25)).toMatchObject({ values: [2, 5], overshoots: [{ index: 1, side: 1 }] });
  expect(track('b', 0.25).overshoots).toEqual([{ index: 1, side: -1 }]);
  for (const each of [track('r', 0.25), track('g', 0.75)]) expect(each.overshoots).toEqual([]);
});

test('a section as text has the source’s mean under each texel', () => {
  const source = { name: 'source', values: [0, 0, 0, 0, 100, 100, 100, 100], selected: false, overshoots: [] };
  const print = { name: 'lanczos3', values: [-6, 0, 100, 107], selected: true, overshoots: [] };
  expect(sectionCsv({ source, prints: [print] })).toBe('texel,source,lanczos3\n0,0,-6\n1,0,0\n2,100,100\n3,100,107');
});
