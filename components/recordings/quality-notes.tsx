'use client';

import { SpotsPlot } from '@/components/charts/spots-plot';
import { MarginNote } from '@/components/ui/margin-note';
import { Facts } from '@/components/ui/sheet';
import { formatBytes } from '@/lib/format/bytes';
import type { RecordingView } from '@/lib/views/recording-view';

/** A share as percent: enough digits to tell nothing from a little. */
export function shareText(share: number): string {
  if (share === 0) return 'none';
  const percent = share * 100;
  return percent < 0.01 ? 'under 0.01 %' : `${Number(percent.toPrecision(2))} %`;
}

const short = (value: number) => String(Number(value.toPrecision(3))).replace('-', '−');

/** A shift in words: where to, and how far. */
export function driftText({ x, y }: { x: number; y: number }): string {
  const across = `${short(Math.abs(x))} px ${x < 0 ? 'left' : 'right'}`;
  return `${across}, ${short(Math.abs(y))} px ${y < 0 ? 'up' : 'down'}`;
}

/** Image quality and facts of a stack, for the margin of its page. */
export function QualityNotes({ recording }: { recording: RecordingView }) {
  const { imageQuality, sha256, bytes, bitDepth, metadata } = recording;
  return (
    <>
      {imageQuality ? (
        <MarginNote title="Image quality">
          <Facts
            items={[
              { name: 'Noise', value: `${short(imageQuality.noiseCounts)} counts r.m.s.` },
              { name: 'Saturated', value: shareText(imageQuality.saturatedShare) },
              {
                name: 'Drift',
                value: imageQuality.driftPx
                  ? driftText(imageQuality.driftPx)
                  : 'can’t be told: too little stays in place',
              },
              { name: 'Contrast', value: `${short(imageQuality.low)} to ${short(imageQuality.high)} counts` },
            ]}
          />
          {imageQuality.brightness.meanCounts.length > 1 ? (
            <div className="pt-3">
              <BrightnessPlot brightness={imageQuality.brightness} />
            </div>
          ) : null}
        </MarginNote>
      ) : null}
      <MarginNote title="Stack">
        <Facts
          items={[
            {
              name: 'Size',
              value: `${recording.frames} frames, ${recording.width} × ${recording.height} px`,
            },
            { name: 'Depth', value: bitDepth === null ? 'not known' : `${bitDepth} bit` },
            { name: 'Bytes', value: formatBytes(bytes) },
            ...(metadata.pixelSize_m
              ? [{ name: 'Pixel', value: `${short(metadata.pixelSize_m * 1e6)} µm, says the file` }]
              : []),
            ...(metadata.frameInterval_s
              ? [{ name: 'Interval', value: `${short(metadata.frameInterval_s * 1e3)} ms, says the file` }]
              : []),
            ...(sha256
              ? [
                  {
                    name: 'SHA-256',
                    value: <span className="break-all text-small tabular-nums">{sha256}</span>,
                  },
                ]
              : []),
          ]}
        />
      </MarginNote>
    </>
  );
}

function BrightnessPlot({ brightness }: { brightness: { frame: number[]; meanCounts: number[] } }) {
  const { frame, meanCounts } = brightness;
  const stride = (frame[frame.length - 1] - frame[0]) / (frame.length - 1);
  const [least, most] = [Math.min(...meanCounts), Math.max(...meanCounts)];
  return (
    <SpotsPlot
      counts={meanCounts}
      stride={stride}
      name="mean counts"
      fileName="brightness"
      heightPx={140}
      label={`Mean brightness of the frames: ${short(least)} to ${short(most)} counts.`}
    />
  );
}
