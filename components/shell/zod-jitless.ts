import { z } from 'zod';

// A content security policy without 'unsafe-eval' refuses the functions zod would otherwise compile.
// Imported before anything that makes a schema; `true` keeps bundlers from dropping the module.
z.config({ jitless: true });
export const zodIsJitless = true;
