'use client';

import { useRef, type ComponentProps } from 'react';
import { Button } from '@/components/ui/button';
import { readInput, type Dropped } from './dropped-files';

const STACK_TYPES = '.tif,.tiff,.btf,.tf8,.ome.tif,.png,.zip,.npy,.h5,.hdf5,.nxs';

type ChooseButtonProps = Omit<ComponentProps<typeof Button>, 'onClick'> & {
  folder?: boolean;
  multiple?: boolean;
  onChosen: (dropped: Dropped) => void;
};

/** A button that opens the system's choice of files, or of one folder. */
export function ChooseButton({ folder = false, multiple = false, onChosen, ...button }: ChooseButtonProps) {
  const input = useRef<HTMLInputElement>(null);
  return (
    <>
      <input
        ref={input}
        type="file"
        hidden
        multiple={multiple}
        aria-label={typeof button.children === 'string' ? button.children : 'Files'}
        {...(folder ? { webkitdirectory: '' } : { accept: STACK_TYPES })}
        onChange={(event) => {
          if (event.target.files?.length) onChosen(readInput(event.target.files));
          // The same file must be choosable again after a refusal.
          event.target.value = '';
        }}
      />
      <Button {...button} onClick={() => input.current?.click()} />
    </>
  );
}
