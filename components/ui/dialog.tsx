'use client';

import { useEffect, useId, useRef, useState, type ReactNode } from 'react';
import { Button } from './button';

interface DialogProps {
  open: boolean;
  /** Called for Escape, the safe choice and a press outside: the dialog never closes itself. */
  onClose: () => void;
  title: ReactNode;
  children: ReactNode;
  /** Buttons at the foot, the safe choice first. */
  actions?: ReactNode;
}

/** A native dialog: focus stays inside, Escape is the safe choice, the page behind is still. */
export function Dialog({ open, onClose, title, children, actions }: DialogProps) {
  const element = useRef<HTMLDialogElement>(null);
  const titleId = useId();
  useEffect(() => {
    const dialog = element.current;
    if (!dialog) return;
    if (open && !dialog.open) dialog.showModal();
    if (!open && dialog.open) dialog.close();
  }, [open]);
  return (
    <dialog
      ref={element}
      aria-labelledby={titleId}
      onCancel={(event) => {
        event.preventDefault();
        onClose();
      }}
      onClick={(event) => {
        if (event.target === event.currentTarget) onClose();
      }}
      className="m-auto w-[420px] max-w-[calc(100vw-32px)] rounded-button border border-line bg-leaf p-0 text-ink shadow-lifted"
    >
      <div className="p-4">
        <h2 id={titleId} className="font-serif text-[18px] leading-6 font-title">
          {title}
        </h2>
        <div className="pt-1 pb-[10px] text-note">{open ? children : null}</div>
        {actions ? <div className="flex flex-wrap justify-end gap-2">{actions}</div> : null}
      </div>
    </dialog>
  );
}

interface ConfirmDialogProps {
  open: boolean;
  onClose: () => void;
  /** The act as a question: "Stop this analysis?" */
  question: string;
  /** What happens to the data, and what stays. */
  children: ReactNode;
  /** The safe choice in words: "Keep running". */
  keep: string;
  /** The act in words: "Stop it". */
  act: string;
  /** False where there is nothing to do after all: only the safe choice is offered. */
  actable?: boolean;
  /** Resolves when done; a thrown error is said in the dialog, which stays open. */
  onAct: () => Promise<void> | void;
}

/** Asks before something that can't be taken back. Danger isn't red: the words say what stays. */
export function ConfirmDialog(props: ConfirmDialogProps) {
  const { open, onClose, question, children, keep, act, actable = true, onAct } = props;
  const [busy, setBusy] = useState(false);
  const [problem, setProblem] = useState<string | null>(null);
  const close = () => {
    setProblem(null);
    onClose();
  };
  const run = async () => {
    setBusy(true);
    setProblem(null);
    try {
      await onAct();
      close();
    } catch (error) {
      setProblem(error instanceof Error ? error.message : 'That did not work. Try again.');
    } finally {
      setBusy(false);
    }
  };
  return (
    <Dialog
      open={open}
      onClose={close}
      title={question}
      actions={
        <>
          <Button onClick={close} autoFocus>
            {keep}
          </Button>
          {actable ? (
            <Button kind="main" busy={busy} onClick={run}>
              {act}
            </Button>
          ) : null}
        </>
      }
    >
      {children}
      {problem ? (
        <p role="alert" className="pt-2 font-strong text-red-text">
          {problem}
        </p>
      ) : null}
    </Dialog>
  );
}
