'use client';

import { useState } from 'react';
import { Field } from '@/components/ui/field';

interface SearchFieldProps {
  label: string;
  value: string;
  /** Called half a second after the last key, or at once with Enter. */
  onSearch: (text: string) => void;
}

const WAIT_MS = 500;

/** Narrows a list by words of the name. */
export function SearchField({ label, value, onSearch }: SearchFieldProps) {
  const [text, setText] = useState(value);
  const [timer, setTimer] = useState<ReturnType<typeof setTimeout>>();
  const search = (words: string, waitMs: number) => {
    clearTimeout(timer);
    setTimer(setTimeout(() => onSearch(words.trim()), waitMs));
  };
  return (
    <Field
      label={label}
      hideLabel
      placeholder={label}
      type="search"
      className="w-full hand:w-[240px]"
      value={text}
      onChange={(event) => {
        setText(event.target.value);
        search(event.target.value, WAIT_MS);
      }}
      onKeyDown={(event) => {
        if (event.key === 'Enter') search(text, 0);
      }}
    />
  );
}
