import { config } from 'zod';

// zod compiles its checks with `new Function` where it may. The page's content security policy forbids that, and even the question would be a violation.
config({ jitless: true });
