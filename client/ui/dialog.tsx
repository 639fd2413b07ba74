import type { ReactNode } from 'react';
import { Dialog as AriaDialog, Heading, Modal, ModalOverlay } from 'react-aria-components';
import { Button } from './button.tsx';

export interface DialogProps {
  readonly title: string;
  readonly open: boolean;
  readonly onClose: () => void;
  readonly children: ReactNode;
}

/** A question over the page; Esc and the button leave it, focus goes back to where it was. */
export function Dialog({ title, open, onClose, children }: DialogProps) {
  return (
    <ModalOverlay
      isOpen={open}
      onOpenChange={(next) => (next ? undefined : onClose())}
      isDismissable
      className="fixed inset-0 z-30 flex items-start justify-center overflow-y-auto bg-ink/40 p-4 sm:p-10"
    >
      <Modal className="w-full max-w-xl border-2 border-ink bg-sheet">
        <AriaDialog className="p-6 outline-none">
          <Heading slot="title" className="text-lead font-extrabold">
            {title}
          </Heading>
          <div className="mt-4">{children}</div>
        </AriaDialog>
      </Modal>
    </ModalOverlay>
  );
}

export interface ConfirmDialogProps extends DialogProps {
  readonly confirm: string;
  readonly sending?: boolean;
  readonly destructive?: boolean;
  readonly error?: string | undefined;
  readonly onConfirm: () => void;
}

/** Says what will happen and asks once. */
export function ConfirmDialog({
  confirm,
  sending = false,
  destructive = false,
  error,
  onConfirm,
  children,
  ...dialog
}: ConfirmDialogProps) {
  return (
    <Dialog {...dialog}>
      {children}
      {error ? (
        <p role="alert" className="mt-4 font-semibold text-bengal">
          {error}
        </p>
      ) : null}
      <div className="mt-6 flex flex-wrap gap-3">
        <Button kind={destructive ? 'destructive' : 'primary'} sending={sending} onPress={onConfirm}>
          {confirm}
        </Button>
        <Button kind="quiet" onPress={dialog.onClose}>
          Leave it
        </Button>
      </div>
    </Dialog>
  );
}
