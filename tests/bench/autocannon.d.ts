declare module 'autocannon' {
  /** The little of it that the benchmark uses. */
  export default function autocannon(options: {
    url: string;
    headers?: Record<string, string>;
    connections: number;
    duration: number;
  }): Promise<{ requests: { average: number } }>;
}
