/** The build that the service worker brings: its files by name with their SHA-256, and the SHA-256 over all; put in by the build. */
declare const BUILD: { id: string; program: string; files: Record<string, string> };
