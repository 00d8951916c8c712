import { extendZodWithOpenApi } from "@asteasolutions/zod-to-openapi";
import { z } from "zod";

// Must have run before the first schema exists.
extendZodWithOpenApi(z);

export { z };
