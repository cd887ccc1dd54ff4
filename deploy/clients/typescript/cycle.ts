// Asks a running dewmark for the cycle in duty.ts, by a client whose types openapi-typescript generates as schema.d.ts, and
// prints the answer. The compiler holds the request and every member used here against these types.
import createClient from "openapi-fetch";
import { duty } from "./duty.js";
import type { paths } from "./schema.js";

const client = createClient<paths>({ baseUrl: process.argv[2]! });

const { data, error, response } = await client.POST("/v1/cycles", { body: duty, signal: AbortSignal.timeout(10_000) });
if (data === undefined) {
  throw new Error(`${response.status}: ${JSON.stringify(error)}`);
}
console.error(`TypeScript: ${data.states.length} states, COP ${data.performance.cop_heating.toFixed(3)}`);

const refused = await client.POST("/v1/cycles", { body: { ...duty, evaporation: { temperature: 200 } } });
if (refused.error?.status !== 422 || refused.error.errors?.[0] === undefined) {
  throw new Error(`the refusal is not a problem document: ${JSON.stringify(refused.error)}`);
}

process.stdout.write(JSON.stringify(data));
