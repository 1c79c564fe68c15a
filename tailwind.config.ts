import type { Config } from 'tailwindcss';

/** Colours, type and spacing live as custom properties in `src/app/theme.css`, so that one switch of theme moves both. */
export default { content: ['./index.html', './src/**/*.{ts,tsx}'] } satisfies Config;
