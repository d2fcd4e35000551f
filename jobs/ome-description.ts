import type { Conditions } from '@/tracking/types';

/** OME metadata with the scale of a stack, for the description of its first page. */
export function omeDescription(
  { width, height, frames }: { width: number; height: number; frames: number },
  conditions: Pick<Conditions, 'pixelSize_m' | 'frameInterval_s'>,
): string {
  const pixelUm = Number((conditions.pixelSize_m * 1e6).toPrecision(9));
  return (
    '<?xml version="1.0" encoding="UTF-8"?>' +
    '<OME xmlns="http://www.openmicroscopy.org/Schemas/OME/2016-06"><Image ID="Image:0">' +
    `<Pixels ID="Pixels:0" DimensionOrder="XYCZT" Type="uint16" SizeX="${width}" SizeY="${height}" SizeC="1" SizeZ="1" SizeT="${frames}"` +
    ` PhysicalSizeX="${pixelUm}" PhysicalSizeXUnit="µm" PhysicalSizeY="${pixelUm}" PhysicalSizeYUnit="µm"` +
    ` TimeIncrement="${conditions.frameInterval_s}" TimeIncrementUnit="s"><TiffData/></Pixels></Image></OME>`
  );
}
