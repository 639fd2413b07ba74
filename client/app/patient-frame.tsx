import { Outlet } from 'react-router-dom';

/** The patient's pages: paper, one narrow column, nothing of the clinic's own. */
export function PatientFrame() {
  return (
    <main id="content" className="mx-auto w-full max-w-xl px-5 py-8">
      <Outlet />
    </main>
  );
}
