import { Button } from '#client/ui/button.tsx';
import type { DraftDesk } from './use-draft.ts';

/** Somebody else saved this draft meanwhile: a person decides, nothing is written over by itself. */
export function SaveConflict({ desk }: { readonly desk: DraftDesk }) {
  return (
    <div role="alert" className="mb-6 border-y-2 border-bengal py-4">
      <p className="font-extrabold text-bengal">This draft was saved elsewhere meanwhile</p>
      <p className="mt-1 max-w-prose">
        What you typed is still on your screen and not saved. Take the newer draft in its place, or save yours
        over it.
      </p>
      <div className="mt-3 flex flex-wrap gap-3">
        <Button onPress={() => void desk.takeTheirs()}>Take the newer draft</Button>
        <Button kind="destructive" onPress={() => void desk.keepMine()}>
          Save mine over it
        </Button>
      </div>
    </div>
  );
}
