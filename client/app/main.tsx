import { QueryClientProvider } from '@tanstack/react-query';
import { StrictMode, Suspense } from 'react';
import { createRoot } from 'react-dom/client';
import { RouterProvider } from 'react-router-dom';
import { createQueryClient } from '#client/api/query-client.ts';
import { AnnouncerProvider } from '#client/ui/announcer.tsx';
import { router } from './router.tsx';
import './styles.css';

const root = document.getElementById('root');
if (!root) throw new Error('The page has no root');
createRoot(root).render(
  <StrictMode>
    <QueryClientProvider client={createQueryClient()}>
      <AnnouncerProvider>
        <Suspense fallback={<p className="p-10 text-soft">Opening…</p>}>
          <RouterProvider router={router} />
        </Suspense>
      </AnnouncerProvider>
    </QueryClientProvider>
  </StrictMode>,
);
