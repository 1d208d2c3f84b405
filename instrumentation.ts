export async function register() {
  // A second file, or the build for the other runtime pulls the database in.
  if (process.env.NEXT_RUNTIME === "nodejs") {
    const { start } = await import("./instrumentation-node.ts");
    await start();
  }
}
