import type { ComponentType } from 'react';
import { createBrowserRouter, Navigate, Outlet, useLocation } from 'react-router-dom';
import { useSession } from '#client/api/session.ts';
import { Frame } from './frame.tsx';
import { PatientFrame } from './patient-frame.tsx';
import { ProblemPage } from './problem-page.tsx';

/** Loads a page when it is first opened; each feature is a chunk of its own, the patient's pages above all. */
function page<Module, Name extends keyof Module>(load: () => Promise<Module>, name: Name) {
  return async () => ({ Component: (await load())[name] as ComponentType });
}

/** Pages of the clinic are for those who are signed in; others are asked to, and come back. */
function SignedIn() {
  const { person } = useSession();
  const location = useLocation();
  if (!person)
    return <Navigate to={`/sign-in?to=${encodeURIComponent(location.pathname + location.search)}`} replace />;
  return <Outlet />;
}

export const router = createBrowserRouter([
  {
    errorElement: <ProblemPage />,
    hydrateFallbackElement: <p className="p-10 text-soft">Opening…</p>,
    children: [
      {
        path: '/sign-in',
        lazy: page(() => import('#client/features/sign-in/sign-in-page.tsx'), 'SignInPage'),
      },
      {
        path: '/set-password',
        lazy: page(() => import('#client/features/sign-in/set-password-page.tsx'), 'SetPasswordPage'),
      },
      {
        element: <PatientFrame />,
        children: [
          {
            path: '/q/:token',
            lazy: page(() => import('#client/features/portal/open-link-page.tsx'), 'OpenLinkPage'),
          },
          {
            path: '/my-quote',
            lazy: page(() => import('#client/features/portal/my-quote-page.tsx'), 'MyQuotePage'),
          },
        ],
      },
      {
        element: <SignedIn />,
        children: [
          {
            element: <Frame />,
            children: [
              { index: true, lazy: page(() => import('#client/features/today/today-page.tsx'), 'TodayPage') },
              {
                path: '/patients',
                lazy: page(() => import('#client/features/patients/patients-page.tsx'), 'PatientsPage'),
              },
              {
                path: '/patients/:patientId',
                lazy: page(() => import('#client/features/patients/patient-page.tsx'), 'PatientPage'),
              },
              {
                path: '/quotes',
                lazy: page(() => import('#client/features/quotes/quotes-page.tsx'), 'QuotesPage'),
              },
              {
                path: '/quotes/:quoteId',
                lazy: page(() => import('#client/features/quotes/quote-page.tsx'), 'QuotePage'),
              },
              {
                path: '/quotes/:quoteId/preview',
                lazy: page(() => import('#client/features/quotes/preview-page.tsx'), 'PreviewPage'),
              },
              {
                path: '/price-book',
                lazy: page(() => import('#client/features/price-book/price-book-page.tsx'), 'PriceBookPage'),
              },
              {
                path: '/courses/:courseId',
                lazy: page(() => import('#client/features/courses/course-page.tsx'), 'CoursePage'),
              },
              {
                path: '/courses/:courseId/pay',
                lazy: page(
                  () => import('#client/features/payments/take-payment-page.tsx'),
                  'TakePaymentPage',
                ),
              },
              {
                path: '/takings',
                lazy: page(() => import('#client/features/takings/takings-page.tsx'), 'TakingsPage'),
              },
              {
                path: '/takings/close',
                lazy: page(() => import('#client/features/takings/close-day-page.tsx'), 'CloseDayPage'),
              },
              {
                path: '/takings/receipts/:receiptId',
                lazy: page(() => import('#client/features/payments/receipt-page.tsx'), 'ReceiptPage'),
              },
              { path: '/bank', lazy: page(() => import('#client/features/bank/bank-page.tsx'), 'BankPage') },
              {
                path: '/bank/payouts/:payoutId',
                lazy: page(() => import('#client/features/bank/payout-page.tsx'), 'PayoutPage'),
              },
              { path: '/fees', lazy: page(() => import('#client/features/fees/fees-page.tsx'), 'FeesPage') },
              {
                path: '/proof',
                lazy: page(() => import('#client/features/proof/proof-page.tsx'), 'ProofPage'),
              },
              {
                path: '/proof/journal',
                lazy: page(() => import('#client/features/proof/journal-page.tsx'), 'JournalPage'),
              },
              {
                path: '/proof/trial-balance',
                lazy: page(() => import('#client/features/proof/trial-balance-page.tsx'), 'TrialBalancePage'),
              },
              {
                path: '/settings',
                lazy: page(() => import('#client/features/settings/settings-page.tsx'), 'SettingsPage'),
              },
            ],
          },
        ],
      },
      ...(import.meta.env.DEV
        ? [{ path: '/parts', lazy: page(() => import('./parts-page.tsx'), 'PartsPage') }]
        : []),
      { path: '*', element: <ProblemPage missing /> },
    ],
  },
]);
