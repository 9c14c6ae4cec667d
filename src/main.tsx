import './app/app.css';
import { StrictMode } from 'react';
import { createRoot } from 'react-dom/client';
import { App } from './app/app.tsx';
import { startColourSet } from './lib/colour-set.ts';

// Before the first picture, so that nothing flashes in another set.
startColourSet();

const root = document.getElementById('root');
if (!root) throw new Error('index.html has no #root');
createRoot(root).render(
	<StrictMode>
		<App />
	</StrictMode>,
);
