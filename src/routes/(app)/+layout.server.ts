import { guard } from '$lib/server/http/guard';
import type { LayoutServerLoadEvent } from './$types';

export const load = guard('register.read', (_event: LayoutServerLoadEvent, actor) => ({ actor }));
