import { expect, test } from 'vitest';
import { loadSimdKernels } from '@/jobs/compute/load-kernels';
import { Arena } from '@/tracking/kernels/arena';
import type { SimdMemory } from '@/tracking/kernels/simd-exports';
import { createSimdKernels } from '@/tracking/kernels/simd-kernels';

const PAGE_BYTES = 65_536;

function pages(most: number): SimdMemory {
  return new WebAssembly.Memory({ initial: 0, maximum: most }) as SimdMemory;
}

test('pieces lie one after the other on multiples of 64, and the memory holds them all', () => {
  const memory = pages(10);
  const arena = new Arena(memory, 1000);
  const sizes = [1, 63, 64, 65, 100_000];
  const at = sizes.map((bytes) => arena.reserve(bytes));
  expect(arena.grow()).toBe(true);
  expect(at[0]).toBe(1024);
  at.forEach((address, i) => {
    expect(address % 64).toBe(0);
    if (i > 0) expect(address).toBeGreaterThanOrEqual(at[i - 1] + sizes[i - 1]);
    expect(() => arena.bytes(address, sizes[i])).not.toThrow();
  });
  expect(memory.buffer.byteLength).toBe(PAGE_BYTES * 2);
});

test('memory that is refused, or that 32-bit addresses end before, is told, not thrown', () => {
  const small = new Arena(pages(3), 0);
  small.reserve(4 * PAGE_BYTES);
  expect(small.grow()).toBe(false);
  const large = new Arena(pages(65_536), 0);
  large.reserve(2 ** 32);
  expect(large.grow()).toBe(false);
});

test('images that find no room in an instance are left to the plain kernels', () => {
  const instantiate = loadSimdKernels()!;
  const noRoom = () => {
    throw new RangeError('WebAssembly.Instance(): Out of memory');
  };
  const cramped = () => ({ ...instantiate(), memory: pages(1) });
  for (const make of [noRoom, cramped]) {
    const frame = createSimdKernels(make).forImages({ width: 100, height: 100, spotSigmaPx: 1.2 });
    expect(frame.compiled).toBeNull();
    frame.background.fill(10);
    frame.setFrame(new Float32Array(10_000).fill(120), {
      offsetCounts: 100,
      perCount: 0.5,
      saturationCounts: Infinity,
    });
    expect(frame.plain!.electrons.every((e) => e === 10)).toBe(true);
  }
});

test('a fault of the kernels themselves is not hidden', () => {
  const broken = () => {
    throw new TypeError('no such export');
  };
  const spec = { width: 10, height: 10, spotSigmaPx: 1.2 };
  expect(() => createSimdKernels(broken).forImages(spec)).toThrow('no such export');
});
