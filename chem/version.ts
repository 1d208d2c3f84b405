/** Changes whenever any result could change; part of the key under which results are kept. */
export const ENGINE_VERSION = "0.1.0";
