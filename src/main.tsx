import { StrictMode } from 'react';
import { createRoot } from 'react-dom/client';
import { z } from 'zod';
import '@fontsource-variable/nunito-sans/full.css';
import './assets/app.css';
import { App } from './app/App.tsx';
import { registerServiceWorker } from './lib/register-service-worker.ts';

// zod otherwise tries `new Function`, which the content policy refuses.
z.config({ jitless: true });

const root = document.getElementById('root');
if (!root) throw new Error('index.html has no #root');
createRoot(root).render(
  <StrictMode>
    <App />
  </StrictMode>,
);
registerServiceWorker();
