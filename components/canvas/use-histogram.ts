'use client';

import { useQuery } from '@tanstack/react-query';
import { histogramOf, type CountRange } from './contrast';
import { loadFrame } from './frame-image';

const PICTURE_PX = 256;
const BINS = 64;

/** How often counts occur in one frame, over the range of the contrast thread. */
export function useHistogram(recordingId: string, frame: number, width: number, range: CountRange) {
  return useQuery({
    queryKey: ['histogram', recordingId, frame, range.least, range.most],
    staleTime: Infinity,
    queryFn: async ({ signal }) => {
      const request = {
        recordingId,
        low: range.least,
        high: range.most,
        width: width > PICTURE_PX ? PICTURE_PX : null,
      };
      const picture = await loadFrame(frame, request, signal);
      const canvas = new OffscreenCanvas(picture.width, picture.height);
      const ctx = canvas.getContext('2d', { willReadFrequently: true });
      if (!ctx) return [];
      ctx.drawImage(picture, 0, 0);
      picture.close();
      return histogramOf(ctx.getImageData(0, 0, canvas.width, canvas.height).data, BINS);
    },
  });
}
