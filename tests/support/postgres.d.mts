export function startThrowaway(): Promise<{ url: string; stop: () => Promise<void> }>;
